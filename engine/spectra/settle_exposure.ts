import { InputError, type Warning } from "../errors.ts";
import { airToVacuum, type Direction } from "../sky/mod.ts";
import { inOrder } from "./check_axis.ts";
import type { OneDecision } from "./decision.ts";
import { EXPOSURE_KEYS, findDuration } from "./find_duration.ts";
import { findFrame, findMedium } from "./find_frame.ts";
import { findResolution } from "./find_resolution.ts";
import { requireTime } from "./find_time.ts";
import type { ReadExposuresOptions } from "./read_options.ts";
import type { RecordedExposure } from "./recorded_exposure.ts";
import { requireKeys } from "./require_keys.ts";
import { momentOf, sightOf, statedFactor } from "./sight_line.ts";
import { sought } from "./sought.ts";
import type { Spectrum } from "./spectrum.ts";

/** An exposure settled. */
export interface SettledExposure {
  /** The spectrum; `error` is empty when the file gave none. */
  readonly spectrum: Spectrum;
  /** Where the target is; null when it is not known. */
  readonly target: Direction | null;
  /** What was decided, from which key. */
  readonly decisions: readonly OneDecision[];
  /** What a user should know. */
  readonly warnings: readonly Warning[];
}

const F_NU = /\bm?jy\b|jansky|hz/i;

function durationOf(recorded: RecordedExposure, options: ReadExposuresOptions) {
  const duration = findDuration(recorded.facts, options.keys ?? {});
  if (duration === null) {
    throw new InputError({
      action: "read exposure time",
      rule: `the file or its log must give it; ${EXPOSURE_KEYS.join(", ")} were tried`,
      value: "none of them",
      file: recorded.file,
      remedy: "name the key by keys.exposure_s",
    });
  }
  if (!(duration.exposure_s > 0 && duration.exposure_s < 1e6)) {
    throw new InputError({
      action: "read exposure time",
      rule: "exposure time must be positive, and below 1e6 s",
      value: duration.exposure_s,
      unit: "s",
      file: recorded.file,
      key: duration.decision.from.split(",")[0]!,
      remedy: "mend the header or the log, or leave the exposure out",
    });
  }
  return duration;
}

function assumptions(decisions: readonly OneDecision[]): Warning[] {
  const of = (what: string) => decisions.find((d) => d.what === what && d.assumed);
  const warnings: Warning[] = [];
  const medium = of("wavelength medium");
  if (medium !== undefined) {
    warnings.push({
      code: "wavelength-medium-assumed",
      text:
        `wavelengths are taken as in ${medium.value}, as no file says (the other would shift them by 83 km/s): state wavelength_medium`,
    });
  }
  const scale = of("time scale");
  if (scale !== undefined) {
    warnings.push({
      code: "time-scale-assumed",
      text:
        `times are taken as ${scale.value.toUpperCase()}, ${scale.from} (UTC and TDB differ by about 69 s): state time_scale`,
    });
  }
  const place = of("time place");
  const form = decisions.find((d) => d.what === "time")?.value;
  // A calendar date is the observatory's clock; a Julian date is as often brought to the barycentre.
  if (place !== undefined && form !== "iso" && !/(DATE|MJD)[-_]/.test(place.from)) {
    warnings.push({
      code: "time-place-assumed",
      text:
        `times are taken as they passed at the observatory, ${place.from} (barycentric and heliocentric dates differ by up to 8.3 min): state time_place, or name the column as in mid_bjd_tdb`,
    });
  }
  const mark = of("time marks");
  if (mark !== undefined && !/(DATE|MJD)[-_]OBS/.test(mark.from)) {
    warnings.push({
      code: "time-mark-assumed",
      text: `times are taken as ${mark.value} of exposure, ${mark.from}: state time_marks`,
    });
  }
  return warnings;
}

/**
 * Settles one recorded exposure: decides medium and frame of its wavelengths, and, apart from them,
 * what its time marks, in which scale and for which place; brings wavelengths to vacuum and the
 * barycentric frame, and the time to mid-exposure in BJD(TDB). Wavelengths may be barycentric while
 * times are UTC at the observatory.
 *
 * @param recorded What the file holds.
 * @param options What is known better.
 * @returns The spectrum, the decisions, and warnings about those that were assumed.
 * @throws {InputError} When something needed is missing (it lists what was tried), an exposure time
 * is not positive, or wavelengths are not monotonic.
 *
 * @example
 * ```ts
 * import { namedFacts, settleExposure } from "@millrace/millrace/spectra";
 * import { assertEquals } from "@std/assert";
 *
 * const facts = namedFacts([["BJD_TDB", "2460311.5"], ["EXPTIME", "60"], ["SPECSYS", "BARYCENT"]]);
 * const { spectrum } = settleExposure({
 *   source: "a.txt",
 *   file: "a.txt",
 *   axis: { wavelength_angstrom: Float64Array.of(5000, 5001), medium: "vacuum", decisions: [] },
 *   flux: Float64Array.of(1, 2),
 *   error: Float64Array.of(0.1, 0.1),
 *   unit: "",
 *   times: facts,
 *   facts,
 *   decisions: [],
 * });
 * assertEquals([spectrum.mid, spectrum.observer_factor], [[2460311, 0.5], null]);
 * ```
 */
