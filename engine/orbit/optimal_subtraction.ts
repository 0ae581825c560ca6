import { InputError } from "../errors.ts";
import { minimiseScalar } from "../numerics/mod.ts";
import type { Trail } from "../trail/mod.ts";
import { type CircularFit, circularVelocity } from "./circular_fit.ts";
import type { DonorTemplate } from "./donor_template.ts";
import { type ExposureMatch, matchExposures } from "./template_match.ts";

/** What is left of a trail when the best share of a broadened template is taken out. */
export interface TemplateSubtraction {
  /** Name of the template. */
  readonly template: string;
  /** v sin i with which it fits best, km/s. */
  readonly v_sin_i_kms: number;
  /** Its standard deviation, km/s: Δχ² = 1, chi-square scaled to its degrees of freedom. */
  readonly v_sin_i_error_kms: number;
  /** v sin i if lines had no limb darkening, km/s: the truth may lie anywhere between the two. */
  readonly v_sin_i_undarkened_kms: number;
  /** Share of the light that is the donor's, 1 less the veiling. */
  readonly share: number;
  /** Its standard deviation. */
  readonly share_error: number;
  /** Chi-square of all exposures. */
  readonly chi_square: number;
  /** Samples less baselines and parameters. */
  readonly degrees_of_freedom: number;
  /** Whether rotation is seen: v sin i = 0 fits worse by at least 9. */
  readonly rotation_seen: boolean;
}

/** Options of {@linkcode subtractTemplates}. */
export interface SubtractionOptions {
  /** The donor's orbit, to which every exposure is tied. */
  readonly orbit: Pick<CircularFit, "harmonics_kms" | "k_kms">;
  /** Largest v sin i tried, km/s. @default {250} */
  readonly v_sin_i_limit_kms?: number;
  /** Linear limb darkening of the rotation kernel; lines may have less than the continuum. @default {0.5} */
  readonly limb_darkening?: number;
  /** Order of each exposure's baseline. @default {1} */
  readonly baseline_order?: number;
}

/**
 * Change of the donor's velocity during each exposure, km/s.
 *
 * @param trail The trail: phases and durations.
 * @param orbit The donor's orbit.
 * @returns P values, not negative.
 *
 * @example
 * ```ts
 * import type { Trail } from "@millrace/millrace/trail";
 * import { orbitalSmear } from "@millrace/millrace/orbit";
 *
 * function worst(trail: Trail): number {
 *   return Math.max(...orbitalSmear(trail, { harmonics_kms: Float64Array.of(0, 320, 0) }));
 * }
 * ```
 */
export function orbitalSmear(
  trail: Trail,
  orbit: Pick<CircularFit, "harmonics_kms">,
): Float64Array {
  const [, a, b] = orbit.harmonics_kms as unknown as [number, number, number];
  return trail.sampling.phase.map((phase, i) => {
    const angle = 2 * Math.PI * phase;
    const rate = 2 * Math.PI * (a * Math.cos(angle) - b * Math.sin(angle));
    return Math.abs(rate) * trail.sampling.phase_width[i]!;
  });
}

/** Weighted sums over all exposures. */
interface Sums {
  readonly cross: number;
  readonly auto: number;
  readonly chi: number;
  readonly samples: number;
}

function sumUp(matches: readonly ExposureMatch[], velocity: Float64Array): Sums {
  let cross = 0, auto = 0, chi = 0, samples = 0;
  matches.forEach((match, i) => {
    const [c, a] = match.at(velocity[i]!);
    cross += c;
    auto += a;
    chi += match.chi_square_baseline;
    samples += match.sample_count;
  });
  return { cross, auto, chi, samples };
}

