import { type Ephemeris, orbitalPhase } from "../binary/mod.ts";
import type { Spectrum } from "../spectra/mod.ts";

/** When an exposure happened, in orbits. */
export interface FoldedExposure {
  /** Whole orbits since the zero. */
  readonly cycle: number;
  /** Phase at mid-exposure in [0, 1), cycles. */
  readonly phase: number;
  /** Duration, cycles. */
  readonly phase_width: number;
}

/**
 * Folds an exposure on an ephemeris, its period derivative included.
 *
 * @param spectrum The exposure: its mid-exposure and duration.
 * @param ephemeris The ephemeris.
 * @returns Cycle, phase and width.
 * @throws {InputError} When the period is not positive, or the quadratic ephemeris never reaches
 * the exposure.
 *
 * @example
 * ```ts
 * import { foldExposure } from "@millrace/millrace/trail";
 * import { assertAlmostEquals } from "@std/assert";
 *
 * const folded = foldExposure({ mid: [2460311, 0.125], exposure_s: 864 }, {
 *   period_d: 0.1,
 *   period_error_d: 0,
 *   zero: [2460311, 0],
 *   zero_error_d: 0,
 *   covariance_d2: 0,
 *   period_derivative: 0,
 *   zero_marks: "donor-conjunction",
 * });
 * assertAlmostEquals(folded.phase, 0.25, 1e-12);
 * assertAlmostEquals(folded.phase_width, 0.1, 1e-12);
 * ```
 */
export function foldExposure(
  spectrum: Pick<Spectrum, "mid" | "exposure_s">,
  ephemeris: Ephemeris,
): FoldedExposure {
  const { cycle, phase } = orbitalPhase(ephemeris, spectrum.mid);
  const period = ephemeris.period_d * (1 + ephemeris.period_derivative * (cycle + phase));
  return { cycle, phase, phase_width: spectrum.exposure_s / 86400 / period };
}
