import { median } from "../numerics/mod.ts";
import type { Trail } from "../trail/mod.ts";
import {
  backProjectCorrelation,
  type BackProjectedCorrelation,
} from "./back_projected_correlation.ts";
import { type CircularFit, circularVelocity } from "./circular_fit.ts";
import { fitOrNull } from "./fit_or_null.ts";
import { type DonorTemplate, gaussianTemplate } from "./donor_template.ts";
import { type DonorVelocities, donorVelocities } from "./donor_velocities.ts";
import type { FittedCurve } from "./measure_accretor.ts";
import {
  orbitalSmear,
  subtractTemplates,
  type TemplateSubtraction,
} from "./optimal_subtraction.ts";
import { type ExposureMatch, matchExposures } from "./template_match.ts";

/** What one line says of the donor. */
export interface DonorLine {
  /** The template used. */
  readonly template: DonorTemplate;
  /** Whether the line is in absorption or in emission. */
  readonly sign: "absorption" | "emission";
  /** Velocities exposure by exposure. */
  readonly velocities: DonorVelocities;
  /** All exposures together; null when the phases mean nothing yet. */
  readonly back_projected: BackProjectedCorrelation | null;
  /** Templates by how well they subtract, best first; empty without template stars or an orbit. */
  readonly subtraction: readonly TemplateSubtraction[];
  /** Curves: exposure by exposure, then all together (an orbit without velocities). */
  readonly curves: readonly FittedCurve[];
  /** The orbit that counts: K, γ, phase with errors; null when none does. */
  readonly orbit: DonorOrbit | null;
  /** Why none; empty when one does. */
  readonly reasons: readonly string[];
}

/** The donor's orbit, by whichever way it was had. */
export interface DonorOrbit {
  /** "cross-correlation" (exposure by exposure) or "back-projected cross-correlation". */
  readonly method: string;
  /** K, km/s. */
  readonly k_kms: number;
  /** Its standard deviation, km/s. */
  readonly k_error_kms: number;
  /** γ, km/s. */
  readonly systemic_kms: number;
  /** Its standard deviation, km/s. */
  readonly systemic_error_kms: number;
  /** Phase of upward crossing of γ, cycles in [0, 1). */
  readonly crossing_phase: number;
  /** Its standard deviation, cycles. */
  readonly crossing_phase_error: number;
}

/** Options of {@linkcode measureDonor}. */
export interface DonorOptions {
  /** Template stars, at rest. @default {[]: Gaussian components} */
  readonly templates?: readonly DonorTemplate[];
  /** Rest wavelengths of Gaussian components, vacuum, Å. @default {the line's own} */
  readonly components_vacuum_angstrom?: readonly number[];
  /** Sign of the line. @default {"auto": whichever fits better} */
  readonly sign?: "absorption" | "emission" | "auto";
  /** Velocities searched, km/s. @default {[-1000, 1000]} */
  readonly search_kms?: readonly [low: number, high: number];
  /** Whether the phases are those of an ephemeris to be believed. @default {true} */
  readonly phased?: boolean;
}

// Stated rules.
const LEAST_MEASURED = 0.7;
const LEAST_K_SIGMA = 3;
const MOST_STATIONARY = 0.25;
/** Least part of one template that another does not have in common with it. */
const ALIKE = 0.05;

/** Velocities that donors mostly have, km/s: common practice, no source. */
const LIKELY_KMS = 400;

/** Gaussian widths tried, in instrumental σ. */
const WIDTHS = [1, 1.4, 2, 2.8, 4];

function totalGain(trail: Trail, matches: readonly ExposureMatch[], options: DonorOptions): number {
  const { gain } = donorVelocities(trail, matches, options);
  return gain.reduce((sum, g) => sum + g, 0);
}

