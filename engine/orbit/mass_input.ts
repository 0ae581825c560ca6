import { InputError } from "../errors.ts";

/** A number with its standard deviation. */
export interface MeasuredValue {
  /** The value. */
  readonly value: number;
  /** One standard deviation. */
  readonly error: number;
}

/** What is known of the inclination. */
export type InclinationKnowledge =
  | {
    /** Inclination, degrees, with a normal error. */
    readonly deg: MeasuredValue;
  }
  | {
    /** Inclinations that are possible, degrees; orbits are drawn evenly over directions. */
    readonly range_deg: readonly [low: number, high: number];
  }
  | {
    /** Full width of the eclipse of the accretor's centre, cycles. */
    readonly eclipse_width_cycles: MeasuredValue;
  };

/** What the masses are derived from. */
export interface MassInput {
  /** Period, d. */
  readonly period_d: MeasuredValue;
  /** K1, km/s; null when not measured. */
  readonly k_accretor_kms: MeasuredValue | null;
  /** K2 of the donor's centre of mass, km/s; null when not measured. */
  readonly k_donor_kms: MeasuredValue | null;
  /** v sin i of the donor, km/s; it gives q, or joins K1. @default {null} */
  readonly v_sin_i_kms?: MeasuredValue | null;
  /** Superhump period excess; it gives q, or joins the others. @default {null} */
  readonly superhump_excess?: MeasuredValue | null;
  /** Inclination; null when nothing is known. @default {null} */
  readonly inclination?: InclinationKnowledge | null;
  /** Eccentricity. @default {0} */
  readonly eccentricity?: number;
}

/**
 * Throws unless what the masses are derived from is possible.
 *
 * @param input What was measured.
 * @throws {InputError} Naming the key.
 *
 * @example
 * ```ts
 * import { requireMassInput } from "@millrace/millrace/orbit";
 * import { assertThrows } from "@std/assert";
 *
 * const input = {
 *   period_d: { value: -1, error: 0 }, k_accretor_kms: null, k_donor_kms: null,
 * };
 * assertThrows(() => requireMassInput(input), Error, "key period_d");
 * ```
 */
export function requireMassInput(input: MassInput): void {
  const { period_d, k_accretor_kms, k_donor_kms, v_sin_i_kms, superhump_excess } = input;
  const numbers = { period_d, k_accretor_kms, k_donor_kms, v_sin_i_kms, superhump_excess };
  for (const [key, measured] of Object.entries(numbers)) {
    if (!measured) continue;
    const { value: middle, error } = measured;
    if (middle > 0 && error >= 0 && Number.isFinite(middle) && Number.isFinite(error)) continue;
    throw new InputError({
      action: "derive masses",
      rule: `${key} must be positive with an error that is not negative`,
      value: [middle, error],
      key,
    });
  }
  const { inclination } = input;
  if (inclination && "range_deg" in inclination) {
    const [low, high] = inclination.range_deg;
    if (low > 0 && high > low && high <= 90) return;
    throw new InputError({
      action: "derive masses",
      rule: "the range of inclinations must rise within (0, 90] deg",
      value: inclination.range_deg,
      unit: "deg",
      key: "inclination_range_deg",
    });
  }
  if (inclination && "deg" in inclination) {
    const { value, error } = inclination.deg;
    if (value > 0 && value <= 90 && error >= 0) return;
    throw new InputError({
      action: "derive masses",
      rule: "inclination must be above 0 and at most 90 deg",
      value,
      unit: "deg",
      key: "inclination_deg",
    });
  }
}
