import { SPEED_OF_LIGHT_KMS } from "../constants.ts";
import type { OneDecision } from "./decision.ts";
import type { Facts } from "./facts.ts";
import { firstRead, unreadNote } from "./first_read.ts";
import { numberOf } from "./number_text.ts";
import type { ReadExposuresOptions } from "./read_options.ts";

/** Keys looked up for a resolution. */
export const RESOLUTION_KEYS: readonly string[] = [
  "SPEC_RP",
  "SPECRP",
  "RESOLPOW",
  "SPEC_RES",
  "SPECRES",
  "RESOLUTN",
  "RESOLUT",
  "RESOLUTION",
];

/** A resolution and how it was found. */
export interface FoundResolution {
  /** Full width at half maximum at each pixel, Å. */
  readonly resolution_angstrom: Float64Array;
  /** What was decided. */
  readonly decision: OneDecision;
}

/**
 * Finds the instrumental resolution: what the user states, then keys in use. A stated number above
 * 200 without a unit is a resolving power, below it ångström.
 *
 * @param facts The facts of an exposure.
 * @param options What is stated, names of keys (`resolution`), and the wavelengths, Å.
 * @returns The full width at half maximum at each pixel; null when nothing says.
 * @throws {InputError} When one is there and is no positive number, with its value and key.
 *
 * @example
 * ```ts
 * import { findResolution, namedFacts } from "@millrace/millrace/spectra";
 * import { assertEquals } from "@std/assert";
 *
 * const wavelength_angstrom = Float64Array.of(5000, 6000);
 * const found = findResolution(namedFacts([["SPEC_RP", "5000"]]), { wavelength_angstrom })!;
 * assertEquals(found.resolution_angstrom, Float64Array.of(1, 1.2));
 * ```
 */
export function findResolution(
  facts: Facts,
  options:
    & Pick<
      ReadExposuresOptions,
      "resolution_angstrom" | "resolution_kms" | "resolving_power" | "keys"
    >
    & { readonly wavelength_angstrom: Float64Array },
): FoundResolution | null {
  const { wavelength_angstrom, resolution_angstrom, resolution_kms, resolving_power, keys = {} } =
    options;
  const say = (width: (w: number) => number, value: string, from: string, assumed = false) => ({
    resolution_angstrom: wavelength_angstrom.map(width),
    decision: { what: "resolution", value, from, assumed },
  });
  if (resolution_angstrom !== undefined) {
    return say(() => resolution_angstrom, `${resolution_angstrom} angstrom`, "resolution_angstrom");
  }
  if (resolution_kms !== undefined) {
    const ratio = resolution_kms / SPEED_OF_LIGHT_KMS.value;
    return say((w) => w * ratio, `${resolution_kms} km/s`, "resolution_kms");
  }
  if (resolving_power !== undefined) {
    return say((w) => w / resolving_power, `power ${resolving_power}`, "resolving_power");
  }
  const found = firstRead(facts, {
    keys: keys["resolution"] === undefined ? RESOLUTION_KEYS : [keys["resolution"]],
    read: (fact) => {
      const value = numberOf(fact.text);
      return value !== null && value > 0 ? value : null;
    },
    action: "read resolution",
    rule: "it must be a positive number",
  });
  if (found === null) return null;
  const { fact, value, unread } = found;
  const words = `${fact.key} ${fact.comment}`;
  const isWidth = /angstrom|\bA\b|fwhm/i.test(words);
  const isPower = !isWidth && (/power|RP\b|RP$/i.test(words) || value > 200);
  const from = `${fact.key}${unreadNote(unread)}`;
  if (isPower) return say((w) => w / value, `power ${value}`, from, !/power|RP/i.test(words));
  return say(() => value, `${value} angstrom`, from, !isWidth);
}
