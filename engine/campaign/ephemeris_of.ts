import { type Ephemeris, phaseError } from "../binary/mod.ts";
import { InputError } from "../errors.ts";
import { heliocentricToBjd, type SplitDate } from "../sky/mod.ts";
import type { OrbitSettings } from "./schema/orbit_section.ts";
import { needed, type Target } from "./target.ts";

/**
 * Whether the zero of phase of a target file is heliocentric, so that the direction is needed.
 *
 * @param target The target.
 * @param orbit The table that holds the zero. @default `[orbit]`
 * @returns True when it is.
 */
export function hasHeliocentricZero(
  target: Target,
  orbit: Pick<OrbitSettings, "zero_bjd_tdb" | "zero_hjd_utc" | "zero_hjd_tt"> =
    target.settings.orbit,
): boolean {
  const { zero_bjd_tdb, zero_hjd_utc, zero_hjd_tt } = orbit;
  return zero_bjd_tdb === undefined && (zero_hjd_utc ?? zero_hjd_tt) !== undefined;
}

/**
 * The ephemeris of a target file, its zero brought to BJD(TDB).
 *
 * @param target The target.
 * @param options Where the target is, for a heliocentric zero.
 * @param options.direction ICRS direction; null when not known.
 * @param options.before Whether what was known before the exposures is meant: `[orbit.before]`, where
 * there is one. @default false
 * @returns The ephemeris.
 * @throws {InputError} When period or zero are missing, or a heliocentric zero has no direction.
 */
export function ephemerisOf(
  target: Target,
  options: { direction: { ra_deg: number; dec_deg: number } | null; before?: boolean },
): Ephemeris {
  const known = options.before ? target.settings.orbit.before : undefined;
  const orbit = known ?? target.settings.orbit;
  const section = known === undefined ? "orbit" : "orbit.before";
  const action = "fold the exposures on the orbit";
  if (orbit.period_d === undefined && orbit.period_range_d !== undefined) {
    const key = `${section}.period_range_d`;
    throw new InputError({
      action,
      rule: "orbit.period_d must be known: a range is searched by `orbit` alone",
      value: orbit.period_range_d,
      unit: "d",
      file: target.file,
      line: target.places.get(key)?.line,
      key,
      remedy:
        `run millrace orbit --refine ${target.file}, then go on with ${target.name}-refined.toml, which it writes`,
    });
  }
  const period_d = needed(target, { value: orbit.period_d, key: `${section}.period_d`, action });
  const written = needed(target, {
    value: orbit.zero_bjd_tdb ?? orbit.zero_hjd_utc ?? orbit.zero_hjd_tt,
    key: `${section}.zero_bjd_tdb (or zero_hjd_utc, zero_hjd_tt)`,
    action,
  });
  const date: SplitDate = [Math.floor(written), written - Math.floor(written)];
  let zero = date;
  if (hasHeliocentricZero(target, orbit)) {
    if (options.direction === null) {
      throw new InputError({
        action: "bring the heliocentric zero of phase to BJD(TDB)",
        rule: "the direction of the target must be known",
        file: target.file,
        key: "sky.ra_deg",
        remedy: "give sky.ra_deg and sky.dec_deg, or exposures whose headers do",
      });
    }
    zero = heliocentricToBjd(date, {
      scale: orbit.zero_hjd_utc === undefined ? "tt" : "utc",
      target: options.direction,
    });
  }
  const ephemeris: Ephemeris = {
    period_d,
    period_error_d: orbit.period_error_d ?? 0,
    zero,
    zero_error_d: orbit.zero_error_d ?? 0,
    covariance_d2: orbit.zero_period_covariance_d2,
    period_derivative: orbit.period_derivative,
    zero_marks: orbit.zero_marks,
  };
  try {
    phaseError(ephemeris, zero);
  } catch (error) {
    if (!(error instanceof InputError)) throw error;
    const key = `${section}.zero_period_covariance_d2`;
    throw new InputError({
      action: error.action,
      rule: error.rule,
      value: error.value,
      unit: error.unit,
      file: target.file,
      line: target.places.get(key)?.line,
      key,
    });
  }
  return ephemeris;
}
