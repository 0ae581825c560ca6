import { type Binary, binaryFrom } from "../binary/mod.ts";
import { InputError } from "../errors.ts";
import type { Target } from "./target.ts";

const KEYS = [
  "k_accretor_kms",
  "k_donor_kms",
  "mass_ratio",
  "inclination_deg",
  "mass_accretor_msun",
  "mass_donor_msun",
  "separation_rsun",
] as const;

/**
 * The binary of a target file, as far as `[binary]` and the period determine it.
 *
 * @param target The target.
 * @returns The binary; null when `[binary]` says nothing that fixes the orbital speeds.
 * @throws {InputError} When the numbers contradict each other.
 */
export function binaryOf(target: Target): Binary | null {
  const { binary, orbit } = target.settings;
  const given = KEYS.filter((key) => binary[key] !== undefined);
  if (given.length < 2) return null;
  try {
    return binaryFrom({
      ...Object.fromEntries(given.map((key) => [key, binary[key]])),
      period_d: orbit.period_d,
      accretor: binary.accretor,
    });
  } catch (error) {
    if (!(error instanceof InputError)) throw error;
    const key = `binary.${error.key ?? given[0]}`;
    const place = target.places.get(key) ?? target.places.get("binary");
    throw new InputError({ ...error, file: target.file, line: place?.line, key });
  }
}
