import type { PartName } from "../synthesis/mod.ts";
import { dot, productsOf, solveBrightnesses } from "./brightnesses.ts";
import type { FitSetup } from "./fit_setup.ts";
import type { Hypothesis } from "./hypothesis.ts";
import type { ParameterState } from "./parameter_state.ts";
import type { RingTable } from "./ring_table.ts";
import { type TemplateStore, templateStore } from "./templates.ts";
import type { WeighingData } from "./weighing_data.ts";
import { makeWhitening, type SoftDirection, type Whitening } from "./whitening.ts";

/** Data made ready to be fitted with any hypothesis. */
export interface Problem {
  /** The samples. */
  readonly data: WeighingData;
  /** What is known of model and geometry. */
  readonly setup: FitSetup;
  /** What makes the noise white. */
  readonly whitening: Whitening;
  /** Whitened data, N values. */
  readonly observed: Float64Array;
  /** Templates of the parts. */
  readonly templates: TemplateStore;
  /** Candidates of a scan, kept because they do not depend on the data. */
  readonly scans: Map<PartName, readonly ScanCandidate[]>;
  /** The same before whitening: they do not depend on nuisances either. */
  readonly places: Map<PartName, readonly ScanPlace[]>;
  /** Rings of discs, by their grid. */
  readonly rings: Map<string, RingTable>;
  /** Options it was made with. */
  readonly options: ProblemOptions;
}

/** One place of a part's parameters, with its trail of unit equivalent width. */
export interface ScanPlace {
  /** Values of the part's parameters by path. */
  readonly values: ReadonlyMap<string, number>;
  /** The trail, N values. */
  readonly trail: Float64Array;
}

/** The same with its whitened trail. */
export interface ScanCandidate {
  /** Values of the part's parameters by path. */
  readonly values: ReadonlyMap<string, number>;
  /** Whitened trail of unit equivalent width. */
  readonly column: Float64Array;
  /** Its squared length. */
  readonly length_squared: number;
}

/** Options of {@linkcode makeProblem}. */
export interface ProblemOptions {
  /**
   * Degree of each exposure's baseline in velocity; −1 for none.
   *
   * @default {1}
   */
  readonly baseline_order?: number;
  /**
   * Light over continuum, N values: what an error of the continuum multiplies.
   *
   * @default 1 everywhere
   */
  readonly light?: Float64Array;
  /**
   * Nuisances with a prior.
   *
   * @default {[]}
   */
  readonly soft?: readonly SoftDirection[];
}

/**
 * Makes data ready to be fitted.
 *
 * @param data The samples.
 * @param setup What is known.
 * @param options Baseline and nuisances.
 * @returns The problem.
 *
 * @example
 * ```ts
 * import { makeProblem, simulateTrail, weighingData } from "@millrace/millrace/weighing";
 * import { binaryFrom } from "@millrace/millrace/binary";
 * import { assertEquals } from "@std/assert";
 *
 * const binary = binaryFrom({ k_accretor_kms: 70, k_donor_kms: 320 });
 * const data = weighingData(simulateTrail({ parts: ["disc"] }, { binary, exposures: 5, seed: 1 }));
 * assertEquals(makeProblem(data, { binary }).observed.length, data.flux.length);
 * ```
 */
export function makeProblem(
  data: WeighingData,
  setup: FitSetup,
  options: ProblemOptions = {},
): Problem {
  const rings = new Map<string, RingTable>();
  return problemWith({ data, setup, rings, places: new Map() }, options);
}

function problemWith(
  kept: Pick<Problem, "data" | "setup" | "rings" | "places">,
  options: ProblemOptions,
): Problem {
  const { data, setup, rings } = kept;
  const whitening = makeWhitening(data, options);
  const asymmetry = setup.asymmetry ?? 2;
  return {
    ...kept,
    whitening,
    observed: whitening.apply(data.flux),
    templates: templateStore(data.sampling, { whitening, asymmetry, rings }),
    scans: new Map(),
    options,
  };
}

/** The same problem with other nuisances: what is made before whitening is shared. */
export function withNuisances(problem: Problem, options: ProblemOptions): Problem {
  const { data, setup, rings, places } = problem;
  return problemWith({ data, setup, rings, places }, options);
}

/** The same problem with other data on the same samples: templates and scans are shared. */
export function withFlux(problem: Problem, flux: Float64Array): Problem {
  return {
    ...problem,
    data: { ...problem.data, flux },
    observed: problem.whitening.apply(flux),
  };
}

/** The same problem with the geometry held where the orbit puts it. */
export function withGeometryHeld(problem: Problem): Problem {
  return { ...problem, setup: { ...problem.setup, errors: {} } };
}

/** A model at one place of its parameters, its brightnesses solved for. */
export interface Evaluation {
  /** Parts in order, each with its amplitudes: its equivalent width, km/s, then its asymmetries. */
  readonly amplitudes: ReadonlyMap<PartName, readonly number[]>;
  /** Columns of all amplitudes that are not held at zero. */
  readonly active: readonly Float64Array[];
  /** Whitened data minus model, N values. */
  readonly residual: Float64Array;
  /** Equivalent width of a source that is no part of the model, km/s; 0 without one. */
  readonly extra: number;
}

/**
 * Solves for the brightnesses at one state.
 *
 * @param problem The problem.
 * @param options The parts, the state, and the whitened trail of a source beside them.
 * @default extra None
 * @returns Amplitudes and residual; null where the model cannot be.
 */
export function evaluate(
  problem: Problem,
  { hypothesis, state, extra = null }: {
    readonly hypothesis: Hypothesis;
    readonly state: ParameterState;
    readonly extra?: Float64Array | null;
  },
): Evaluation | null {
  const own: Float64Array[] = [];
  const signed: Float64Array[] = [];
  for (const part of hypothesis) {
    const made = problem.templates.of(part, state);
    if (made === null) return null;
    own.push(made.columns[0]!);
    signed.push(...made.columns.slice(1));
  }
  const columns = [...signed, ...own, ...extra === null ? [] : [extra]];
  const products = productsOf(columns, problem.observed);
  const found = solveBrightnesses(products, signed.length);
  const residual = problem.observed.slice();
  const active: Float64Array[] = [];
  columns.forEach((column, j) => {
    const amplitude = found[j]!;
    if (amplitude === 0) return;
    active.push(column);
    for (let n = 0; n < residual.length; n++) residual[n]! -= amplitude * column[n]!;
  });
  const amplitudes = new Map<PartName, readonly number[]>(
    hypothesis.map((part, j) => {
      const whole = found[signed.length + j]!;
      return [part, part === "disc" ? [whole, ...found.subarray(0, signed.length)] : [whole]];
    }),
  );
  return { amplitudes, active, residual, extra: extra === null ? 0 : found[columns.length - 1]! };
}

/** Sum of squares. */
export function sumOfSquares(values: Float64Array): number {
  return dot(values, values);
}
