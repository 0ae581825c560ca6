import { minimiseScalar } from "../numerics/mod.ts";
import type { Trail } from "../trail/mod.ts";
import type { ExposureMatch } from "./template_match.ts";
import type { VelocityCurve } from "./velocity_curve.ts";

/** Velocities by comparison with a template, and how sure each is. */
export interface DonorVelocities {
  /** The velocities. */
  readonly curve: VelocityCurve;
  /** Strength of the template in each exposure: the donor's share of the light. NaN where not measured. */
  readonly strength: Float64Array;
  /** Fall of chi-square by the template in each exposure. */
  readonly gain: Float64Array;
  /** Exposures whose line is mostly hidden by masked pixels. */
  readonly masked: number;
  /** Exposures in which no shift of the template stands out of the noise. */
  readonly faint: number;
}

/** Options of {@linkcode donorVelocities}. */
export interface DonorVelocityOptions {
  /** Velocities searched, km/s. @default {[-1000, 1000]} */
  readonly search_kms?: readonly [low: number, high: number];
  /** Name of the method. @default {"cross-correlation"} */
  readonly method?: string;
  /** Least fall of chi-square for a velocity to count. @default {16, four standard deviations} */
  readonly least_gain?: number;
}

/** Share of the line's information that masked pixels may take before a velocity is refused. */
const MOST_HIDDEN = 0.6;

/**
 * Radial velocity of each exposure: the shift at which the template, with free strength, lowers
 * chi-square most. Errors come from the template's slope and the pixels' errors at the strength that
 * all exposures share, so that a noise peak does not look precise.
 *
 * @param trail The trail.
 * @param matches Its matches with a template.
 * @param options Range and threshold.
 * @returns Velocities, strengths and what could not be measured.
 *
 * @example
 * ```ts
 * import type { Trail } from "@millrace/millrace/trail";
 * import { type DonorTemplate, donorVelocities, matchExposures } from "@millrace/millrace/orbit";
 *
 * function first(trail: Trail, template: DonorTemplate): number | undefined {
 *   return donorVelocities(trail, matchExposures(trail, template)).curve.velocity_kms[0];
 * }
 * ```
 */
export function donorVelocities(
  trail: Trail,
  matches: readonly ExposureMatch[],
  options: DonorVelocityOptions = {},
): DonorVelocities {
  const { search_kms = [-1000, 1000], method = "cross-correlation", least_gain = 16 } = options;
  const { sampling } = trail;
  const count = sampling.count;
  const step = sampling.profile_sigma_kms.reduce((a, s) => Math.min(a, s)) / 2;
  const steps = Math.ceil((search_kms[1] - search_kms[0]) / step);
  const gainAt = (match: ExposureMatch, v: number) => {
    const [cross, auto] = match.at(v);
    return cross > 0 && auto > 0 ? cross * cross / auto : 0;
  };
  const place = new Float64Array(count), gain = new Float64Array(count);
  const strength = new Float64Array(count);
  matches.forEach((match, i) => {
    let best = 0, at = search_kms[0];
    for (let k = 0; k <= steps; k++) {
      const v = search_kms[0] + (search_kms[1] - search_kms[0]) * k / steps;
      const value = gainAt(match, v);
      if (value > best) [best, at] = [value, v];
    }
    const fine = minimiseScalar((v) => -gainAt(match, v), [at - 1.5 * step, at + 1.5 * step], {
      tolerance: 1e-5,
    });
    place[i] = fine.x;
    gain[i] = -fine.value;
    const [cross, auto] = match.at(fine.x);
    strength[i] = auto > 0 ? cross / auto : 0;
  });
  // Strength common to the exposures, weighted by what each knows of it.
  let top = 0, bottom = 0;
  matches.forEach((match, i) => {
    if (gain[i]! < least_gain) return;
    const [cross, auto] = match.at(place[i]!);
    top += cross;
    bottom += auto;
  });
  const common = bottom > 0 ? top / bottom : 0;
  // Curvature of the correlation over what a template of the right shape would have: below 1 the
  // peak is blunter than the noise's slope assumes, and errors grow by as much.
  let curved = 0, expected = 0;
  matches.forEach((match, i) => {
    if (gain[i]! < least_gain) return;
    const h = step / 4;
    const fall = 2 * gain[i]! - gainAt(match, place[i]! + h) - gainAt(match, place[i]! - h);
    curved += fall / (2 * h * h);
    expected += common * common * match.information(place[i]!);
  });
  const sharpness = expected > 0 ? Math.min(1, curved / expected) : 1;
  const velocity_kms = new Float64Array(count).fill(NaN);
  const error_kms = new Float64Array(count).fill(Infinity);
  let masked = 0, faint = 0;
  matches.forEach((match, i) => {
    const seen = match.information(place[i]!), whole = match.informationUnmasked(place[i]!);
    if (!(seen > (1 - MOST_HIDDEN) * whole)) {
      masked++;
    } else if (gain[i]! < least_gain) {
      faint++;
    } else {
      velocity_kms[i] = place[i]!;
      error_kms[i] = 1 / (common * Math.sqrt(seen) * sharpness);
      return;
    }
    strength[i] = NaN;
  });
  return {
    curve: {
      line: trail.line.name,
      method,
      star: "donor",
      orbits: sampling.phase.map((phase, i) => phase + sampling.cycle[i]!),
      exposure_orbits: sampling.phase_width,
      velocity_kms,
      error_kms,
    },
    strength,
    gain,
    masked,
    faint,
  };
}
