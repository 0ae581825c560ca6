import { completeModel, type Model, synthesize } from "@millrace/millrace/synthesis";
import { simulateTrail } from "@millrace/millrace/weighing";
import { assert, assertEquals, assertLess, assertNotEquals } from "@std/assert";
import { discBasis, generalDiscBasis, thinDiscBasis } from "../../engine/weighing/disc_basis.ts";
import { binary } from "./made.ts";

const { sampling } = simulateTrail({ parts: ["disc"] }, {
  binary,
  exposures: 24,
  pixel_kms: 20,
  reach_kms: 2500,
});
const context = { sampling, binary, systemic_kms: 40, asymmetry: 2 } as const;

// The fast tables against the synthesis room: with 6 bins to a σ the light within a bin keeps its mean
// but not its spread, an error that goes as the square of the bin: 1e-3 of the peak.
const DISCS: readonly Model["disc"][] = [
  { inner_radius_over_a: 0.05, outer_radius_over_a: 0.3, emissivity_index: 1.5 },
  { inner_radius_over_a: 0.01, outer_radius_over_a: 0.5, emissivity_index: 2.2 },
  { inner_radius_over_a: 0.1, outer_radius_over_a: 0.22, emissivity_index: 0, turbulence_kms: 60 },
  { outer_radius_over_a: 0.4, keplerian_factor: 0.85 },
];

Deno.test("thinDiscBasis() agrees with the slow basis when the disc is thin and circular", () => {
  for (const disc of DISCS) {
    const model = completeModel({ parts: ["disc"], disc });
    const slow = generalDiscBasis(model, context);
    const fast = thinDiscBasis(model.disc, context);
    assertEquals(fast.length, 5);
    slow.forEach((trail, k) => {
      const peak = trail.reduce((most, value) => Math.max(most, Math.abs(value)), 0);
      const worst = trail.reduce(
        (most, value, n) => Math.max(most, Math.abs(value - fast[k]![n]!)),
        0,
      );
      assertLess(worst / peak, 1e-3);
      assertNotEquals(trail, fast[k]!); // two paths ran
    });
  }
});

Deno.test("discBasis() spans discs with patterns when their amplitudes are added", () => {
  const disc = {
    one_armed_amplitude: 0.3,
    one_armed_deg: 70,
    two_armed_amplitude: 0.2,
    two_armed_deg: 25,
  };
  const model: Model = { parts: ["disc"], disc: { ...disc, equivalent_width_kms: 1000 } };
  const whole = synthesize(model, context);
  const basis = discBasis(completeModel({ parts: ["disc"] }), context);
  const radians = Math.PI / 180;
  const amplitude = [
    1,
    0.3 * Math.cos(70 * radians),
    0.3 * Math.sin(70 * radians),
    0.2 * Math.cos(50 * radians),
    0.2 * Math.sin(50 * radians),
  ];
  const peak = Math.max(...whole);
  whole.forEach((value, n) => {
    const sum = basis.reduce((total, trail, k) => total + 1000 * amplitude[k]! * trail[n]!, 0);
    assertLess(Math.abs(sum - value) / peak, 1e-3);
  });
});

Deno.test("discBasis() takes the slow path when the disc is opaque or eclipsed", () => {
  const thick = completeModel({ parts: ["disc"], disc: { optical_depth: "thick" } });
  assertEquals(discBasis(thick, context), generalDiscBasis(thick, context));
  const hidden = completeModel({ parts: ["disc"], eclipse: { enabled: true } });
  const steep = { ...context, binary: { ...binary, inclination_deg: 85 } };
  const [eclipsed] = discBasis(hidden, steep);
  const [plain] = discBasis(completeModel({ parts: ["disc"] }), steep);
  assert(eclipsed!.some((value, n) => Math.abs(value - plain![n]!) > 1e-5));
});
