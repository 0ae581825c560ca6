import { radialLight } from "../synthesis/mod.ts";
import { type RingTable, ringWeights } from "./ring_table.ts";

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
 * Profiles of a disc whose surface brightness is 1, cos mθ or sin mθ, blurred with the Gaussian of
 * the table of rings, on its grid of velocity from zero on.
 */
export interface DiscHarmonics {
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
  const size = table.bins;
  const sums = {
    even0: new Float64Array(size),
    odd1: new Float64Array(table.orders >= 1 ? size : 0),
    even2: new Float64Array(table.orders >= 2 ? size : 0),
  };
  const fastest = rim_kms / Math.sqrt(inner_over_outer);
  // With r = u^−2 the light r^(1−β) dr is 2 u^(2β−5) du.
  const scale = 2 / rim_kms / radialLight([inner_over_outer, 1], beta);
  const light = (speed: number) => scale * (speed / rim_kms) ** (2 * beta - 5);
  for (const { ring, weight } of ringWeights(table, { from: rim_kms, to: fastest, light })) {
    addTo(sums.even0, ring.even0, weight);
    addTo(sums.odd1, ring.odd1, weight);
    addTo(sums.even2, ring.even2, weight);
  }
  return sums;
}

function addTo(sum: Float64Array, values: Float64Array, weight: number): void {
  for (let k = 0; k < values.length; k++) sum[k]! += weight * values[k]!;
}
