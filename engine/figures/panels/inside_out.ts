import type { BinaryMarks, VelocityCurve } from "./binary_marks.ts";

/**
 * Where a place of a map comes to lie when its speeds are turned inside out: speed V − v at the same
 * angle.
 *
 * @param place The place, km/s.
 * @param half_width_kms V, the half-width of the map, km/s.
 * @returns Its new place, km/s; not a number at rest, which has no angle, and beyond V.
 *
 * @example
 * ```ts
 * import { insideOutPlace } from "@millrace/millrace/figures";
 * import { assertEquals } from "@std/assert";
 *
 * assertEquals(insideOutPlace([-300, 400], 2000), [-900, 1200]);
 * ```
 */
export function insideOutPlace(
  [vx, vy]: readonly [vx_kms: number, vy_kms: number],
  half_width_kms: number,
): [vx_kms: number, vy_kms: number] {
  const speed = Math.hypot(vx, vy);
  const factor = speed > 0 && speed <= half_width_kms ? (half_width_kms - speed) / speed : NaN;
  return [vx * factor, vy * factor];
}

/**
 * The marks of a binary where they lie in a map turned inside out.
 *
 * @param marks The marks.
 * @param half_width_kms Half-width of the map, km/s.
 * @returns The turned marks.
 *
 * @example
 * ```ts
 * import { binaryFrom } from "@millrace/millrace/binary";
 * import { binaryMarks, insideOutMarks } from "@millrace/millrace/figures";
 * import { assertAlmostEquals } from "@std/assert";
 *
 * const marks = binaryMarks(binaryFrom({ k_accretor_kms: 80, k_donor_kms: 320 }));
 * assertAlmostEquals(insideOutMarks(marks, 2000).accretor[1], -1920, 1e-9);
 * ```
 */
export function insideOutMarks(marks: BinaryMarks, half_width_kms: number): BinaryMarks {
  const turned = (curve: VelocityCurve) =>
    curve.map((place) => insideOutPlace(place, half_width_kms));
  return {
    centre_of_mass: [NaN, NaN], // at rest: nowhere, or all along the rim
    accretor: insideOutPlace(marks.accretor, half_width_kms),
    donor: insideOutPlace(marks.donor, half_width_kms),
    donor_lobe: turned(marks.donor_lobe),
    stream: turned(marks.stream),
    kepler_at_stream: turned(marks.kepler_at_stream),
    ticks: marks.ticks,
  };
}
