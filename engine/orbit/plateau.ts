import { chiSquareTail, fTail } from "../numerics/mod.ts";
import { type CircularFit, fitCircular } from "./circular_fit.ts";
import type { DiagnosticDiagram } from "./diagnostic_diagram.ts";
import { fitOrNull } from "./fit_or_null.ts";
import { measuredOnly, type VelocityCurve } from "./velocity_curve.ts";

/** What a diagnostic diagram says about the accretor's orbit. */
export interface Plateau {
  /** Whether K, γ and crossing phase stand still over enough separations, at a phase near ½. */
  readonly accepted: boolean;
  /** Why not; empty when accepted. */
  readonly reasons: readonly string[];
  /** First and last half separation of the run that was judged, km/s; null when none is usable. */
  readonly half_separations_kms: readonly [number, number] | null;
  /** Velocities averaged over the run, with errors that know of shared pixels; null when none. */
  readonly curve: VelocityCurve | null;
  /** The orbit through them; null when none. */
  readonly fit: CircularFit | null;
  /** Lowest and highest K over all usable separations, km/s; null when none is usable. */
  readonly k_range_kms: readonly [number, number] | null;
  /** Chance of so much change of K, γ and phase along the run if there were none. */
  readonly trend_probability: number | null;
  /** Chance of so large a second harmonic if the orbit were a sinusoid. */
  readonly harmonic_probability: number | null;
  /** Crossing phase less ½, in its errors; null when none. */
  readonly phase_offset_sigma: number | null;
}

/** Options of {@linkcode findPlateau}. */
export interface PlateauOptions {
  /** Standard deviation of the ephemeris's phase at the data, cycles. @default {0} */
  readonly phase_error?: number;
  /** Whether the ephemeris's zero is the donor's conjunction, so that phases mean something. @default {true} */
  readonly zero_is_conjunction?: boolean;
}

// Stated rules. The probabilities are the usual ones; they were not tuned on the tests.
const LEAST_SEPARATIONS = 4;
const LEAST_MEASURED = 0.8;
const LEAST_TREND_PROBABILITY = 0.05;
const LEAST_HARMONIC_PROBABILITY = 0.01;
const MOST_PHASE_SIGMA = 2;
const MOST_PHASE_OFFSET = 0.05;
const LEAST_K_SIGMA = 3;

/** A combination of the separations' velocities, Σ u_a v_a, with its error. */
function combine(
  diagram: DiagnosticDiagram,
  first: number,
  weights: readonly number[],
): VelocityCurve {
  const { rows, covariance } = diagram;
  const width = rows.length, count = covariance.length;
  const velocity_kms = new Float64Array(count).fill(NaN);
  const error_kms = new Float64Array(count).fill(Infinity);
  for (let i = 0; i < count; i++) {
    let value = 0, variance = 0, whole = true;
    weights.forEach((u, k) => {
      const row = rows[first + k]!;
      if (!(row.curve.error_kms[i]! < Infinity)) whole = false;
      value += u * row.curve.velocity_kms[i]!;
      weights.forEach((w, l) => {
        variance += u * w * covariance[i]![(first + k) * width + first + l]!;
      });
    });
    if (!whole) continue;
    velocity_kms[i] = value;
    error_kms[i] = Math.sqrt(variance);
  }
  return { ...rows[first]!.curve, velocity_kms, error_kms };
}

