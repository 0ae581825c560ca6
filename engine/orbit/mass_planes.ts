import { massFunction } from "../binary/mod.ts";
import type { MassInput } from "./mass_input.ts";
import type { MassDraws, MassSolution } from "./mass_solution.ts";

/** A curve of a plane, with what is constant along it. */
export interface PlaneCurve {
  /** What is constant, for a direct label, as in "i 70°". */
  readonly label: string;
  /** Abscissae. */
  readonly x: Float64Array;
  /** Ordinates. */
  readonly y: Float64Array;
}

/** The M1–M2 and q–i planes as data for a plate. */
export interface MassPlanes {
  /** M1 (x) against M2 (y), solar: curves of constant inclination (from K2) and of constant q. */
  readonly masses: readonly PlaneCurve[];
  /** q (x) against inclination (y), degrees: curves of constant M1 (from K2). */
  readonly inclinations: readonly PlaneCurve[];
  /** Draws that fill both planes; null without inclination. */
  readonly draws: MassDraws | null;
}

/**
 * What K2 allows, for the M1–M2 plane and the q–i plane: the accretor's mass function fixes
 * M1 sin³i/(1+q)².
 *
 * @param solution Masses.
 * @param input What they were derived from.
 * @returns Curves and draws; no curves without K2.
 *
 * @example
 * ```ts
 * import { randomStream } from "@millrace/millrace/numerics";
 * import { massPlanes, solveMasses } from "@millrace/millrace/orbit";
 * import { assert } from "@std/assert";
 *
 * const input = {
 *   period_d: { value: 0.25, error: 0 },
 *   k_accretor_kms: { value: 120, error: 2 },
 *   k_donor_kms: { value: 150, error: 2 },
 * };
 * const planes = massPlanes(solveMasses(input, { random: randomStream(1) }), input);
 * assert(planes.masses.some((curve) => curve.label === "i 90°"));
 * ```
 */
export function massPlanes(solution: MassSolution, input: MassInput): MassPlanes {
  const { draws } = solution;
  const k2 = input.k_donor_kms;
  if (!k2) return { masses: [], inclinations: [], draws };
  const f = massFunction(k2.value, input.period_d.value, {
    eccentricity: input.eccentricity ?? 0,
  });
  const q = Float64Array.from({ length: 120 }, (_, k) => 0.02 * 100 ** (k / 119));
  const tilts = [90, 75, 60, 45, 30];
  const masses = tilts.map((deg): PlaneCurve => {
    const cube = Math.sin(deg * Math.PI / 180) ** 3;
    const x = q.map((ratio) => f * (1 + ratio) ** 2 / cube);
    return { label: `i ${deg}°`, x, y: x.map((m, k) => m * q[k]!) };
  });
  if (solution.mass_ratio) {
    const { median, error_low, error_high } = solution.mass_ratio;
    const lines = [["q − σ", median - error_low], ["q", median], [
      "q + σ",
      median + error_high,
    ]] as const;
    for (const [label, ratio] of lines) {
      const x = Float64Array.from({ length: 2 }, (_, k) => k * 20 * f);
      masses.push({ label, x, y: x.map((m) => m * ratio) });
    }
  }
  const inclinations = [0.4, 0.6, 0.8, 1, 1.2, 1.44, 2, 3, 5, 10].map((mass): PlaneCurve => {
    const kept = q.filter((ratio) => f * (1 + ratio) ** 2 <= mass);
    return {
      label: `M1 ${mass}`,
      x: kept,
      y: kept.map((ratio) => Math.asin(Math.cbrt(f * (1 + ratio) ** 2 / mass)) * 180 / Math.PI),
    };
  }).filter((curve) => curve.x.length > 1);
  return { masses, inclinations, draws };
}
