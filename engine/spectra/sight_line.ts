import { InputError } from "../errors.ts";
import {
  addDays,
  type BarycentricMoment,
  type Direction,
  factorOfVelocity,
  midExposureBjd,
  type Site,
  type SplitDate,
  toTt,
  ttToTdb,
  velocityOfFactor,
} from "../sky/mod.ts";
import type { OneDecision } from "./decision.ts";
import { DIRECTION_KEYS, findDirection } from "./find_direction.ts";
import { findSite, SITE_KEYS } from "./find_site.ts";
import type { RecordedTime } from "./find_time.ts";
import { numberOf } from "./number_text.ts";
import type { ReadExposuresOptions } from "./read_options.ts";
import type { RecordedExposure } from "./recorded_exposure.ts";
import { sought } from "./sought.ts";

/** Where the observer stood and looked. */
export interface Sight {
  /** The site; null when it is not known. */
  readonly site: Site | null;
  /** The target; null when it is not known. */
  readonly target: Direction | null;
  /** What was decided. */
  readonly decisions: readonly OneDecision[];
}

/** Finds where the observer stood and looked; refuses when `needed` says what for and it is not there. */
export function sightOf(
  recorded: RecordedExposure,
  options: ReadExposuresOptions & { readonly needed: string | null },
): Sight {
  const { needed, keys = {} } = options;
  const site = sought(
    () => findSite(recorded.facts, { site: options.site, keys }),
    { what: "site", needed: needed !== null },
  );
  const target = sought(
    () => findDirection(recorded.facts, { target: options.target, keys }),
    { what: "target", needed: needed !== null },
  );
  const refuse = (what: string, tried: readonly string[], remedy: string) => {
    throw new InputError({
      action: "correct to the barycentre",
      rule: `${needed} needs ${what}; ${tried.join(", ")} were tried`,
      value: "none of them",
      file: recorded.file,
      remedy,
    });
  };
  if (needed !== null && target.found === null) {
    const tried = [...DIRECTION_KEYS.ra.slice(0, 5), ...DIRECTION_KEYS.dec.slice(0, 5)];
    refuse("the target's coordinates", tried, "state ra_deg and dec_deg under [sky]");
  }
  if (needed !== null && site.found === null) {
    const { latitude, longitude } = SITE_KEYS;
    const tried = ["OBSGEO-X", "OBSGEO-L", ...latitude.slice(0, 3), ...longitude.slice(0, 3)];
    refuse("the observatory's place", tried, "state site under [sky]");
  }
  return {
    site: site.found?.site ?? null,
    target: target.found?.target ?? null,
    decisions: [...site.decisions, ...target.decisions],
  };
}

/**
 * Factor that VELOSYS states, the speed of the observer against the frame of the wavelengths. Writers
 * differ in its sign, so the factor for the centre of the Earth, 0.47 km/s off at most, decides.
 */
export function statedFactor(recorded: RecordedExposure, rough: number): number | null {
  const stated = numberOf(recorded.facts.find("VELOSYS")?.text ?? "");
  if (stated === null) return null;
  const factors = [stated, -stated].map((v) => factorOfVelocity(v / 1000));
  return factors.find((f) => Math.abs(velocityOfFactor(f / rough)) < 0.6) ?? null;
}

const HALF: Readonly<Record<RecordedTime["mark"], number>> = { start: 0.5, mid: 0, end: -0.5 };

/** Mid-exposure in BJD(TDB), and the moment at the observatory where the target's direction is known. */
export function momentOf(
  time: RecordedTime,
  sight: Sight,
  exposure_s: number,
): { readonly mid: SplitDate; readonly moment: BarycentricMoment | null } {
  const { date, scale, place, mark: marks } = time;
  const moment = sight.target === null ? null : midExposureBjd(
    { date, scale, place, marks, exposure_s },
    { target: sight.target, site: sight.site },
  );
  if (place !== "barycentric") return { mid: moment!.bjd, moment };
  // A barycentric date needs no light time: only its scale, without the rounding of a way there and back.
  return { mid: addDays(ttToTdb(toTt(date, scale)), HALF[marks] * exposure_s / 86400), moment };
}
