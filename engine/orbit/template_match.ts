import { SPEED_OF_LIGHT_KMS } from "../constants.ts";
import { InputError } from "../errors.ts";
import type { Trail } from "../trail/mod.ts";
import { broadenTemplate } from "./broadening.ts";
import type { DonorTemplate } from "./donor_template.ts";
import { exposureProfile, type LineProfile } from "./line_profile.ts";

const C = SPEED_OF_LIGHT_KMS.value;

/** One exposure against a template at any velocity. */
export interface ExposureMatch {
  /**
   * Weighted sums of template × data and template × template, both less what the baseline takes:
   * strength is their ratio, and chi-square falls by cross²/auto.
   *
   * @param velocity_kms Radial velocity of the template, km/s.
   */
  at(velocity_kms: number): readonly [cross: number, auto: number];
  /**
   * Weighted sum of the template at one velocity × the template at another, less what the baseline
   * takes.
   *
   * @param a_kms One radial velocity, km/s.
   * @param b_kms Another, km/s.
   */
  overlap(a_kms: number, b_kms: number): number;
  /** Template's derivative by velocity, squared and weighted: 1/σ_V² at strength 1. */
  information(velocity_kms: number): number;
  /** The same if no pixel were masked: a masked one then has the median error. */
  informationUnmasked(velocity_kms: number): number;
  /** Chi-square of the baseline alone. */
  readonly chi_square_baseline: number;
  /** Unmasked pixels. */
  readonly sample_count: number;
}

/** Options of {@linkcode matchExposures}. */
export interface MatchOptions {
  /** Order of the polynomial baseline fitted with the template to each exposure. @default {1} */
  readonly baseline_order?: number;
  /** Change of the star's velocity during each exposure, km/s, P values. @default {0 each} */
  readonly smear_kms?: Float64Array;
  /** Projected rotation speed put into the template, km/s. @default {0} */
  readonly v_sin_i_kms?: number;
  /** Linear limb darkening of the rotation. @default {0.5} */
  readonly limb_darkening?: number;
}

/** Polynomials orthonormal under the weights, one after another, N values each. */
function baseline(x: Float64Array, weight: Float64Array, order: number): Float64Array[] {
  const found: Float64Array[] = [];
  for (let k = 0; k <= order; k++) {
    const p = x.map((v) => v ** k);
    for (let round = 0; round < 2; round++) {
      for (const q of found) {
        let dot = 0;
        for (let n = 0; n < p.length; n++) dot += weight[n]! * p[n]! * q[n]!;
        for (let n = 0; n < p.length; n++) p[n]! -= dot * q[n]!;
      }
    }
    let norm = 0;
    for (let n = 0; n < p.length; n++) norm += weight[n]! * p[n]! * p[n]!;
    if (norm > 1e-12) found.push(p.map((v) => v / Math.sqrt(norm)));
  }
  return found;
}

/** A template on the pixels of an exposure, at a radial velocity. */
function placed(
  template: DonorTemplate,
  pixels: Float64Array,
  velocity: number,
  out: Float64Array,
) {
  const { first_kms, step_kms, flux } = template;
  const stretch = 1 / (1 + velocity / C);
  for (let n = 0; n < pixels.length; n++) {
    // 1 + u/c = (1 + x/c)/(1 + V/c): velocities of this convention multiply as factors.
    const place = ((pixels[n]! - velocity) * stretch - first_kms) / step_kms;
    const k = Math.floor(place);
    if (k < 0 || k + 1 >= flux.length) {
      out[n] = 0;
      continue;
    }
    const share = place - k;
    out[n] = (1 - share) * flux[k]! + share * flux[k + 1]!;
  }
}

