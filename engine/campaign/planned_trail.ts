import { type Ephemeris, orbitalPhase } from "../binary/mod.ts";
import { SPEED_OF_LIGHT_KMS } from "../constants.ts";
import { InputError } from "../errors.ts";
import { midExposureBjd, parseIsoDate } from "../sky/mod.ts";
import { planExposures } from "../synthesis/mod.ts";
import { makeGrid, type Sampling, type Trail } from "../trail/mod.ts";
import { lineOf } from "./line_of.ts";
import type { LineSettings } from "./schema/lines_section.ts";
import { needed, type Target } from "./target.ts";

const FWHM_PER_SIGMA = Math.sqrt(8 * Math.LN2);

/**
 * The trail that `[observation]` plans, without light in it: phases, pixels and resolution of the
 * first arm that covers the line.
 *
 * @param target The target.
 * @param options What is planned.
 * @param options.line The line.
 * @param options.ephemeris The ephemeris.
 * @returns A trail of zeros with errors of one.
 * @throws {InputError} When `[observation]` is missing or no arm covers the line.
 */
export function plannedTrail(
  target: Target,
  options: { line: LineSettings; ephemeris: Ephemeris },
): Trail {
  const { line: settings, ephemeris } = options;
  const action = "predict the trail";
  const { sky, observation, trail } = target.settings;
  const plan = needed(target, {
    value: observation,
    key: "exposures (data) or observation (a plan)",
    action,
  });
  const direction = {
    ra_deg: needed(target, { value: sky.ra_deg, key: "sky.ra_deg", action }),
    dec_deg: needed(target, { value: sky.dec_deg, key: "sky.dec_deg", action }),
  };
  const line = lineOf(settings, { target });
  const arm = plan.arms.find(({ first_angstrom, step_angstrom, pixels }) =>
    line.air_angstrom > first_angstrom &&
    line.air_angstrom < first_angstrom + step_angstrom * pixels
  );
  if (arm === undefined) {
    throw new InputError({
      action,
      rule: "an arm of the observation must cover the line",
      value: line.name,
      file: target.file,
      key: "observation.arms",
    });
  }
  const scale = SPEED_OF_LIGHT_KMS.value / line.air_angstrom;
  const step_kms = arm.step_angstrom * scale;
  const columns = 2 * Math.floor(settings.reach_kms / step_kms) + 1;
  const exposures = planExposures(parseIsoDate(plan.first_utc), plan);
  const phases = exposures.map(({ start, exposure_s }) =>
    orbitalPhase(
      ephemeris,
      midExposureBjd({ date: start, exposure_s }, { target: direction, site: sky.site }).bjd,
    )
  );
  const count = exposures.length;
  const size = count * columns;
  const sampling: Sampling = {
    count,
    phase: Float64Array.from(phases, ({ phase }) => phase),
    cycle: Float64Array.from(phases, ({ cycle }) => cycle),
    phase_width: Float64Array.from(
      exposures,
      ({ exposure_s }) => exposure_s / 86400 / ephemeris.period_d,
    ),
    start: Uint32Array.from({ length: count + 1 }, (_, i) => i * columns),
    velocity_kms: Float64Array.from(
      { length: size },
      (_, k) => ((k % columns) - (columns - 1) / 2) * step_kms,
    ),
    pixel_kms: new Float64Array(size).fill(step_kms),
    profile_sigma_kms: new Float64Array(count).fill(
      (arm.resolution_angstrom * scale) / FWHM_PER_SIGMA,
    ),
  };
  const samples = { flux: new Float64Array(size), error: new Float64Array(size).fill(1) };
  return {
    line,
    sampling,
    ...samples,
    grid: makeGrid(sampling, samples, {
      reach_kms: settings.reach_kms,
      step_kms,
      phase_bins: trail.phase_bins,
    }),
    sources: exposures.map((_, i) => `planned exposure ${i + 1}`),
    group: new Uint16Array(count),
    continuum: new Float64Array(count).fill(1),
    continuum_error: new Float64Array(count),
    noise_scale: 1,
    noise: { groups: [], correlation_length_pixels: 1 },
    warnings: [],
  };
}
