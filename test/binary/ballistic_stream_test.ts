import { assert, assertAlmostEquals, assertEquals, assertLess, assertThrows } from "@std/assert";
import { InputError } from "@millrace/millrace/errors";
import {
  ballisticStream,
  circularisationRadius,
  circularisationRadiusFromL1,
  closestApproach,
  keplerianSpeed,
  rimImpact,
  streamVelocities,
} from "@millrace/millrace/binary";
import { casesOf } from "./reference.ts";

// reference/stream.json: restricted three-body equations, DOP853 at 1e-13 (scipy); Lubow & Shu 1975
const cases = casesOf("stream");

Deno.test("ballisticStream() follows all reference paths", () => {
  for (const c of cases) {
    // deno-lint-ignore no-explicit-any
    const radii_over_a: number[] = c.path.map((row: any) => row.r);
    const stream = ballisticStream(c.q, { radii_over_a });
    assertEquals(stream.points.length, c.path.length, c.id);
    const start = stream.points[0]!.time_orbits;
    stream.points.forEach((point, k) => {
      const row = c.path[k];
      const where = `${c.id} r ${row.r}`;
      assertAlmostEquals(point.x, row.x, 1e-8, where);
      assertAlmostEquals(point.y, row.y, 1e-8, where);
      assertAlmostEquals(point.turning_vx, row.ux, 1e-8, where);
      assertAlmostEquals(point.turning_vy, row.uy, 1e-8, where);
      assertAlmostEquals(point.vx, row.Vx, 1e-8, where);
      assertAlmostEquals(point.vy, row.Vy, 1e-8, where);
      assertAlmostEquals(point.keplerian_vx, row.kep_Vx, 1e-8, where);
      assertAlmostEquals(point.keplerian_vy, row.kep_Vy, 1e-8, where);
      assertAlmostEquals(point.angular_momentum, row.h, 1e-8, where);
      assertAlmostEquals((point.time_orbits - start) * 2 * Math.PI, row.t, 1e-7, where);
    });
  }
});

Deno.test("ballisticStream() holds the Jacobi constant and starts on the unstable direction", () => {
  for (const c of cases) {
    const stream = ballisticStream(c.q);
    assertAlmostEquals(stream.jacobi, c.phi_L1, 1e-8, c.id);
    assertLess(stream.jacobi_drift, 1e-8, c.id);
    assertAlmostEquals(stream.launch_rate, c.manifold_rate_lambda, 1e-8, c.id);
    assertAlmostEquals(stream.launch_angle_deg, c.manifold_angle_from_minus_x_deg, 1e-8, c.id);
  }
});

Deno.test("closest approach and both circularisation radii are those of the reference", () => {
  for (const c of cases) {
    const stream = ballisticStream(c.q);
    assertAlmostEquals(stream.closest.radius_over_a / c.r_min, 1, 1e-7, c.id);
    assertAlmostEquals(closestApproach(c.q) / c.r_min, 1, 1e-7, c.id);
    const own = circularisationRadius(stream), textbook = circularisationRadiusFromL1(c.q);
    assertAlmostEquals(own / c.r_circ_from_h_at_closest, 1, 1e-7, c.id);
    assertAlmostEquals(textbook / c.r_circ_from_h_at_L1, 1, 1e-7, c.id);
    assert(textbook > 1.15 * own, "they are different quantities");
  }
});

Deno.test("ballisticStream() runs inwards from L1 to the closest approach in even steps", () => {
  const { points, closest } = ballisticStream(0.2, { points: 100 });
  assertEquals(points.length, 100);
  assertEquals(points.at(-1), closest);
  const steps: number[] = [];
  for (let k = 1; k < points.length; k++) {
    const before = points[k - 1]!, after = points[k]!;
    assertLess(after.radius_over_a, before.radius_over_a);
    steps.push(Math.hypot(after.x - before.x, after.y - before.y));
  }
  assertLess(Math.max(...steps) / Math.min(...steps), 5);
});

Deno.test("streamVelocities() scales with K1 + K2 and puts donor motion upwards", () => {
  const stream = ballisticStream(0.25, { points: 20 });
  const one = streamVelocities(stream, { mass_ratio: 0.25, k_accretor_kms: 80, k_donor_kms: 320 });
  const two = streamVelocities(stream, { mass_ratio: 0.25, k_accretor_kms: 160, k_donor_kms: 640 });
  stream.points.forEach((point, k) => {
    assertAlmostEquals(one.vx_kms[k]!, 400 * point.vx, 1e-9);
    assertAlmostEquals(two.vy_kms[k]!, 2 * one.vy_kms[k]!, 1e-9);
    assertAlmostEquals(two.keplerian_vx_kms[k]!, 2 * one.keplerian_vx_kms[k]!, 1e-9);
  });
  assert(one.vy_kms[0]! > 0 && one.vx_kms.at(-1)! < -300);
});

Deno.test("rimImpact() lies on rim, stream and Keplerian orbit", () => {
  const binary = { mass_ratio: 0.25, k_accretor_kms: 80, k_donor_kms: 320 };
  for (const radius of [0.15, 0.3, 0.45]) {
    const impact = rimImpact(radius, binary);
    assertAlmostEquals(Math.hypot(impact.place.x, impact.place.y), radius, 1e-10);
    const { keplerian } = impact;
    const about_accretor = Math.hypot(keplerian.vx_kms, keplerian.vy_kms + 80);
    assertAlmostEquals(about_accretor, keplerianSpeed(radius, binary), 1e-9);
    assert(impact.azimuth_deg > 0 && impact.azimuth_deg < 90, "ahead of the line of centres");
  }
});

Deno.test("ballisticStream() refuses radii that the stream does not cross", () => {
  assertThrows(
    () => rimImpact(0.01, { mass_ratio: 0.25, k_accretor_kms: 80, k_donor_kms: 320 }),
    InputError,
    "current value is 0.01 a",
  );
  assertThrows(() => ballisticStream(0.25, { radii_over_a: [0.9] }), InputError, "(L1)");
  assertThrows(() => ballisticStream(0.25, { radii_over_a: [NaN] }), InputError);
  assertThrows(() => ballisticStream(-1), InputError, "current value is -1");
  assertThrows(() => ballisticStream(0.25, { points: 1 }), InputError, "at least 2");
});
