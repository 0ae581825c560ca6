import { InputError } from "../errors.ts";
import type { TrailOptions } from "./trail_options.ts";

/**
 * Throws unless the options of a trail are in range.
 *
 * @param options The options.
 * @throws {InputError} Naming the key, the rule and the value.
 *
 * @example
 * ```ts
 * import { requireTrailOptions } from "@millrace/millrace/trail";
 * import { InputError } from "@millrace/millrace/errors";
 * import { lineNamed } from "@millrace/millrace/sky";
 * import { assertThrows } from "@std/assert";
 *
 * assertThrows(
 *   () => requireTrailOptions({ line: lineNamed("H beta"), ephemeris: null as never, reach_kms: -1 }),
 *   InputError,
 *   "reach must be positive",
 * );
 * ```
 */
export function requireTrailOptions(options: TrailOptions): void {
  const action = `make trail of ${options.line.name}`;
  const fail = (rule: string, value: unknown, key: string, unit?: string) => {
    throw new InputError({ action, rule, value, key, ...(unit === undefined ? {} : { unit }) });
  };
  const { reach_kms, step_kms, resolution_kms, noise_scale, phase_bins, continuum_order } = options;
  const positive = (value: unknown) => typeof value !== "number" || value > 0 && value < Infinity;
  if (!positive(reach_kms)) fail("reach must be positive", reach_kms, "lines.reach_kms", "km/s");
  if (!positive(step_kms)) fail("step of the grid must be positive", step_kms, "step_kms", "km/s");
  if (!positive(resolution_kms)) {
    fail("resolution must be positive", resolution_kms, "lines.resolution_kms", "km/s");
  }
  if (!positive(noise_scale)) {
    fail("noise scale must be positive", noise_scale, "trail.noise_scale");
  }
  if (!Number.isInteger(phase_bins ?? 0) || (phase_bins ?? 0) < 0) {
    fail("number of phase bins must be a whole number from 0", phase_bins, "trail.phase_bins");
  }
  if (!Number.isInteger(continuum_order ?? 0) || (continuum_order ?? 0) < 0) {
    fail("order must be a whole number from 0", continuum_order, "trail.continuum_order");
  }
  for (const [low, high] of options.continuum_kms ?? []) {
    if (!(low < high)) {
      fail("a window must have its lower end first", [low, high], "lines.continuum_kms", "km/s");
    }
  }
  if (options.continuum_kms?.length === 0) {
    fail("at least one continuum window is needed", [], "lines.continuum_kms");
  }
  for (const [from, to] of options.skip_phases ?? []) {
    if (!(from <= to)) {
      fail("a range must have its lower end first", [from, to], "trail.skip_phases", "cycles");
    }
  }
}
