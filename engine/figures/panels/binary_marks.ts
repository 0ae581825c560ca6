import {
  ballisticStream,
  type Binary,
  lobeOutlineVelocity,
  streamVelocities,
} from "../../binary/mod.ts";

/** Points of a curve in a velocity map, pairs [Vx, Vy], km/s. */
export type VelocityCurve = readonly (readonly [vx_kms: number, vy_kms: number])[];

/** Where the parts of a binary stand in its velocity map. */
export interface BinaryMarks {
  /** The centre of mass, (0, 0). */
  readonly centre_of_mass: readonly [vx_kms: number, vy_kms: number];
  /** The accretor, (0, −K1). */
  readonly accretor: readonly [vx_kms: number, vy_kms: number];
  /** The donor's centre, (0, +K2). */
  readonly donor: readonly [vx_kms: number, vy_kms: number];
  /** Surface of the lobe-filling donor in the orbital plane, closed. */
  readonly donor_lobe: VelocityCurve;
  /** The stream's own velocity, from L1 to its closest approach. */
  readonly stream: VelocityCurve;
  /** Keplerian velocity about the accretor at the same places, point for point. */
  readonly kepler_at_stream: VelocityCurve;
  /** Places of every tenth of the separation along the stream: index into both curves, with the radius. */
  readonly ticks: readonly { readonly index: number; readonly radius_over_a: number }[];
}

/**
 * Computes the marks of a binary for its velocity map: the donor's lobe, the ballistic stream and
 * the disc's velocity underneath it.
 *
 * @param binary The binary.
 * @returns Curves and points in map coordinates, km/s.
 * @throws {InputError} When the mass ratio is not in (0, 100].
 *
 * @example
 * ```ts
 * import { binaryFrom } from "@millrace/millrace/binary";
 * import { binaryMarks } from "@millrace/millrace/figures";
 * import { assertAlmostEquals } from "@std/assert";
 *
 * const marks = binaryMarks(binaryFrom({ k_accretor_kms: 80, k_donor_kms: 320 }));
 * assertAlmostEquals(marks.donor[1], 320, 1e-9);
 * assertAlmostEquals(marks.accretor[1], -80, 1e-9);
 * ```
 */
export function binaryMarks(
  binary: Pick<Binary, "mass_ratio" | "k_accretor_kms" | "k_donor_kms">,
): BinaryMarks {
  const lobe = lobeOutlineVelocity(binary, { points: 180 });
  const path = ballisticStream(binary.mass_ratio, { points: 120 });
  const gas = streamVelocities(path, binary);
  const radii = path.points.map((point) => point.radius_over_a);
  return {
    centre_of_mass: [0, 0],
    accretor: [0, -binary.k_accretor_kms],
    donor: [0, binary.k_donor_kms],
    donor_lobe: pairs(lobe.vx_kms, lobe.vy_kms),
    stream: pairs(gas.vx_kms, gas.vy_kms),
    kepler_at_stream: pairs(gas.keplerian_vx_kms, gas.keplerian_vy_kms),
    ticks: tenths(radii),
  };
}

function pairs(vx: Float64Array, vy: Float64Array): [number, number][] {
  return Array.from(vx, (value, i) => [value, vy[i]!]);
}

function tenths(radii: readonly number[]): { index: number; radius_over_a: number }[] {
  const ticks = [];
  for (let tenth = Math.floor(radii[0]! * 10); tenth / 10 > radii.at(-1)!; tenth--) {
    const index = radii.findIndex((radius) => radius <= tenth / 10);
    if (index >= 0) ticks.push({ index, radius_over_a: tenth / 10 });
  }
  return ticks;
}