/** Chance of a second harmonic as strong as the one found, for a curve that has none. */
function harmonicProbability(curve: VelocityCurve, fit: CircularFit): number {
  const { orbits, velocity_kms, error_kms } = measuredOnly(curve);
  if (orbits.length < 8) return 1;
  // Residuals of the orbit against sin and cos of twice the phase, with the same weights.
  const [mean, a, b] = fit.harmonics_kms as unknown as [number, number, number];
  let ss = 0, cc = 0, sc = 0, rs = 0, rc = 0, left = 0;
  orbits.forEach((x, k) => {
    const angle = 2 * Math.PI * x;
    const weight = 1 / (error_kms[k]! ** 2 + fit.jitter_kms ** 2);
    const off = velocity_kms[k]! - mean - a * Math.sin(angle) - b * Math.cos(angle);
    const s = Math.sin(2 * angle), c = Math.cos(2 * angle);
    ss += weight * s * s;
    cc += weight * c * c;
    sc += weight * s * c;
    rs += weight * off * s;
    rc += weight * off * c;
    left += weight * off * off;
  });
  const gain = (cc * rs * rs + ss * rc * rc - 2 * sc * rs * rc) / (ss * cc - sc * sc);
  const spare = orbits.length - 5;
  const f = gain / 2 / (Math.max(left - gain, 1e-300) / spare);
  return fTail(f, { dof1: 2, dof2: spare });
}

/**
 * Chance of the change along the run in γ, A and B. A red drift of γ up to the relativistic one is no
 * change: part of the gas may be slower than its wing.
 */
function trendProbability(diagram: DiagnosticDiagram, first: number, last: number): number {
  const speeds = diagram.rows.slice(first, last + 1).map((row) => row.half_separation_kms);
  const middle = speeds.reduce((sum, a) => sum + a, 0) / speeds.length;
  const square = speeds.reduce((sum, a) => sum + (a - middle) ** 2, 0);
  const slope = speeds.map((a) => (a - middle) / square);
  const fit = fitOrNull(combine(diagram, first, slope));
  if (!fit) return 1;
  const [gamma, a, b] = fit.harmonics_kms as unknown as [number, number, number];
  const run = diagram.rows.slice(first, last + 1);
  const drift = run.reduce((sum, row, k) => sum + slope[k]! * row.expected_drift_kms, 0);
  const unexplained = gamma < 0 ? gamma : Math.max(0, gamma - drift);
  // Nearly diagonal for spread phases; γ, A, B are judged together.
  const chi_square = [unexplained, a, b].reduce(
    (sum, change, j) => sum + change * change / fit.covariance.get(j, j),
    0,
  );
  return chiSquareTail(chi_square, 3);
}

function judge(
  diagram: DiagnosticDiagram,
  first: number,
  last: number,
  options: PlateauOptions,
): Omit<Plateau, "k_range_kms"> {
  const { phase_error = 0, zero_is_conjunction = true } = options;
  const run = diagram.rows.slice(first, last + 1);
  // Equal weights: 1/σ² would favour the slow end, where a spot too weak to break the plateau still
  // shows most.
  const curve = combine(diagram, first, run.map(() => 1 / run.length));
  const half_separations_kms = [
    run[0]!.half_separation_kms,
    run.at(-1)!.half_separation_kms,
  ] as const;
  if (!fitOrNull(curve)) {
    return {
      accepted: false,
      reasons: ["too few exposures have wings at these separations"],
      half_separations_kms,
      curve,
      fit: null,
      trend_probability: null,
      harmonic_probability: null,
      phase_offset_sigma: null,
    };
  }
  const fit = fitCircular(curve);
  const trend_probability = trendProbability(diagram, first, last);
  const harmonic_probability = harmonicProbability(curve, fit);
  const offset = fit.crossing_phase - 0.5;
  const sigma = Math.hypot(fit.crossing_phase_error, phase_error);
  const phase_offset_sigma = zero_is_conjunction ? offset / sigma : null;
  const reasons: string[] = [];
  if (fit.k_kms < LEAST_K_SIGMA * fit.k_error_kms) {
    reasons.push(
      `K ${fit.k_kms.toFixed(1)} km/s is below ${LEAST_K_SIGMA} of its errors, ` +
        `${fit.k_error_kms.toFixed(1)} km/s: its noise floor`,
    );
  }
  if (phase_offset_sigma === null) {
    reasons.push("the zero of phase is not the donor's conjunction, so the phase cannot be judged");
  } else if (
    Math.abs(offset) > MOST_PHASE_OFFSET || Math.abs(phase_offset_sigma) > MOST_PHASE_SIGMA
  ) {
    reasons.push(
      `the crossing phase ${fit.crossing_phase.toFixed(3)} is not ½ ` +
        `(${phase_offset_sigma.toFixed(1)} of its errors)`,
    );
  }
  if (trend_probability < LEAST_TREND_PROBABILITY) {
    reasons.push(
      `K, γ or phase still change with separation (chance ${trend_probability.toPrecision(2)})`,
    );
  }
  if (harmonic_probability < LEAST_HARMONIC_PROBABILITY) {
    reasons.push(
      `the velocities are no sinusoid (second harmonic by chance: ${
        harmonic_probability.toPrecision(2)
      })`,
    );
  }
  return {
    accepted: reasons.length === 0,
    reasons,
    half_separations_kms,
    curve,
    fit,
    trend_probability,
    harmonic_probability,
    phase_offset_sigma,
  };
}

