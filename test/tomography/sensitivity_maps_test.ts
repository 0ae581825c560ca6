import {
  assert,
  assertAlmostEquals,
  assertEquals,
  assertGreater,
  assertLess,
  assertThrows,
} from "@std/assert";
import { InputError } from "@millrace/millrace/errors";
import { maximumEntropy, sensitivityMaps } from "@millrace/millrace/tomography";
import { benchProblem } from "./bench_problem.ts";

const { trail, shape, truth } = benchProblem("small", { signal_to_noise: 30 });
const options = { ...shape, prior: { kind: "uniform" } } as const;
const found = maximumEntropy(trail, options);

/** Σ |∇f|: how rough an image is. */
function roughness(f: Float64Array): number {
  const n = shape.pixels;
  return f.reduce((sum, v, k) => k % n === 0 ? sum : sum + Math.abs(v - f[k - 1]!), 0);
}

Deno.test("sensitivityMaps() gives converged maps 5 % of chi-square to either side, the closer one rougher", () => {
  const before = found.map.intensity.slice();
  const { closer, looser, half_difference, warnings } = sensitivityMaps(trail, {
    ...options,
    found,
  });
  assertEquals(warnings, []);
  assertEquals(found.map.intensity, before);
  for (const [at, factor] of [[closer, 0.95], [looser, 1.05]] as const) {
    assert(at.reached);
    assertAlmostEquals(at.reduced_chi_square / found.reduced_chi_square, factor, 2e-3);
    // The same map as from the usual start, as far as its stopping rule fixes it.
    const cold = maximumEntropy(trail, { ...options, reduced_chi_square: at.goal });
    let off = 0, all = 0;
    cold.map.intensity.forEach((f, k) => {
      off += (f - at.map.intensity[k]!) ** 2;
      all += f * f;
    });
    assertLess(Math.sqrt(off / all), 0.05);
  }
  assertGreater(roughness(closer.map.intensity), roughness(found.map.intensity));
  assertLess(roughness(looser.map.intensity), roughness(found.map.intensity));
  half_difference.intensity.forEach((d, k) =>
    assertAlmostEquals(2 * d, closer.map.intensity[k]! - looser.map.intensity[k]!, 1e-12)
  );
  // The spot and disc are in both: what changes is small beside the map.
  const size = (f: Float64Array) => Math.sqrt(f.reduce((s, v) => s + v * v, 0));
  assertLess(size(half_difference.intensity), 0.2 * size(truth));
});

Deno.test("sensitivityMaps() warns where no map comes so close", () => {
  const { closer, warnings } = sensitivityMaps(trail, { ...options, found, change: 0.6 });
  assertEquals(closer.reached, false);
  assertGreater(closer.reduced_chi_square, 0.5 * found.reduced_chi_square);
  assertEquals(warnings.map((w) => w.code), ["sensitivity-out-of-reach"]);
});

Deno.test("sensitivityMaps() refuses a change that is none", () => {
  for (const change of [0, 1, NaN]) {
    assertThrows(() => sensitivityMaps(trail, { ...options, found, change }), InputError);
  }
});
