import { InputError, type Warning } from "../errors.ts";
import { systemicByParity } from "../tomography/mod.ts";
import type { Trail } from "../trail/mod.ts";
import type { Target } from "./target.ts";

/** The systemic velocity that is taken out. */
export interface SystemicVelocity {
  /** km/s. */
  readonly kms: number;
  /** One standard deviation, km/s; null when not known. */
  readonly error_kms: number | null;
  /** Where it comes from. */
  readonly source: string;
  /** What a user should know. */
  readonly warnings: readonly Warning[];
}

/**
 * The systemic velocity of a target: stated, or searched in its first mapped line by the parity of
 * the profiles' moments (Helgason–Ludwig), which needs no map.
 *
 * @param target The target.
 * @param trail The trail to search in.
 * @returns The velocity with its error.
 * @throws {InputError} When it is to be searched and the data do not allow it.
 */
export async function systemicOf(
  target: Target,
  trail: () => Promise<Trail>,
): Promise<SystemicVelocity> {
  const { systemic_kms, systemic_error_kms } = target.settings.orbit;
  if (typeof systemic_kms === "number") {
    return {
      kms: systemic_kms,
      error_kms: systemic_error_kms ?? null,
      source: "target file",
      warnings: [],
    };
  }
  if (systemic_kms === undefined) {
    return {
      kms: 0,
      error_kms: null,
      source: "not given",
      warnings: [{
        code: "systemic-velocity-missing",
        text:
          'orbit.systemic_kms is not given: 0 km/s is taken, and a wrong one blurs the map; give it, or "search"',
      }],
    };
  }
  const searched = await trail();
  const { half_width_kms } = target.settings.map;
  const found = systemicByParity(searched, {
    systemic_kms: 0,
    half_range_kms: half_width_kms,
    continuum_error: searched.continuum_error,
  });
  if (found === null) {
    throw new InputError({
      action: "search the systemic velocity",
      rule: "the profiles must cover the orbit well enough for the parity of their moments",
      value: `${searched.sampling.count} exposures of ${searched.line.name}`,
      file: target.file,
      line: target.places.get("orbit.systemic_kms")?.line,
      key: "orbit.systemic_kms",
      remedy: "give it in km/s",
    });
  }
  return {
    kms: found.systemic_kms,
    error_kms: found.error_kms,
    source: `parity of the moments of ${searched.line.name}`,
    warnings: [{
      code: "systemic-velocity-searched",
      line: searched.line.name,
      text: `the systemic velocity was searched: ${found.systemic_kms.toFixed(1)} ± ${
        found.error_kms.toFixed(1)
      } km/s by the parity of the profiles' moments`,
    }],
  };
}