/**
 * Optimal subtraction (Marsh, Robinson & Wood 1994, MNRAS 266, 137): each template is broadened to a
 * trial v sin i, smeared by each exposure, put at the donor's velocity and taken out with the share
 * that leaves the least chi-square. Which template, which v sin i and which share fit best give the
 * spectral type, the rotation and the veiling. It works on native pixels, nothing is shifted or
 * averaged first.
 *
 * @param trail The line's trail, normalised: shares are of the light at this line.
 * @param templates Candidate templates.
 * @param options The orbit, and how rotation is modelled.
 * @returns One entry per template, best first.
 * @throws {InputError} When there is no template, or one does not overlap the trail.
 *
 * @example
 * ```ts
 * import type { Trail } from "@millrace/millrace/trail";
 * import { type DonorTemplate, subtractTemplates } from "@millrace/millrace/orbit";
 *
 * function spectralType(trail: Trail, templates: DonorTemplate[]): string {
 *   const orbit = { harmonics_kms: Float64Array.of(0, 320, 0), k_kms: 320 };
 *   return subtractTemplates(trail, templates, { orbit })[0]!.template;
 * }
 * ```
 */
export function subtractTemplates(
  trail: Trail,
  templates: readonly DonorTemplate[],
  options: SubtractionOptions,
): readonly TemplateSubtraction[] {
  const { orbit, v_sin_i_limit_kms = 250, limb_darkening, baseline_order = 1 } = options;
  if (templates.length === 0) {
    throw new InputError({
      action: `subtract template from ${trail.line.name}`,
      rule: "at least one template is needed",
      value: 0,
      key: "template",
    });
  }
  const smear_kms = orbitalSmear(trail, orbit);
  const { sampling } = trail;
  const velocity = sampling.phase.map((phase, i) =>
    circularVelocity(orbit, phase, { exposure_orbits: sampling.phase_width[i]! })
  );
  return templates.map((template): TemplateSubtraction => {
    const fitted = (darkening: number | undefined) => {
      const cache = new Map<number, Sums>();
      const sums = (v_sin_i_kms: number): Sums => {
        const known = cache.get(v_sin_i_kms);
        if (known) return known;
        const matches = matchExposures(trail, template, {
          v_sin_i_kms,
          smear_kms,
          baseline_order,
          ...(darkening === undefined ? {} : { limb_darkening: darkening }),
        });
        const found = sumUp(matches, velocity);
        cache.set(v_sin_i_kms, found);
        return found;
      };
      const chiSquare = (v: number) => {
        const { cross, auto, chi } = sums(Math.max(0, v));
        return chi - (cross > 0 && auto > 0 ? cross * cross / auto : 0);
      };
      const step = v_sin_i_limit_kms / 25;
      let coarse = 0;
      for (let k = 1; k <= 25; k++) if (chiSquare(k * step) < chiSquare(coarse)) coarse = k * step;
      const range = [Math.max(0, coarse - step), coarse + step] as const;
      const { x, value } = minimiseScalar(chiSquare, range, { tolerance: 1e-3 });
      return { v_sin_i_kms: Math.max(0, x), value, sums, chiSquare };
    };
    const { v_sin_i_kms, value, sums, chiSquare } = fitted(limb_darkening);
    const { cross, auto, samples } = sums(v_sin_i_kms);
    const degrees_of_freedom = samples - sampling.count * (baseline_order + 1) - 2;
    const scale = Math.max(1, value / degrees_of_freedom);
    const h = Math.max(5, 0.1 * v_sin_i_kms);
    const low = Math.max(0, v_sin_i_kms - h);
    const rise = (chiSquare(v_sin_i_kms + h) - 2 * value + chiSquare(low)) / (h * h);
    return {
      template: template.name,
      v_sin_i_kms,
      v_sin_i_error_kms: rise > 0 ? Math.sqrt(2 * scale / rise) : Infinity,
      v_sin_i_undarkened_kms: limb_darkening === 0 ? v_sin_i_kms : fitted(0).v_sin_i_kms,
      share: auto > 0 ? cross / auto : 0,
      share_error: auto > 0 ? Math.sqrt(scale / auto) : Infinity,
      chi_square: value,
      degrees_of_freedom,
      rotation_seen: (chiSquare(0) - value) / scale >= 9,
    };
  }).sort((a, b) => a.chi_square - b.chi_square);
}