function matchOne(profile: LineProfile, template: DonorTemplate, order: number): ExposureMatch {
  const { velocity_kms, flux, error } = profile;
  const count = flux.length;
  const weight = error.map((e) => 1 / (e * e));
  const [low, high] = [velocity_kms[0]!, velocity_kms[count - 1]!];
  const x = velocity_kms.map((v) => 2 * (v - low) / (high - low) - 1);
  const lines = baseline(x, weight, order);
  const data = flux.slice();
  let chi_square_baseline = 0, sample_count = 0;
  for (const q of lines) {
    let dot = 0;
    for (let n = 0; n < count; n++) dot += weight[n]! * q[n]! * flux[n]!;
    for (let n = 0; n < count; n++) data[n]! -= dot * q[n]!;
  }
  for (let n = 0; n < count; n++) {
    if (weight[n] === 0) continue;
    chi_square_baseline += weight[n]! * data[n]! ** 2;
    sample_count++;
  }
  const sorted = error.filter((e) => e < Infinity).sort();
  const typical = sorted[sorted.length >> 1] ?? Infinity;
  const filled = weight.map((w) => w === 0 ? 1 / (typical * typical) : w);
  const filled_lines = sample_count === count ? lines : baseline(x, filled, order);
  const model = new Float64Array(count), other = new Float64Array(count);
  const power = (shape: Float64Array, w: Float64Array, basis: readonly Float64Array[]) => {
    let sum = 0;
    for (let n = 0; n < count; n++) sum += w[n]! * shape[n]! * shape[n]!;
    for (const q of basis) {
      let dot = 0;
      for (let n = 0; n < count; n++) dot += w[n]! * q[n]! * shape[n]!;
      sum -= dot * dot;
    }
    return Math.max(0, sum);
  };
  const slope = (velocity: number) => {
    const h = template.step_kms;
    placed(template, velocity_kms, velocity + h, model);
    placed(template, velocity_kms, velocity - h, other);
    for (let n = 0; n < count; n++) model[n] = (model[n]! - other[n]!) / (2 * h);
    return model;
  };
  return {
    at(velocity) {
      placed(template, velocity_kms, velocity, model);
      let cross = 0;
      for (let n = 0; n < count; n++) cross += weight[n]! * model[n]! * data[n]!;
      return [cross, power(model, weight, lines)];
    },
    overlap(a, b) {
      placed(template, velocity_kms, a, model);
      placed(template, velocity_kms, b, other);
      let sum = 0;
      for (let n = 0; n < count; n++) sum += weight[n]! * model[n]! * other[n]!;
      for (const q of lines) {
        let first = 0, second = 0;
        for (let n = 0; n < count; n++) {
          first += weight[n]! * q[n]! * model[n]!;
          second += weight[n]! * q[n]! * other[n]!;
        }
        sum -= first * second;
      }
      return sum;
    },
    information: (velocity) => power(slope(velocity), weight, lines),
    informationUnmasked: (velocity) => power(slope(velocity), filled, filled_lines),
    chi_square_baseline,
    sample_count,
  };
}

/**
 * Sets every exposure of a trail against a template: the template is brought to the exposure's
 * resolution, broadened by rotation and smeared as the star moved, and compared on the native
 * pixels together with a polynomial baseline. The sums are a cross-correlation that knows of errors
 * and masks.
 *
 * @param trail The line's trail.
 * @param template The donor's spectrum at rest.
 * @param options Baseline, smear, rotation.
 * @returns A match per exposure.
 * @throws {InputError} When the template does not overlap the trail, or is coarser than it.
 *
 * @example
 * ```ts
 * import type { Trail } from "@millrace/millrace/trail";
 * import { type DonorTemplate, matchExposures } from "@millrace/millrace/orbit";
 *
 * function strengthAtRest(trail: Trail, template: DonorTemplate): number {
 *   const [cross, auto] = matchExposures(trail, template)[0]!.at(0);
 *   return cross / auto;
 * }
 * ```
 */
export function matchExposures(
  trail: Trail,
  template: DonorTemplate,
  options: MatchOptions = {},
): readonly ExposureMatch[] {
  const { baseline_order = 1, smear_kms, v_sin_i_kms = 0, limb_darkening = 0.5 } = options;
  const { sampling } = trail;
  const last = template.first_kms + template.step_kms * (template.flux.length - 1);
  const low = sampling.velocity_kms.reduce((a, v) => Math.min(a, v), Infinity);
  const high = sampling.velocity_kms.reduce((a, v) => Math.max(a, v), -Infinity);
  if (!(last > low && template.first_kms < high) || template.flux.every((f) => f === 0)) {
    throw new InputError({
      action: `compare ${trail.line.name} with template ${template.name}`,
      rule: `the template must overlap the trail's ${low.toFixed(0)} to ${high.toFixed(0)} km/s`,
      value: `${template.first_kms.toFixed(0)} to ${last.toFixed(0)}`,
      unit: "km/s",
    });
  }
  const sets = new Map<string, DonorTemplate>();
  return Array.from({ length: sampling.count }, (_, i) => {
    const goal = sampling.profile_sigma_kms[i]!;
    const missing = goal ** 2 - template.sigma_kms ** 2;
    if (template.name !== "gaussian" && missing < -0.05 * goal ** 2) {
      throw new InputError({
        action: `compare ${trail.line.name} with template ${template.name}`,
        rule: `the template must be at least as sharp as the exposures (${goal.toFixed(1)} km/s)`,
        value: Number(template.sigma_kms.toFixed(1)),
        unit: "km/s",
        remedy: "take a template of higher resolution",
      });
    }
    const sigma_kms = template.name === "gaussian" ? 0 : Math.sqrt(Math.max(0, missing));
    // Smears alike to a tenth of the resolution share a template.
    const grain = Math.max(template.step_kms, goal / 10);
    const smear = grain * Math.round((smear_kms?.[i] ?? 0) / grain);
    const key = `${sigma_kms.toFixed(3)} ${smear}`;
    const ready = sets.get(key) ?? broadenTemplate(template, {
      sigma_kms,
      v_sin_i_kms,
      limb_darkening,
      smear_kms: smear,
    });
    sets.set(key, ready);
    return matchOne(exposureProfile(trail, i), ready, baseline_order);
  });
}
