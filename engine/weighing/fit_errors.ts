import { Matrix, pseudoInverse } from "ml-matrix";
import { dot } from "./brightnesses.ts";
import type { HypothesisFit } from "./fit_hypothesis.ts";
import { stateOf } from "./parameter_state.ts";
import type { Problem } from "./problem.ts";

/** All that a fit determined, non-linear numbers and amplitudes together. */
export interface FitErrors {
  /** Paths of the free numbers, then of the amplitudes, as in "spot.equivalent_width_kms". */
  readonly names: readonly string[];
  /** Values, M. */
  readonly values: Float64Array;
  /** Covariance, M × M row-major; zero rows where a number is on a bound or an amplitude zero. */
  readonly covariance: Float64Array;
  /** Derivatives of the whitened model, one column of N samples for each of M; null where held. */
  readonly derivatives: readonly (Float64Array | null)[];
  /** Pairs of numbers of different parts whose errors are correlated by more than 0.98, geometry held. */
  readonly degenerate: readonly (readonly [string, string])[];
}

/** Amplitudes of a disc, in the order of its templates. */
const DISC_AMPLITUDES = [
  "equivalent_width_kms",
  "one_armed_cosine_kms",
  "one_armed_sine_kms",
  "two_armed_cosine_kms",
  "two_armed_sine_kms",
];

const STEP = 1e-3;
const DEGENERATE = 0.98;

/**
 * The joint covariance of a fit, from derivatives at its end (in units of the noise the whitening
 * assumes) and the priors of the geometry.
 *
 * @param problem The problem.
 * @param fit Its fit.
 * @param options Factor on all standard deviations: the noise's scale and its correlation.
 * @default scale 1
 * @returns Names, values, covariance.
 */
export function fitErrors(
  problem: Problem,
  fit: HypothesisFit,
  { scale = 1 }: { readonly scale?: number } = {},
): FitErrors {
  const { parameters, hypothesis, values, evaluation } = fit;
  const state = stateOf(hypothesis, { setup: problem.setup, parameters });
  const names = parameters.map(({ path }) => path);
  const all = [...values];
  const derivatives: (Float64Array | null)[] = parameters.map((parameter, j) => {
    if (fit.at_bound[j] !== null) return null;
    const room = parameter.high - values[j]!;
    const step = room > STEP * parameter.typical ? STEP * parameter.typical : -STEP *
      parameter.typical;
    const there = values.slice();
    there[j]! += step;
    const moved = state(there);
    const change = new Float64Array(problem.observed.length);
    for (const [part, amplitudes] of evaluation.amplitudes) {
      const before = problem.templates.of(part, fit.state);
      const after = problem.templates.of(part, moved);
      if (before === null || after === null) return null;
      if (before === after) continue;
      amplitudes.forEach((amplitude, c) => {
        const a = before.columns[c]!, b = after.columns[c]!;
        for (let n = 0; n < change.length; n++) change[n]! += amplitude * (b[n]! - a[n]!) / step;
      });
    }
    return dot(change, change) > 0 ? change : null;
  });
  for (const [part, amplitudes] of evaluation.amplitudes) {
    const columns = problem.templates.of(part, fit.state)!.columns;
    amplitudes.forEach((amplitude, c) => {
      names.push(`${part}.${DISC_AMPLITUDES[c]!}`);
      all.push(amplitude);
      derivatives.push(amplitude === 0 ? null : columns[c]!);
    });
  }

  const size = names.length;
  const used = derivatives.flatMap((column, j) => column === null ? [] : [j]);
  const lengths = used.map((j) => Math.sqrt(dot(derivatives[j]!, derivatives[j]!)));
  const normal = Matrix.zeros(used.length, used.length);
  used.forEach((a, i) =>
    used.forEach((b, k) => {
      if (k > i) return;
      const value = dot(derivatives[a]!, derivatives[b]!) / (lengths[i]! * lengths[k]!);
      normal.set(i, k, value);
      normal.set(k, i, value);
    })
  );
  used.forEach((j, i) => {
    const prior = parameters[j]?.prior ?? null;
    if (prior !== null) {
      normal.set(i, i, normal.get(i, i) + (scale / (prior * lengths[i]!)) ** 2);
    }
  });
  const inverse = used.length === 0 ? normal : pseudoInverse(normal);
  const covariance = new Float64Array(size * size);
  used.forEach((a, i) =>
    used.forEach((b, k) => {
      covariance[a * size + b] = scale * scale * inverse.get(i, k) / (lengths[i]! * lengths[k]!);
    })
  );
  const own = used.map((_, i) => i).filter((i) => !names[used[i]!]!.startsWith("geometry."));
  return {
    names,
    values: Float64Array.from(all),
    covariance,
    derivatives,
    degenerate: degeneratePairs(normal.selection(own, own), own.map((i) => names[used[i]!]!)),
  };
}

function degeneratePairs(normal: Matrix, names: readonly string[]): [string, string][] {
  const pairs: [string, string][] = [];
  if (names.length === 0) return pairs;
  const inverse = pseudoInverse(normal);
  const part = (name: string) => name.split(".")[0];
  for (let i = 0; i < names.length; i++) {
    for (let k = 0; k < i; k++) {
      if (part(names[i]!) === part(names[k]!)) continue;
      const correlation = inverse.get(i, k) / Math.sqrt(inverse.get(i, i) * inverse.get(k, k));
      if (Math.abs(correlation) > DEGENERATE) pairs.push([names[k]!, names[i]!]);
    }
  }
  return pairs;
}
