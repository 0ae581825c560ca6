import {
  assert,
  assertAlmostEquals,
  assertEquals,
  assertNotEquals,
  assertThrows,
} from "@std/assert";
import { xoroshiro128plusFromState } from "pure-rand/generator/xoroshiro128plus";
import { InputError } from "@millrace/millrace/errors";
import {
  chiSquareTail,
  kolmogorovSmirnov,
  lnPoisson,
  randomStream,
} from "@millrace/millrace/numerics";

const draws = (seed: number, k: number) => {
  const stream = randomStream(seed, k);
  return Array.from({ length: 6 }, () => stream.uniform());
};

Deno.test("randomStream() repeats itself when seed and stream are the same", () => {
  assertEquals(draws(42, 5), draws(42, 5));
  assertNotEquals(draws(42, 5), draws(42, 6));
  assertNotEquals(draws(42, 5), draws(43, 5));
});

Deno.test("randomStream() tells seeds apart when they are large or differ in high bits only", () => {
  const seeds = [0, 1, -1, 2 ** 32, 2 ** 32 + 1, 2 ** 52, Number.MAX_SAFE_INTEGER, -(2 ** 40)];
  const firsts = new Set(seeds.map((seed) => draws(seed, 0).join()));
  assertEquals(firsts.size, seeds.length);
});

// Published value: SplitMix64 of seed 1234567 begins 6457827717110365317, 3203168211198807973
// (the usual test vector of that generator; from memory). The stream's state is made of these two words.
Deno.test("randomStream() starts from the SplitMix64 words when given a seed", () => {
  const words = [6457827717110365317n, 3203168211198807973n];
  const state = words.flatMap((word) => [
    Number(BigInt.asIntN(32, word >> 32n)),
    Number(BigInt.asIntN(32, word)),
  ]);
  const generator = xoroshiro128plusFromState(state);
  const expected = ((generator.next() >>> 5) * 2 ** 26 + (generator.next() >>> 6)) / 2 ** 53;
  assertEquals(randomStream(1234567).uniform(), expected);
});

Deno.test("randomStream() draws independent streams when k differs", () => {
  const n = 4000;
  for (const [a, b] of [[0, 1], [1, 2], [0, 1000]] as const) {
    const [first, second] = [randomStream(9, a), randomStream(9, b)];
    let sum = 0;
    for (let i = 0; i < n; i++) sum += first.normal() * second.normal();
    assert(Math.abs(sum / Math.sqrt(n)) < 4, `correlation of streams ${a} and ${b}`);
  }
});

Deno.test("uniform() is uniform and normal() normal when drawn often", () => {
  const stream = randomStream(11);
  assert(kolmogorovSmirnov(Array.from({ length: 20_000 }, stream.uniform)).probability > 0.001);
  const normal = Float64Array.from({ length: 200_000 }, () => stream.normal());
  const moment = (power: number) => normal.reduce((sum, z) => sum + z ** power, 0) / normal.length;
  // Standard errors of the first four moments at n = 200 000, times 4.
  assertAlmostEquals(moment(1), 0, 4 * Math.sqrt(1 / 2e5));
  assertAlmostEquals(moment(2), 1, 4 * Math.sqrt(2 / 2e5));
  assertAlmostEquals(moment(3), 0, 4 * Math.sqrt(15 / 2e5));
  assertAlmostEquals(moment(4), 3, 4 * Math.sqrt(96 / 2e5));
});

Deno.test("poisson() follows its distribution when the mean is small, at the switch, or large", () => {
  for (const mean of [0.3, 4, 9.99, 10, 35, 400]) {
    const stream = randomStream(17);
    const n = 200_000;
    const counts = new Map<number, number>();
    for (let i = 0; i < n; i++) {
      const drawn = stream.poisson(mean);
      counts.set(drawn, (counts.get(drawn) ?? 0) + 1);
    }
    let chiSquare = 0, bins = 0, restSeen = n, restExpected = n;
    for (let k = 0; k < mean + 20 * Math.sqrt(mean) + 20; k++) {
      const expected = n * Math.exp(lnPoisson(k, mean));
      if (expected < 10) continue;
      const seen = counts.get(k) ?? 0;
      chiSquare += (seen - expected) ** 2 / expected;
      restSeen -= seen;
      restExpected -= expected;
      bins++;
    }
    if (restExpected > 1) chiSquare += (restSeen - restExpected) ** 2 / restExpected;
    const p = chiSquareTail(chiSquare, bins);
    assert(p > 0.001 && p < 0.9999, `mean ${mean}: p = ${p}`);
  }
});

Deno.test("poisson() has mean and variance of its mean when that is huge", () => {
  const stream = randomStream(23);
  const mean = 1e9;
  const deviates = Array.from(
    { length: 4000 },
    () => (stream.poisson(mean) - mean) / Math.sqrt(mean),
  );
  const average = deviates.reduce((a, b) => a + b) / 4000;
  const square = deviates.reduce((a, b) => a + b * b) / 4000;
  assertAlmostEquals(average, 0, 4 / Math.sqrt(4000));
  assertAlmostEquals(square, 1, 4 * Math.sqrt(2 / 4000));
});

Deno.test("integer() is even and in range when n is no power of two", () => {
  const stream = randomStream(5);
  const counts = [0, 0, 0];
  for (let i = 0; i < 30_000; i++) counts[stream.integer(3)]!++;
  const chiSquare = counts.reduce((sum, seen) => sum + (seen - 1e4) ** 2 / 1e4, 0);
  assert(chiSquareTail(chiSquare, 2) > 0.001);
  assertEquals(stream.integer(1), 0);
});

Deno.test("shuffle() permutes a copy when given values", () => {
  const values = [1, 2, 3, 4, 5, 6, 7, 8];
  const shuffled = randomStream(1).shuffle(values);
  assertEquals(values, [1, 2, 3, 4, 5, 6, 7, 8]);
  assertNotEquals(shuffled, values);
  assertEquals(shuffled.slice().sort(), values);
  const firsts = [0, 0, 0];
  for (let k = 0; k < 3000; k++) firsts[randomStream(2, k % 50).shuffle([0, 1, 2])[0]!]!++;
  assert(firsts.every((count) => count > 0));
});

Deno.test("randomStream() names the rule when its input is wrong", () => {
  assertThrows(() => randomStream(0.5), InputError, "seed must be a whole number below 2^53");
  assertThrows(() => randomStream(2 ** 53), InputError, "seed must be");
  assertThrows(() => randomStream(1, -1), InputError, "stream number must be");
  assertThrows(() => randomStream(1).integer(0), InputError, "whole number from 1");
  assertThrows(() => randomStream(1).poisson(-1), InputError, "mean must be from 0");
  assertThrows(() => randomStream(1).poisson(NaN), InputError, "mean must be from 0");
  assertEquals(randomStream(1).poisson(0), 0);
});
