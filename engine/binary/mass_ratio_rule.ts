import { InputError } from "../errors.ts";

/**
 * Throws unless a mass ratio is one that the geometry can serve: above 0 and at most 100.
 *
 * @param mass_ratio q = M2/M1.
 * @param action What was being done, for the message.
 * @throws {InputError} When it is not a number in (0, 100].
 *
 * @example
 * ```ts
 * import { requireMassRatio } from "@millrace/millrace/binary";
 * import { assertThrows } from "@std/assert";
 *
 * assertThrows(() => requireMassRatio(-0.2, "draw lobe"), Error, "current value is -0.2");
 * ```
 */
export function requireMassRatio(mass_ratio: number, action: string): void {
  if (mass_ratio > 0 && mass_ratio <= 100) return;
  throw new InputError({
    action,
    rule: "mass ratio M2/M1 (donor over accretor) must be above 0 and at most 100",
    value: mass_ratio,
    key: "mass_ratio",
  });
}