/** Best of the templates given, or of Gaussians of several widths and both signs. */
function chooseTemplate(trail: Trail, options: DonorOptions) {
  const { templates = [], components_vacuum_angstrom, sign = "auto" } = options;
  const instrument = median(trail.sampling.profile_sigma_kms);
  const signs = sign === "auto" ? ["absorption", "emission"] as const : [sign];
  const candidates = templates.length > 0
    ? templates.map((template) => ({ template, sign: "absorption" as const }))
    : signs.flatMap((one) =>
      WIDTHS.map((width) => ({
        template: gaussianTemplate(trail.line, {
          sigma_kms: width * instrument,
          sign: one,
          ...(components_vacuum_angstrom ? { components_vacuum_angstrom } : {}),
        }),
        sign: one,
      }))
    );
  let best = { ...candidates[0]!, gain: -Infinity };
  for (const candidate of candidates) {
    const gain = totalGain(trail, matchExposures(trail, candidate.template), options);
    if (gain > best.gain) best = { ...candidate, gain };
  }
  return best;
}

/** Share of the line's information that masked pixels take, over exposures and likely velocities. */
function hiddenShare(matches: readonly ExposureMatch[]): number {
  let seen = 0, whole = 0;
  for (const match of matches) {
    for (let v = -LIKELY_KMS; v <= LIKELY_KMS; v += LIKELY_KMS / 4) {
      seen += match.information(v);
      whole += match.informationUnmasked(v);
    }
  }
  return whole > 0 ? 1 - seen / whole : 0;
}

/**
 * Largest fall of chi-square by a template that stands still beside one that moves, over that by the
 * one that moves beside it. A line that moves alone leaves nothing to one that stands still, however
 * much of it the other would explain by itself: a broad doublet a third and more.
 */
function stationaryShare(
  matches: readonly ExposureMatch[],
  moving: (exposure: number) => number,
  search: readonly [number, number],
  step: number,
): number {
  const sums = (velocity: (i: number) => number) => {
    let cross = 0, auto = 0, shared = 0;
    matches.forEach((match, i) => {
      const [c, a] = match.at(velocity(i));
      cross += c;
      auto += a;
      shared += match.overlap(velocity(i), moving(i));
    });
    return { cross, auto, shared };
  };
  const goal = sums(moving);
  let most = 0;
  for (let v = search[0]; v <= search[1]; v += step) {
    const still = sums(() => v);
    const alone = 1 - still.shared ** 2 / (goal.auto * still.auto);
    const left = still.cross - goal.cross * still.shared / goal.auto;
    const own = goal.cross - still.cross * still.shared / still.auto;
    // Where both are the same line nothing can be told.
    if (!(alone > ALIKE) || left <= 0) continue;
    const fall = left * left / still.auto, by_moving = own * own / goal.auto;
    most = Math.max(most, own > 0 ? fall / by_moving : Infinity);
  }
  return most;
}

function orbitOf(method: string, fit: CircularFit | BackProjectedCorrelation): DonorOrbit {
  const systemic_error_kms = "errors_kms" in fit ? fit.errors_kms[2] : fit.systemic_error_kms;
  const { k_kms, k_error_kms, systemic_kms, crossing_phase, crossing_phase_error } = fit;
  return {
    method,
    k_kms,
    k_error_kms,
    systemic_kms,
    systemic_error_kms,
    crossing_phase,
    crossing_phase_error,
  };
}

/**
 * Measures a line of the donor: chooses the template (stars, or Gaussian components of the width and
 * sign that fit best), takes velocities exposure by exposure, smears the template as the orbit found
 * asks, and adds up all exposures along trial orbits for donors too faint in one.
 *
 * The velocities count when seven tenths of the exposures were measured; otherwise the sum counts
 * when its peak stands out of noise. Either way nothing counts when K is below three of its errors,
 * or when the same line standing still explains a quarter as much, each of what the other leaves: a
 * telluric or interstellar line.
 *
 * @param trail The line's trail.
 * @param options Templates, search range.
 * @returns Velocities, sums, subtraction, and the orbit that counts or the reasons why none does.
 * @throws {InputError} When a template does not overlap the trail.
 *
 * @example
 * ```ts
 * import type { Trail } from "@millrace/millrace/trail";
 * import { measureDonor } from "@millrace/millrace/orbit";
 *
 * function speed(trail: Trail): number | undefined {
 *   return measureDonor(trail, { sign: "absorption" }).orbit?.k_kms;
 * }
 * ```
 */
