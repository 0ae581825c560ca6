import { randomStream } from "@millrace/millrace/numerics";
import {
  compareHypotheses,
  prepareProblem,
  simulateTrail,
  weighingData,
} from "@millrace/millrace/weighing";
import { assert, assertEquals } from "@std/assert";
import { loneSamples, withoutSamples } from "../../engine/weighing/lone_samples.ts";
import { binary, quick, spotted } from "./made.ts";

const trail = simulateTrail({ parts: ["disc"] }, { binary, exposures: 40, pixel_kms: 25 });
const data = weighingData(trail);
const PIXELS = 161;

function white(seed: number): Float64Array {
  const random = randomStream(seed);
  return data.flux.map(() => random.normal());
}

Deno.test("loneSamples() finds hits of one pixel, and nothing in noise", () => {
  // 6440 samples; beyond 6 standard deviations of a difference: 1 in 10⁷.
  for (let seed = 1; seed <= 5; seed++) assertEquals(loneSamples(white(seed), data), []);
  const residual = white(6);
  const hits = [0, 500, 1000, 3 * PIXELS - 1, 5000];
  for (const n of hits) residual[n] = 14;
  residual[2000] = -14;
  assertEquals(
    loneSamples(residual, data),
    [0, 3 * PIXELS - 1, 500, 1000, 2000, 5000].sort(
      (a, b) => a - b,
    ),
  );
  // All errors three times too small: still noise.
  assertEquals(loneSamples(white(7).map((value) => 3 * value), data), []);
});

Deno.test("loneSamples() leaves what is as wide as the instrument's profile", () => {
  const sigma = data.sampling.profile_sigma_kms[0]! / 25;
  for (let shift = 0; shift < 1; shift += 0.1) {
    const residual = white(11);
    for (let i = 2; i < 38; i++) {
      for (let m = -5; m <= 5; m++) {
        residual[i * PIXELS + 80 + m]! += 14 * Math.exp(-0.5 * ((m - shift) / sigma) ** 2);
      }
    }
    assertEquals(loneSamples(residual, data), []);
  }
});

Deno.test("withoutSamples() takes samples from their exposures and leaves its argument alone", () => {
  const before = structuredClone(data.sampling.start);
  const less = withoutSamples(data, [0, PIXELS - 1, PIXELS]);
  assertEquals(data.sampling.start, before);
  assertEquals([...less.sampling.start.subarray(0, 4)], [0, 159, 319, 480]);
  assertEquals(less.flux[0], data.flux[1]);
  assertEquals(less.sampling.velocity_kms[159], data.sampling.velocity_kms[PIXELS + 1]);
  assertEquals(less.error.length, data.error.length - 3);
});

Deno.test("prepareProblem() leaves hits on the line out, and the true set is adequate", () => {
  const sets = [["disc", "spot"]] as const;
  const clean = quick(spotted(0.1), { seed: 3, pixel_kms: 25 });
  const flux = clean.flux.slice();
  // On the flanks, 12 standard deviations: as a search before the fit may leave them.
  for (const n of [90, 1100, 2033, 3440]) flux[n]! += 12 * clean.error[n]!;
  const prepared = prepareProblem(weighingData({ ...clean, flux }), { binary }, { sets });
  assertEquals(prepared.lone_samples, 4);
  const [hypothesis] = compareHypotheses(prepared, sets).hypotheses;
  assert(hypothesis!.adequate);
  assertEquals(hypothesis!.sample_count, clean.flux.length - 4);
});
