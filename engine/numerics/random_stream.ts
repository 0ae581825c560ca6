import { xoroshiro128plusFromState } from "pure-rand/generator/xoroshiro128plus";
import { InputError } from "../errors.ts";
import { poissonDeviate } from "./poisson_deviate.ts";

/** A seeded source of chance. Every draw moves it on; nothing else does. */
export interface RandomStream {
  /** Uniform in [0, 1), 53 bits. */
  uniform(): number;
  /** Normal with mean 0 and standard deviation 1 (Marsaglia's polar method). */
  normal(): number;
  /**
   * Whole number, uniform from 0 to n − 1.
   *
   * @param n How many values are possible: a whole number from 1 to 2^53.
   */
  integer(n: number): number;
  /**
   * Whole number from the Poisson distribution.
   *
   * @param mean Mean of the distribution, 0 or more.
   */
  poisson(mean: number): number;
  /**
   * A shuffled copy (Fisher–Yates); the argument is left as it is.
   *
   * @param values The values to shuffle.
   */
  shuffle<T>(values: ArrayLike<T>): T[];
}

// SplitMix64 (Steele, Lea & Flood 2014, OOPSLA): spreads a small seed over the 128 bits of state, as
// the generator's authors advise.
function spread(seed: number): number[] {
  let state = BigInt.asUintN(64, BigInt(seed));
  const words: number[] = [];
  for (let i = 0; i < 2; i++) {
    state = BigInt.asUintN(64, state + 0x9e3779b97f4a7c15n);
    let z = state;
    z = BigInt.asUintN(64, (z ^ (z >> 30n)) * 0xbf58476d1ce4e5b9n);
    z = BigInt.asUintN(64, (z ^ (z >> 27n)) * 0x94d049bb133111ebn);
    z ^= z >> 31n;
    words.push(Number(BigInt.asIntN(32, z >> 32n)), Number(BigInt.asIntN(32, z)));
  }
  return words;
}

/**
 * Stream k of a seed: xoroshiro128+ (Blackman & Vigna 2018, arXiv:1805.01407) moved on by k jumps of
 * 2^64 draws, so that streams never overlap. The same seed and k give the same draws everywhere.
 *
 * @param seed Whole number from −(2^53 − 1) to 2^53 − 1.
 * @param k Number of the stream, from 0; making stream k costs k jumps (a microsecond or so each).
 * @returns The stream, at its first draw.
 * @throws {InputError} When `seed` or `k` is not such a number.
 *
 * @example
 * ```ts
 * import { randomStream } from "@millrace/millrace/numerics";
 * import { assertEquals, assertNotEquals } from "@std/assert";
 *
 * assertEquals(randomStream(7, 3).uniform(), randomStream(7, 3).uniform());
 * assertNotEquals(randomStream(7, 3).uniform(), randomStream(7, 4).uniform());
 * ```
 */
export function randomStream(seed: number, k = 0): RandomStream {
  if (!Number.isSafeInteger(seed)) {
    throw new InputError({
      action: "start random stream",
      rule: "seed must be a whole number below 2^53",
      value: seed,
    });
  }
  if (!Number.isSafeInteger(k) || k < 0) {
    throw new InputError({
      action: "start random stream",
      rule: "stream number must be a whole number from 0",
      value: k,
    });
  }
  const generator = xoroshiro128plusFromState(spread(seed));
  for (let i = 0; i < k; i++) generator.jump();

  // The lowest bits of xoroshiro128+ are its weak ones: the high ones of each word are used.
  const uniform = () =>
    ((generator.next() >>> 5) * 0x4000000 + (generator.next() >>> 6)) / 0x20000000000000;

  let spare: number | undefined;
  const normal = () => {
    if (spare !== undefined) {
      const kept = spare;
      spare = undefined;
      return kept;
    }
    while (true) {
      const x = 2 * uniform() - 1;
      const y = 2 * uniform() - 1;
      const square = x * x + y * y;
      if (square === 0 || square >= 1) continue;
      const scale = Math.sqrt(-2 * Math.log(square) / square);
      spare = y * scale;
      return x * scale;
    }
  };

  const integer = (n: number) => {
    if (!Number.isSafeInteger(n) || n < 1) {
      throw new InputError({
        action: "draw a whole number",
        rule: "the count of values must be a whole number from 1",
        value: n,
      });
    }
    // Draws beyond the last whole multiple of n would favour small values.
    const limit = 0x20000000000000 - 0x20000000000000 % n;
    while (true) {
      const draw = uniform() * 0x20000000000000;
      if (draw < limit) return draw % n;
    }
  };

  return {
    uniform,
    normal,
    integer,
    poisson: (mean) => poissonDeviate(mean, uniform),
    shuffle: (values) => {
      const shuffled = Array.from(values);
      for (let i = shuffled.length - 1; i > 0; i--) {
        const j = integer(i + 1);
        [shuffled[i], shuffled[j]] = [shuffled[j]!, shuffled[i]!];
      }
      return shuffled;
    },
  };
}
