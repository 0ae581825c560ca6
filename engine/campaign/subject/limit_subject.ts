import type { DetectionMap } from "../../figures/mod.ts";
import type { VelocityMap } from "../../tomography/mod.ts";
import {
  compareHypotheses,
  defaultSets,
  type DetectionLimit,
  detectionLimit,
  hypothesesOf,
  noiseBank,
  prepareProblem,
  weighingData,
} from "../../weighing/mod.ts";
import { pause } from "../pause.ts";
import type { LineSettings } from "../schema/lines_section.ts";
import type { Session } from "../session.ts";
import { weighOptionsOf } from "../weigh_options.ts";

/** Places along each side of the square that is searched. */
const CELLS = 31;

/** What a compact source would need in order to be found. */
export interface LineLimit {
  /** The limit, place by place, as shares of the line's light. */
  readonly limit: DetectionLimit;
  /** Equivalent width of the line, km/s. */
  readonly light_kms: number;
}

/**
 * The detection limit of one line as `weigh` computes it, on the square of its map: on top of the
 * simplest of the sets of `[weigh]`, at its false-alarm rate of 1 %.
 *
 * @param session The target at work.
 * @param line The line.
 * @param map Size of the map.
 * @returns The limit.
 * @throws {InputError} When `[binary]` does not fix the orbital speeds.
 */
export async function lineLimit(
  session: Session,
  line: LineSettings,
  map: Pick<VelocityMap, "half_width_kms">,
): Promise<LineLimit> {
  const trail = await session.trail(line);
  const options = await weighOptionsOf(session, line);
  const sets = hypothesesOf(options.sets ?? defaultSets);
  const prepared = prepareProblem(weighingData(trail, options), options, { ...options, sets });
  await pause(session.signal);
  const least = Math.min(...sets.map((parts) => parts.length));
  const { trials, seed } = options;
  const { hypotheses } = compareHypotheses(
    prepared,
    sets.filter((parts) => parts.length === least),
    { seed },
  );
  const { fit, fit_errors } = hypotheses[0]!;
  const { problem, richest, line_scale } = prepared;
  const bank = noiseBank(problem, richest, { line_scale });
  await pause(session.signal);
  const grid = { cells: CELLS, half_width_kms: map.half_width_kms };
  const { limit } = detectionLimit(problem, { fit, fit_errors, bank, trials, seed, grid });
  let light_kms = 0;
  for (const [width] of fit.evaluation.amplitudes.values()) light_kms += width!;
  return { limit, light_kms };
}

/**
 * A detection limit as a panel shows it: the flux that is found in 95 % of all cases, interpolated to
 * the pixels of the map, blank where none would be and beyond the map's circle.
 *
 * @param found The limit.
 * @param map Size of the map.
 * @returns The panel's data.
 */
export function limitMap(
  { limit, light_kms }: LineLimit,
  map: Pick<VelocityMap, "pixels" | "half_width_kms">,
): DetectionMap {
  const { pixels, half_width_kms } = map;
  const flux = limit.fraction_95.map((share) =>
    share === null || share >= 1 ? NaN : light_kms * share / (1 - share)
  );
  const { cells } = limit;
  const intensity = new Float64Array(pixels * pixels);
  const step = (cells - 1) / (pixels - 1);
  const middle = (pixels - 1) / 2;
  for (let k = 0; k < intensity.length; k++) {
    const column = k % pixels, row = Math.floor(k / pixels);
    const x = column * step, y = row * step;
    const left = Math.min(cells - 2, Math.floor(x)), low = Math.min(cells - 2, Math.floor(y));
    const at = (i: number, j: number) => flux[(low + j) * cells + left + i]!;
    const [p, q] = [x - left, y - low];
    intensity[k] = Math.hypot(column - middle, row - middle) > middle
      ? NaN
      : (1 - q) * ((1 - p) * at(0, 0) + p * at(1, 0)) + q * ((1 - p) * at(0, 1) + p * at(1, 1));
  }
  return {
    pixels,
    half_width_kms,
    intensity,
    sigma_kms: limit.sigma_kms,
    found_part: 0.95,
    false_alarm: limit.false_alarm,
    trials: limit.trials,
  };
}
