import { type Ephemeris, instantOf, orbitsSinceZero } from "../binary/mod.ts";
import type { Trail } from "../trail/mod.ts";

/**
 * The same trail folded on another ephemeris. Its display grid is only told its new phases: bins of
 * phase are not made anew.
 *
 * @param trail A trail.
 * @param options The ephemeris it is folded on, and the new one.
 * @returns A trail with other phases, cycles and exposure widths.
 *
 * @example
 * ```ts
 * import type { Ephemeris } from "@millrace/millrace/binary";
 * import type { Trail } from "@millrace/millrace/trail";
 * import { rephase } from "@millrace/millrace/orbit";
 *
 * function later(trail: Trail, from: Ephemeris): Trail {
 *   return rephase(trail, { from, to: { ...from, period_d: 1.0001 * from.period_d } });
 * }
 * ```
 */
export function rephase(trail: Trail, options: {
  /** The ephemeris that made the trail's phases. */
  readonly from: Ephemeris;
  /** The ephemeris wanted. */
  readonly to: Ephemeris;
}): Trail {
  const { from, to } = options;
  const { sampling, grid } = trail;
  const orbits = sampling.phase.map((phase, i) =>
    orbitsSinceZero(to, instantOf(from, phase + sampling.cycle[i]!))
  );
  const cycle = orbits.map(Math.floor);
  const phase = orbits.map((x, i) => x - cycle[i]!);
  const phase_width = sampling.phase_width.map((w) => w * from.period_d / to.period_d);
  const by_exposure = grid.rows === sampling.count;
  return {
    ...trail,
    sampling: { ...sampling, phase, cycle, phase_width },
    grid: by_exposure ? { ...grid, phase, phase_width } : grid,
  };
}
