import { type CompleteModel, spotPlace } from "../synthesis/mod.ts";
import type { FitErrors } from "./fit_errors.ts";
import type { HypothesisFit } from "./fit_hypothesis.ts";
import { stateOf } from "./parameter_state.ts";
import type { Problem } from "./problem.ts";

/** Numbers of a fit by path, those that follow from others included. */
export interface FittedValues {
  /** Values. */
  readonly fitted: Readonly<Record<string, number>>;
  /** One standard deviation each; null where a number is held at a bound. */
  readonly errors: Readonly<Record<string, number | null>>;
}

/**
 * What a fit says, in the words of the target file, with errors: free numbers and equivalent widths
 * as they are; each part's share of the light, amplitudes and angles of the disc's patterns, and the
 * spot's place in the map propagated from them.
 *
 * @param problem The problem.
 * @param fit Its fit.
 * @param errors Its errors.
 * @returns Values and errors.
 */
export function fittedValues(
  problem: Problem,
  fit: HypothesisFit,
  errors: FitErrors,
): FittedValues {
  const { names, values, covariance } = errors;
  const at = quantities(problem, fit, values);
  const size = names.length;
  const keys = Object.keys(at);
  const gradient = new Map(keys.map((key) => [key, new Float64Array(size)]));
  for (let j = 0; j < size; j++) {
    const variance = covariance[j * size + j]!;
    if (!(variance > 0)) continue;
    // A thousandth of the error: small against curvature, large against rounding. Where a part hardly
    // shines its errors are large without end, and near a bound there is room to one side only.
    const { low = -Infinity, high = Infinity } = fit.parameters[j] ?? {};
    const length = 1e-3 * Math.min(Math.sqrt(variance), high - low);
    const step = values[j]! + length <= high ? length : -length;
    const there = values.slice();
    there[j]! += step;
    const moved = quantities(problem, fit, there);
    for (const key of keys) {
      const change = key.endsWith("_deg") ? turn(moved[key]! - at[key]!) : moved[key]! - at[key]!;
      gradient.get(key)![j] = change / step;
    }
  }
  const sigma: Record<string, number | null> = {};
  for (const key of keys) {
    const g = gradient.get(key)!;
    let variance = 0;
    for (let a = 0; a < size; a++) {
      for (let b = 0; b < size; b++) variance += g[a]! * g[b]! * covariance[a * size + b]!;
    }
    sigma[key] = variance > 0 ? Math.sqrt(variance) : null;
  }
  return { fitted: at, errors: sigma };
}

function turn(degrees: number): number {
  return degrees - 360 * Math.round(degrees / 360);
}

function quantities(
  problem: Problem,
  fit: HypothesisFit,
  values: Float64Array,
): Record<string, number> {
  const { parameters, hypothesis, evaluation } = fit;
  const state = stateOf(hypothesis, { setup: problem.setup, parameters })(values);
  const found: Record<string, number> = {};
  parameters.forEach(({ path }, j) => found[path] = values[j]!);
  let next = parameters.length;
  const widths = new Map<string, number>();
  let light = 0;
  for (const [part, amplitudes] of evaluation.amplitudes) {
    const own = values.subarray(next, next + amplitudes.length);
    next += amplitudes.length;
    widths.set(part, own[0]!);
    light += own[0]!;
    found[`${part}.equivalent_width_kms`] = own[0]!;
    for (const [order, name] of [[1, "one_armed"], [2, "two_armed"]] as const) {
      if (own.length <= 2 * order) continue;
      const cosine = own[2 * order - 1]!, sine = own[2 * order]!;
      found[`${part}.${name}_amplitude`] = own[0]! > 0 ? Math.hypot(cosine, sine) / own[0]! : 0;
      found[`${part}.${name}_deg`] = Math.atan2(sine, cosine) * 180 / Math.PI / order;
    }
  }
  for (const [part, width] of widths) {
    found[`${part}.flux_fraction`] = light > 0 ? width / light : 0;
  }
  if (hypothesis.includes("spot")) Object.assign(found, placeOfSpot(state.model, state.binary));
  return found;
}

function placeOfSpot(
  model: CompleteModel,
  binary: Parameters<typeof spotPlace>[1],
): Record<string, number> {
  const { vx_kms, vy_kms } = spotPlace(model, binary);
  return { "spot.vx_kms": vx_kms, "spot.vy_kms": vy_kms };
}
