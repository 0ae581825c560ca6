import { InputError } from "@millrace/millrace/errors";
import {
  ballisticStream,
  rimImpact,
  streamVelocities,
  tidalRadius,
} from "@millrace/millrace/binary";
import { placeErrors, structureBands, structureProbabilities } from "@millrace/millrace/weighing";
import {
  assertAlmostEquals,
  assertEquals,
  assertGreater,
  assertLess,
  assertThrows,
} from "@std/assert";
import { binary } from "./made.ts";

const options = { binary, errors: {}, half_width_kms: 1200 } as const;
const tight = [100, 0, 100] as const;

Deno.test("structureProbabilities() names the structure when a source sits on it", () => {
  const { stream } = rimImpact(0.9 * tidalRadius(binary.mass_ratio)!, binary);
  const seats = [
    ["accretor", { vx_kms: 0, vy_kms: -70 }],
    ["donor-face", { vx_kms: 20, vy_kms: 220 }],
    ["none", { vx_kms: 700, vy_kms: 700 }],
  ] as const;
  for (const [name, place] of seats) {
    const found = structureProbabilities({ ...place, covariance: tight }, options);
    assertGreater(found[name], 0.8);
    assertAlmostEquals(Object.values(found).reduce((sum, p) => sum + p, 0), 1, 1e-12);
  }
  // At the stream's own velocity on the rim both are possible, and nothing else.
  const found = structureProbabilities({ ...stream, covariance: tight }, options);
  assertGreater(found["rim-impact"] + found.stream, 0.95);
});

Deno.test("structureProbabilities() spreads when K2 is poorly known", () => {
  const path = streamVelocities(ballisticStream(binary.mass_ratio, { points: 50 }), binary);
  const place = { vx_kms: path.vx_kms[30]!, vy_kms: path.vy_kms[30]!, covariance: tight };
  const sure = structureProbabilities(place, options);
  const unsure = structureProbabilities(place, { ...options, errors: { k_donor_kms: 80 } });
  assertLess(unsure.stream, sure.stream);
});

Deno.test("structureProbabilities() follows the prior when it is given", () => {
  const place = { vx_kms: 0, vy_kms: -70, covariance: tight };
  assertEquals(structureProbabilities(place, { ...options, prior: { accretor: 0 } }).accretor, 0);
});

Deno.test("structureProbabilities() refuses a covariance that is none", () => {
  const place = { vx_kms: 0, vy_kms: 0, covariance: [1, 2, 1] } as const;
  assertThrows(
    () => structureProbabilities(place, { ...options, width_kms: 0 }),
    InputError,
    "must be positive",
  );
});

Deno.test("placeErrors() is pulled by γ only when part of the orbit is missing", () => {
  const place = { vx_kms: 100, vy_kms: 200, covariance: [1, 0, 1] } as const;
  const whole = Array.from({ length: 40 }, (_, i) => i / 40);
  const errors = { systemic_kms: 10, rest_kms: 5 };
  assertAlmostEquals(placeErrors(place, { errors, phases: whole }).covariance[0], 1, 1e-9);
  const part = whole.filter((phase) => phase < 0.6);
  const pulled = placeErrors(place, { errors, phases: part });
  assertGreater(pulled.covariance[0] + pulled.covariance[2], 30);
  // A constant δ is fitted by (−cos, sin): exactly by least squares over the phases.
  assertEquals(place.covariance, [1, 0, 1]);
});

Deno.test("structureBands() grows with the errors, and is a line when there are none", () => {
  const exact = structureBands(binary, { errors: {}, draws: 3, points: 20 });
  for (const { covariance: [xx, , yy] } of exact.stream) assertAlmostEquals(xx + yy, 0, 1e-12);
  const turned = structureBands(binary, { errors: { phase: 0.01 }, draws: 400, points: 20 });
  // The donor's middle moves along the circle by 2π 0.01 times its speed; 400 draws: 3.5 % of the spread.
  const far = turned.donor.reduce((a, b) => b.vy_kms > a.vy_kms ? b : a);
  const expected = 2 * Math.PI * 0.01 * Math.hypot(far.vx_kms, far.vy_kms);
  assertAlmostEquals(Math.sqrt(far.covariance[0]) / expected, 1, 0.15);
  const tilted = structureBands(binary, { errors: { inclination_deg: 5 }, draws: 50, points: 20 });
  assertGreater(tilted.stream[0]!.covariance[2], 10);
});
