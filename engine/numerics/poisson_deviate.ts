import { InputError } from "../errors.ts";
import { lnPoisson } from "./poisson.ts";

function smallMean(mean: number, uniform: () => number): number {
  const floor = Math.exp(-mean);
  let count = -1;
  let product = 1;
  do {
    product *= uniform();
    count++;
  } while (product > floor);
  return count;
}

// Hörmann's transformed rejection with squeeze, PTRS (1993, Insurance: Mathematics and Economics
// 12, 39): exact for any mean of 10 or more.
function largeMean(mean: number, uniform: () => number): number {
  const b = 0.931 + 2.53 * Math.sqrt(mean);
  const a = -0.059 + 0.02483 * b;
  const inverseAlpha = 1.1239 + 1.1328 / (b - 3.4);
  const squeeze = 0.9277 - 3.6224 / (b - 2);
  while (true) {
    const u = uniform() - 0.5;
    const v = uniform();
    const us = 0.5 - Math.abs(u);
    const count = Math.floor((2 * a / us + b) * u + mean + 0.43);
    if (us >= 0.07 && v <= squeeze) return count;
    if (count < 0 || (us < 0.013 && v > us)) continue;
    if (Math.log(v * inverseAlpha / (a / (us * us) + b)) <= lnPoisson(count, mean)) return count;
  }
}

/** A Poisson deviate from uniform ones; see `RandomStream.poisson`. */
export function poissonDeviate(mean: number, uniform: () => number): number {
  if (!(mean >= 0 && mean < 2 ** 52)) {
    throw new InputError({
      action: "draw a Poisson deviate",
      rule: "mean must be from 0 to 2^52",
      value: mean,
    });
  }
  return mean < 10 ? smallMean(mean, uniform) : largeMean(mean, uniform);
}
