import { assertAlmostEquals, assertEquals, assertThrows } from "@std/assert";
import { InputError } from "@millrace/millrace/errors";
import { fitOfMap, mapPeak } from "@millrace/millrace/tomography";
import { gaussianMap } from "./samplings.ts";

Deno.test("fitOfMap() leaves masked samples out and does not change its input", () => {
  const samples = { flux: Float64Array.of(1, 2, NaN), error: Float64Array.of(0.5, 1, Infinity) };
  const model = Float64Array.of(0, 4, 5);
  const fit = fitOfMap(samples, { model });
  assertEquals(fit.chi_square, 8);
  assertEquals(fit.sample_count, 2);
  assertEquals(fit.reduced_chi_square, 4);
  assertEquals(model, Float64Array.of(0, 4, 5));
});

Deno.test("fitOfMap() finds the scale of least chi-square", () => {
  const samples = { flux: Float64Array.of(1, 2, 2), error: Float64Array.of(1, 2, 1) };
  const model = Float64Array.of(1, 1, 1);
  const best = fitOfMap(samples, { model, scale: "fitted" });
  for (const step of [-1e-3, 1e-3]) {
    const near = fitOfMap(samples, { model, scale: best.scale + step });
    assertEquals(near.chi_square > best.chi_square, true);
  }
  assertEquals(fitOfMap(samples, { model: new Float64Array(3), scale: "fitted" }).scale, 0);
});

Deno.test("fitOfMap() refuses when an error is zero or all samples are masked", () => {
  const zero = assertThrows(
    () =>
      fitOfMap({ flux: Float64Array.of(1), error: Float64Array.of(0) }, {
        model: Float64Array.of(1),
      }),
    InputError,
  );
  assertEquals(
    zero.message,
    "Cannot compare map with data as errors must be positive (infinite where masked): current value is 0",
  );
  const none = assertThrows(
    () =>
      fitOfMap({ flux: Float64Array.of(1), error: Float64Array.of(Infinity) }, {
        model: Float64Array.of(1),
      }),
    InputError,
  );
  assertEquals(
    none.message,
    "Cannot compare map with data as at least one sample must be unmasked: current value is 0",
  );
});

Deno.test("mapPeak() finds a source between pixels", () => {
  const shape = { pixels: 101, half_width_kms: 500 };
  const intensity = gaussianMap(shape, [{ flux: 1, vx: 123, vy: -256, s1: 40, s2: 40 }]);
  const peak = mapPeak({ ...shape, intensity });
  // A parabola through three points 0.25 sigma apart is off by less than 1 % of a step.
  assertAlmostEquals(peak.vx_kms, 123, 0.1);
  assertAlmostEquals(peak.vy_kms, -256, 0.1);
  assertAlmostEquals(peak.intensity * 2 * Math.PI * 1600, 1, 1e-3);
});

Deno.test("mapPeak() keeps to the border when the brightest pixel is there", () => {
  const intensity = new Float64Array(25);
  intensity[0] = 1;
  assertEquals(mapPeak({ pixels: 5, half_width_kms: 2, intensity }), {
    vx_kms: -2,
    vy_kms: -2,
    intensity: 1,
  });
});
