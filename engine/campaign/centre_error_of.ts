import type { Binary } from "../binary/mod.ts";
import { InputError } from "../errors.ts";
import type { MapPlace } from "../tomography/mod.ts";
import { binaryOf } from "./binary_of.ts";
import type { Target } from "./target.ts";

/** What K1 can follow from, with the key of its error. */
const ERRORS = [
  ["k_donor_kms", "k_donor_error_kms"],
  ["mass_ratio", "mass_ratio_error"],
  ["inclination_deg", "inclination_error_deg"],
] as const;

/**
 * How well the centre of a map, (0, −K1), is known: the error of K1 as stated, or as it follows from those
 * of the numbers that K1 follows from. On a map that is turned by an unknown angle the centre is on a
 * circle of K1 about (0, 0), which is an error of K1/√2 along each axis.
 *
 * @param target The target.
 * @param options The binary, and whether the map's zero of phase is the donor's.
 * @returns One standard deviation along each axis, km/s; zero where nothing is stated.
 */
export function centreErrorOf(
  target: Target,
  options: { binary: Binary | null; placed: boolean },
): MapPlace {
  const { binary, placed } = options;
  if (binary === null) return { vx_kms: 0, vy_kms: 0 };
  if (!placed) {
    const each = binary.k_accretor_kms / Math.SQRT2;
    return { vx_kms: each, vy_kms: each };
  }
  const { settings } = target;
  const { k_accretor_kms, k_accretor_error_kms } = settings.binary;
  if (k_accretor_kms !== undefined) return { vx_kms: 0, vy_kms: k_accretor_error_kms ?? 0 };
  const moves = ERRORS.map(([key, error_key]) => {
    const value = settings.binary[key], error = settings.binary[error_key] ?? 0;
    if (value === undefined || error === 0) return 0;
    const at = (changed: number) => {
      try {
        const changedBinary = { ...settings.binary, [key]: changed };
        return binaryOf({ ...target, settings: { ...settings, binary: changedBinary } });
      } catch (cause) {
        // Numbers over and above those that fix K1 may contradict the changed one.
        if (!(cause instanceof InputError)) throw cause;
        return null;
      }
    };
    const low = at(value - error)?.k_accretor_kms ?? binary.k_accretor_kms;
    const high = at(value + error)?.k_accretor_kms ?? binary.k_accretor_kms;
    return Math.max(Math.abs(high - binary.k_accretor_kms), Math.abs(binary.k_accretor_kms - low));
  });
  return { vx_kms: 0, vy_kms: Math.hypot(...moves) };
}
