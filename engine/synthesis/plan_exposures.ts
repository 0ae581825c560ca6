import { addDays, type SplitDate } from "../sky/mod.ts";
import { InputError } from "../errors.ts";
import type { PlannedExposure } from "./observation.ts";

/** Options of {@linkcode planExposures}. */
export interface PlanOptions {
  /** Number of exposures. */
  readonly count: number;
  /** Exposure time, s. */
  readonly exposure_s: number;
  /**
   * Time between the end of one and the start of the next, s.
   *
   * @default {0}
   */
  readonly overhead_s?: number;
}

/**
 * A run of exposures one after another.
 *
 * @param first Start of the first, JD(UTC).
 * @param options How many, how long.
 * @returns The exposures.
 * @throws {InputError} When there is no exposure or its time is not positive.
 *
 * @example
 * ```ts
 * import { planExposures } from "@millrace/millrace/synthesis";
 * import { assertAlmostEquals } from "@std/assert";
 *
 * const night = planExposures([2460311, 0.05], { count: 60, exposure_s: 140, overhead_s: 20 });
 * assertAlmostEquals(night[59]!.start[1], 0.05 + 59 * 160 / 86400, 1e-12);
 * ```
 */
export function planExposures(first: SplitDate, options: PlanOptions): PlannedExposure[] {
  const { count, exposure_s, overhead_s = 0 } = options;
  if (!Number.isInteger(count) || count < 1) {
    throw new InputError({
      action: "plan exposures",
      rule: "their number must be whole and at least 1",
      value: count,
    });
  }
  if (!(exposure_s > 0 && exposure_s < Infinity && overhead_s >= 0 && overhead_s < Infinity)) {
    throw new InputError({
      action: "plan exposures",
      rule: "exposure time must be positive and the time between exposures not negative",
      value: [exposure_s, overhead_s],
      unit: "s",
    });
  }
  return Array.from({ length: count }, (_, k) => ({
    start: addDays(first, k * (exposure_s + overhead_s) / 86400),
    exposure_s,
  }));
}