export function settleExposure(
  recorded: RecordedExposure,
  options: ReadExposuresOptions = {},
): SettledExposure {
  const { wavelength_medium = "auto", wavelength_frame = "auto", group = 0 } = options;
  const { file, source, facts } = recorded;
  const decisions: OneDecision[] = [...recorded.axis.decisions, ...recorded.decisions];
  const inFile = <T>(work: () => T): T => {
    try {
      return work();
    } catch (error) {
      throw error instanceof InputError ? error.at({ file }) : error;
    }
  };

  const samples = inOrder({
    wavelength: recorded.axis.wavelength_angstrom,
    flux: recorded.flux,
    error: recorded.error,
  }, { file });
  const typical = samples.wavelength[samples.wavelength.length >> 1]!;
  const medium = findMedium(facts, {
    asked: wavelength_medium,
    axis: recorded.axis.medium,
    wavelength_angstrom: typical,
  });
  const frame = inFile(() => findFrame(facts, wavelength_frame));
  requireKeys(recorded, options.keys ?? {});
  const time = inFile(() => requireTime(recorded.times, options));
  const duration = inFile(() => durationOf(recorded, options));
  const needed = frame.frame !== "barycentric"
    ? `bringing ${frame.frame} wavelengths to the barycentre`
    : time.place !== "barycentric"
    ? `bringing ${
      time.place === "observatory" ? "times of the observatory" : "heliocentric times"
    } to BJD`
    : null;
  const sight = inFile(() => sightOf(recorded, { ...options, needed }));
  decisions.push(medium.decision, frame.decision, ...time.decisions, duration.decision);
  decisions.push(...sight.decisions);

  const { mid, moment } = inFile(() => momentOf(time, sight, duration.exposure_s));
  const applied = frame.frame === "topocentric"
    ? moment!.observer_factor
    : frame.frame === "heliocentric"
    ? moment!.observer_factor / moment!.heliocentric_factor
    : 1;
  let observer_factor = moment?.observer_factor ?? null;
  if (sight.site === null && observer_factor !== null) {
    const stated = statedFactor(recorded, observer_factor);
    observer_factor = stated ?? observer_factor;
    decisions.push({
      what: "observer's frame",
      value: stated === null ? "centre of the Earth, up to 0.47 km/s off" : "as stated",
      from: stated === null ? "no site" : "VELOSYS",
      assumed: stated === null,
    });
  }
  const vacuum = medium.medium === "air"
    ? samples.wavelength.map((w) => w < 2000 ? w : airToVacuum(w))
    : samples.wavelength;
  const perFrequency = F_NU.test(recorded.unit);
  if (perFrequency) {
    decisions.push({
      what: "flux",
      value: "per frequency, brought to per wavelength",
      from: `unit ${recorded.unit}`,
      assumed: false,
    });
  }
  // F_λ = F_ν c/λ²; the constant is left out: only its course with wavelength matters.
  const density = (values: Float64Array) =>
    perFrequency ? values.map((v, i) => v * (typical / samples.wavelength[i]!) ** 2) : values;
  const wavelength_angstrom = vacuum.map((w) => w * applied);
  const { found: resolution, decisions: ofResolution } = inFile(() =>
    sought(() => findResolution(facts, { ...options, wavelength_angstrom }), {
      what: "resolution",
      needed: options.keys?.["resolution"] !== undefined,
    })
  );
  decisions.push(...ofResolution);
  return {
    spectrum: {
      source,
      group,
      wavelength_angstrom,
      flux: density(samples.flux),
      error: samples.error === null ? new Float64Array(0) : density(samples.error),
      errors_given: samples.error !== null,
      mid,
      exposure_s: duration.exposure_s,
      observer_factor,
      resolution_angstrom: resolution?.resolution_angstrom ?? null,
    },
    target: sight.target,
    decisions,
    warnings: [...assumptions(decisions), ...(moment?.warnings ?? [])],
  };
}
