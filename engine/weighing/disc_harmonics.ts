import { radialLight } from "../synthesis/mod.ts";
import { addRing, ringsBetween, type RingTable } from "./ring_table.ts";

/** A thin circular disc in velocity: all that its profile about the accretor depends on. */
export interface DiscInVelocity {
  /** Projected speed of rotation at the outer edge, km/s. */
  readonly rim_kms: number;
  /** Inner over outer radius. */
  readonly inner_over_outer: number;
  /** β of the emissivity r^−β. */
  readonly emissivity_index: number;
}

/**
 * Profiles of a disc whose surface brightness is 1, cos mθ or sin mθ, before blurring, on a grid of
 * velocity: means over bins of width `step_kms`, the first centred on zero.
 */
export interface DiscHarmonics {
  /** Width of a bin, km/s. */
  readonly step_kms: number;
  /** Share of light per km/s of the smooth disc; even in velocity. */
  readonly even0: Float64Array;
  /** The same weighted with sin ψ; odd. */
  readonly odd1: Float64Array;
  /** The same weighted with cos 2ψ; even. */
  readonly even2: Float64Array;
}

/**
 * The harmonics of a disc: its rings' profiles, weighted with their light.
 *
 * @param disc The disc.
 * @param table Profiles of rings.
 * @returns The harmonics, on the table's grid.
 */
export function discHarmonics(disc: DiscInVelocity, table: RingTable): DiscHarmonics {
  const { rim_kms, inner_over_outer, emissivity_index: beta } = disc;
  const { step_kms, bins, orders } = table;
  const harmonics = {
    step_kms,
    even0: new Float64Array(bins),
    odd1: new Float64Array(orders >= 1 ? bins : 0),
    even2: new Float64Array(orders >= 2 ? bins : 0),
  };
  const fastest = rim_kms / Math.sqrt(inner_over_outer);
  const scale = 2 / rim_kms / radialLight([inner_over_outer, 1], beta);
  for (const { ring, speed_kms, weight_kms } of ringsBetween(table, [rim_kms, fastest])) {
    // With r = u^−2 the light r^(1−β) dr is 2 u^(2β−5) du.
    addRing(harmonics, ring, scale * weight_kms * (speed_kms / rim_kms) ** (2 * beta - 5));
  }
  return harmonics;
}

/**
 * A harmonic blurred with a Gaussian, on the whole axis: values at (k − half) · step for k from 0 to
 * 2 half.
 */
export function blurHarmonic(
  values: Float64Array,
  { sigma_bins, odd }: { readonly sigma_bins: number; readonly odd: boolean },
): { readonly half: number; readonly values: Float64Array } {
  const reach = Math.ceil(5.5 * sigma_bins);
  const weights = Float64Array.from(
    { length: reach + 1 },
    (_, j) => Math.exp(-0.5 * (j / sigma_bins) ** 2),
  );
  const total = weights.reduce((sum, w, j) => sum + (j === 0 ? w : 2 * w), 0);
  for (let j = 0; j <= reach; j++) weights[j]! /= total;

  const inner = values.length - 1;
  const half = inner + reach;
  const blurred = new Float64Array(2 * half + 1);
  // The positive side of the kernel's output from both signs of the input.
  for (let k = -inner; k <= inner; k++) {
    const value = k < 0 ? (odd ? -values[-k]! : values[-k]!) : values[k]!;
    if (value === 0) continue;
    for (let j = Math.max(-reach, -k); j <= reach; j++) {
      blurred[half + k + j]! += value * weights[j < 0 ? -j : j]!;
    }
  }
  for (let k = 1; k <= half; k++) {
    blurred[half - k] = odd ? -blurred[half + k]! : blurred[half + k]!;
  }
  if (odd) blurred[half] = 0;
  return { half, values: blurred };
}
