import { makeWhitening, weighingData } from "@millrace/millrace/weighing";
import { randomStream } from "@millrace/millrace/numerics";
import { assertAlmostEquals, assertEquals, assertLess } from "@std/assert";
import { inverse, Matrix } from "ml-matrix";
import { quick, rms } from "./made.ts";

const data = weighingData(quick({ parts: ["disc"] }, { exposures: 4, pixel_kms: 200 }));
const random = randomStream(3);
const draw = () => Float64Array.from(data.flux, () => random.normal());

Deno.test("makeWhitening() gives the quadratic form of the whole covariance when nuisances overlap", () => {
  const patterns = [draw(), draw()];
  const sigmas = [0.4, 1.3];
  const soft = patterns.map((pattern, k) => ({ pattern, sigma: sigmas[k]! }));
  const white = makeWhitening(data, { baseline_order: -1, soft });
  const values = draw();
  const got = white.apply(values).reduce((sum, value) => sum + value * value, 0);

  let expected = 0;
  for (let i = 0; i < data.sampling.count; i++) {
    const from = data.sampling.start[i]!, to = data.sampling.start[i + 1]!;
    const covariance = Matrix.zeros(to - from, to - from);
    for (let a = from; a < to; a++) {
      for (let b = from; b < to; b++) {
        const noise = a === b ? data.error[a]! ** 2 : 0;
        const shared = patterns.reduce(
          (sum, pattern, k) => sum + sigmas[k]! ** 2 * pattern[a]! * pattern[b]!,
          0,
        );
        covariance.set(a - from, b - from, noise + shared);
      }
    }
    const row = Matrix.rowVector(Array.from(values.subarray(from, to)));
    expected += row.mmul(inverse(covariance)).mmul(row.transpose()).get(0, 0);
  }
  assertAlmostEquals(got / expected, 1, 1e-9);
});

Deno.test("makeWhitening() leaves nothing of a baseline of its order when errors differ", () => {
  const line = data.sampling.velocity_kms.map((v) => 2 - v / 700);
  assertLess(rms(makeWhitening(data).apply(line)), 1e-10);
  const parabola = data.sampling.velocity_kms.map((v) => (v / 1000) ** 2);
  assertLess(rms(makeWhitening(data, { baseline_order: 2 }).apply(parabola)), 1e-9);
  // A line is not enough for a parabola.
  assertEquals(rms(makeWhitening(data).apply(parabola)) > 1, true);
});

Deno.test("makeWhitening() lets the baseline multiply the light when it is given", () => {
  const light = data.sampling.velocity_kms.map((v) => 1 + Math.exp(-0.5 * (v / 500) ** 2));
  const slope = data.sampling.velocity_kms.map((v, n) => light[n]! * (3 + v / 100));
  assertLess(rms(makeWhitening(data, { light }).apply(slope)), 1e-9);
  assertEquals(rms(makeWhitening(data).apply(slope)) > 1, true);
});

Deno.test("makeWhitening() counts what nuisances take when they are given freely or not at all", () => {
  const pattern = draw();
  const count = (sigma: number) =>
    makeWhitening(data, { baseline_order: 1, soft: [{ pattern, sigma }] }).parameters;
  assertEquals(count(0), 8); // two terms for each of four exposures
  assertAlmostEquals(count(1e6), 12, 1e-6);
});

Deno.test("makeWhitening() counts nothing for a pattern that the baseline explains", () => {
  const pattern = data.sampling.velocity_kms.map(() => 1);
  assertEquals(makeWhitening(data, { soft: [{ pattern, sigma: 1 }] }).parameters, 8);
});