/**
 * The plateau of a diagnostic diagram, by a stated rule. A separation is usable when four fifths of
 * the exposures were measured there and the typical error is under half the Gaussians' σ. A plateau
 * is a run of at least four neighbouring separations that reaches the widest usable one, over which
 *
 * - K, γ (but for its relativistic drift) and phase do not change (p ≥ 0.05, shared pixels allowed for);
 * - the velocities have no second harmonic (p ≥ 0.01);
 * - the crossing phase is ½ within 2 of its errors, that of the ephemeris included, and within 0.05;
 * - K is above 3 of its errors.
 *
 * The longest such run counts, and its velocities are averaged with equal weights. Without one K is
 * not measured: the range of K over the usable separations is all that can be said.
 *
 * @param diagram The diagram.
 * @param options What is known of the zero of phase.
 * @returns The plateau, or why there is none.
 *
 * @example
 * ```ts
 * import { type DiagnosticDiagram, findPlateau } from "@millrace/millrace/orbit";
 * import { assertEquals } from "@std/assert";
 *
 * const empty: DiagnosticDiagram = { line: "H beta", sigma_kms: 100, rows: [], covariance: [] };
 * assertEquals(findPlateau(empty).accepted, false);
 * ```
 */
export function findPlateau(diagram: DiagnosticDiagram, options: PlateauOptions = {}): Plateau {
  const { rows, sigma_kms } = diagram;
  const usable = rows.map((row) =>
    row.fit !== null && row.measured >= LEAST_MEASURED && row.typical_error_kms < sigma_kms / 2
  );
  const last = usable.lastIndexOf(true);
  let first = last;
  while (first > 0 && usable[first - 1]) first--;
  const speeds = rows.filter((_, k) => usable[k]).map((row) => row.fit!.k_kms);
  const k_range_kms = speeds.length === 0
    ? null
    : [Math.min(...speeds), Math.max(...speeds)] as const;
  if (last - first + 1 < LEAST_SEPARATIONS) {
    return {
      accepted: false,
      reasons: [
        `only ${
          Math.max(0, last < 0 ? 0 : last - first + 1)
        } neighbouring separations have wings ` +
        `above the noise, ${LEAST_SEPARATIONS} are needed`,
      ],
      half_separations_kms: null,
      curve: null,
      fit: null,
      k_range_kms,
      trend_probability: null,
      harmonic_probability: null,
      phase_offset_sigma: null,
    };
  }
  let widest: Omit<Plateau, "k_range_kms"> | undefined;
  for (let start = first; start <= last - LEAST_SEPARATIONS + 1; start++) {
    const judged = judge(diagram, start, last, options);
    if (judged.accepted) return { ...judged, k_range_kms };
    widest = judged;
  }
  return { ...widest!, k_range_kms };
}