export function measureDonor(trail: Trail, options: DonorOptions = {}): DonorLine {
  const { phased = true, search_kms = [-1000, 1000], templates = [] } = options;
  const { sampling } = trail;
  const { template, sign } = chooseTemplate(trail, options);
  let matches = matchExposures(trail, template);
  let velocities = donorVelocities(trail, matches, { search_kms });
  let fit = fitOrNull(velocities.curve);
  if (fit && phased) {
    matches = matchExposures(trail, template, { smear_kms: orbitalSmear(trail, fit) });
    velocities = donorVelocities(trail, matches, { search_kms });
    fit = fitOrNull(velocities.curve);
  }
  const { count } = sampling;
  const measured = 1 - (velocities.masked + velocities.faint) / count;
  const back_projected = phased ? backProjectCorrelation(trail, matches) : null;

  const reasons: string[] = [];
  const direct = fit !== null && measured >= LEAST_MEASURED;
  const chosen = direct ? fit : back_projected?.detected ? back_projected : null;
  const hidden = hiddenShare(matches);
  if (2 * velocities.masked > count || (chosen === null && hidden > 0.5)) {
    reasons.push(
      "masked pixels (telluric bands, sky lines, cosmic rays) hide " +
        `${(100 * hidden).toFixed(0)} % of the line`,
    );
  } else if (chosen === null) {
    const gain = back_projected
      ? `, and all together lower chi-square by ${back_projected.gain.toFixed(1)} only ` +
        `(noise alone: ${back_projected.noise_gain.toFixed(1)})`
      : "";
    reasons.push(`the line is lost in noise in ${velocities.faint} of ${count} exposures${gain}`);
  }
  if (chosen && chosen.k_kms < LEAST_K_SIGMA * chosen.k_error_kms) {
    reasons.push(
      `K ${chosen.k_kms.toFixed(1)} km/s is below ${LEAST_K_SIGMA} of its errors, ` +
        `${chosen.k_error_kms.toFixed(1)} km/s: its noise floor`,
    );
  }
  if (chosen && phased) {
    const moving = "harmonics_kms" in chosen
      ? (i: number) =>
        circularVelocity(chosen, sampling.phase[i]!, { exposure_orbits: sampling.phase_width[i]! })
      : (i: number) =>
        chosen.systemic_kms +
        chosen.k_kms * Math.sin(2 * Math.PI * (sampling.phase[i]! - chosen.crossing_phase));
    const width = Math.max(template.sigma_kms, median(sampling.profile_sigma_kms));
    // A slow star's line cannot be told from one that stands still.
    if (chosen.k_kms > 3 * width) {
      const still = stationaryShare(matches, moving, search_kms, width / 2);
      if (still > MOST_STATIONARY) {
        reasons.push(
          "a line that stands still explains " +
            `${
              Number.isFinite(still) ? `${(100 * still).toFixed(0)} % as much as` : "more than"
            } ` +
            "one that moves, each of what the other leaves: telluric or interstellar absorption?",
        );
      }
    }
  }
  const counts = chosen !== null && reasons.length === 0;
  const method = direct ? "cross-correlation" : "back-projected cross-correlation";
  const orbit = counts ? orbitOf(method, chosen) : null;
  const harmonics = orbit && Float64Array.of(
    orbit.systemic_kms,
    orbit.k_kms * Math.cos(2 * Math.PI * orbit.crossing_phase),
    -orbit.k_kms * Math.sin(2 * Math.PI * orbit.crossing_phase),
  );
  return {
    template,
    sign,
    velocities,
    back_projected,
    subtraction: harmonics && templates.length > 0 && phased
      ? subtractTemplates(trail, templates, {
        orbit: { harmonics_kms: harmonics, k_kms: orbit.k_kms },
      })
      : [],
    curves: [{
      curve: velocities.curve,
      fit,
      measured: counts && direct,
      reasons: counts && !direct ? ["too few exposures show the line on their own"] : reasons,
    }],
    orbit,
    reasons,
  };
}
