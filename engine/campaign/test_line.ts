import { InputError } from "../errors.ts";
import { type AnyMap, anyMapSteps, momentTest, systemicByParity } from "../tomography/mod.ts";
import type { Trail } from "../trail/mod.ts";
import type { Progress } from "../workers/mod.ts";
import type { LineSign } from "./inversion/inverted.ts";
import { pause } from "./pause.ts";
import { turned } from "./sign_of.ts";

/** Simulations of the test of a line's core: its probability is then good to a twentieth. */
const SIMULATIONS = 20;

/** What the tests before an inversion say of a line; null what could not be tested. */
export type LineTests =
  & Pick<AnyMap, "moments" | "mirror" | "systemic" | "warnings">
  & {
    readonly core: AnyMap["core"] | null;
    readonly best_reduced_chi_square: number | null;
  };

/**
 * Asks whether any map can have made a line's trail. A line of either sign has no positive map to be
 * compared with: only the moments of its profiles are tested. One with blends is not tested.
 *
 * @param trail The trail.
 * @param options How it will be mapped.
 * @param options.sign Sign of the line.
 * @param options.blended Whether other lines are mapped with it.
 * @param options.systemic_kms Systemic velocity, km/s.
 * @param options.half_width_kms Half-width of the map, km/s.
 * @param options.seed Seed of the simulations.
 * @param options.force Whether to go on in spite of a large gap in phase.
 * @param options.progress Told of each simulation.
 * @param options.signal Aborts the work.
 * @returns The tests.
 * @throws {InputError} When the data cannot be mapped at all.
 */
export async function testLine(
  trail: Trail,
  options: {
    sign: LineSign;
    blended: boolean;
    systemic_kms: number;
    half_width_kms: number;
    seed: number;
    force: boolean;
    progress?: Progress;
    signal?: AbortSignal;
  },
): Promise<LineTests> {
  const { sign, systemic_kms, half_width_kms, seed, force, progress, signal } = options;
  const { continuum_error } = trail;
  const none = { mirror: null, core: null, best_reduced_chi_square: null };
  if (options.blended) {
    const text = "whether any map can fit was not tested, as the tests know of one line alone";
    const warnings = [{ code: "blends-not-tested", line: trail.line.name, text }];
    return { ...none, moments: null, systemic: null, warnings };
  }
  if (sign === "mixed") {
    const range = { systemic_kms, half_range_kms: half_width_kms, continuum_error };
    return {
      ...none,
      moments: orNull(() => momentTest(trail, range)),
      systemic: orNull(() => systemicByParity(trail, range)),
      warnings: [],
    };
  }
  const line = trail.line.name;
  const steps = anyMapSteps(sign === "absorption" ? turned(trail) : trail, {
    pixels: 3,
    half_width_kms,
    systemic_kms,
    seed,
    simulations: SIMULATIONS,
    continuum_error,
    force,
  });
  let step = steps.next();
  for (; step.done !== true; step = steps.next()) {
    progress?.(step.value, SIMULATIONS, `${line}: can any map fit?`);
    await pause(signal);
  }
  const found = step.value;
  return { ...found, warnings: found.warnings.map((warning) => ({ ...warning, line })) };
}

/** The tests in numbers, as `check.json` and `map.json` have them. */
export interface LineTestsSummary {
  /** Moments of the profiles against trigonometric polynomials: probability. */
  readonly moments_p: number | null;
  /** Where they depart most: phase, order of the moment, standard deviations. */
  readonly moments_worst: { phase: number; order: number; sigma: number } | null;
  /** Profiles half an orbit apart: probability. */
  readonly mirror_p: number | null;
  /** Where they depart most: phase, velocity in km/s, standard deviations. */
  readonly mirror_worst: { phase: number; velocity_kms: number; sigma: number } | null;
  /** The middle of the line against positive maps: probability. */
  readonly core_p: number | null;
  /** How much deeper it is than the best positive map, over the line's peak. */
  readonly core_miss_over_peak: number | null;
  /** Reduced chi-square of the best positive map. */
  readonly best_reduced_chi_square: number | null;
  /** γ by the parity of the moments, km/s. */
  readonly systemic_kms: number | null;
  /** Its standard deviation, km/s. */
  readonly systemic_error_kms: number | null;
}

/** The tests in numbers. */
export function testsSummary(tests: LineTests): LineTestsSummary {
  const { moments, mirror, core, systemic, best_reduced_chi_square } = tests;
  const worst = mirror?.worst;
  return {
    moments_p: moments?.p_value ?? null,
    moments_worst: moments?.worst ?? null,
    mirror_p: mirror?.p_value ?? null,
    mirror_worst: worst === undefined
      ? null
      : { phase: worst.phase, velocity_kms: worst.velocity_kms, sigma: worst.sigma },
    core_p: core?.p_value ?? null,
    core_miss_over_peak: core?.miss_over_peak ?? null,
    best_reduced_chi_square,
    systemic_kms: systemic?.systemic_kms ?? null,
    systemic_error_kms: systemic?.error_kms ?? null,
  };
}

function orNull<T>(run: () => T): T | null {
  try {
    return run();
  } catch (error) {
    if (error instanceof InputError) return null;
    throw error;
  }
}
