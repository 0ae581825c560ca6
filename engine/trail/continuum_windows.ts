import { type SpectralLine, spectralLines } from "../sky/mod.ts";
import type { VelocityRange } from "./continuum.ts";
import { lineVelocity } from "./velocity.ts";

const FURTHEST_KMS = 6000;
const WANTED_KMS = 2000;
const NARROWEST_KMS = 300;
const FEWEST_KMS = 500;

// Lines that discs and their surroundings show widely; nebular lines and those of donors are narrow
// or weak, and a sigma-clipped fit copes with them.
const WIDE = /^(H|Pa|Br|He I|He II|Bowen|N III|C III|Fe II|Ca II|O I|Mg II|Na I D\d?)(?= |$)/;

function clearSide(reach: number, width: number, neighbours: readonly number[]): VelocityRange[] {
  let free: VelocityRange[] = [[reach, reach + FURTHEST_KMS]];
  for (const v of neighbours) {
    free = free.flatMap(([low, high]): VelocityRange[] =>
      v + width <= low || v - width >= high
        ? [[low, high]]
        : ([[low, v - width], [v + width, high]] as VelocityRange[])
    ).filter(([low, high]) => high - low >= NARROWEST_KMS);
  }
  const out: VelocityRange[] = [];
  let total = 0;
  for (const [low, high] of free) {
    if (total >= WANTED_KMS) break;
    const end = Math.min(high, low + WANTED_KMS - total);
    out.push([low, end]);
    total += end - low;
  }
  return total >= FEWEST_KMS ? out : [];
}

// Where no place is clear of lines as wide as that, the clearest: clear of narrower ones.
function clearest(reach: number, width: number, neighbours: readonly number[]): VelocityRange[] {
  for (const part of [1, 0.7, 0.5, 0.3]) {
    const found = clearSide(reach, part * width, neighbours);
    if (found.length > 0) return found;
  }
  return [[reach, reach + WANTED_KMS]];
}

/**
 * Windows of continuum for a line when none are stated: on each side the nearest 2000 km/s beyond
 * the reach that lie at least a line's half width away from every line that discs show widely. Where
 * a side has no such place within 6000 km/s, a smaller distance; in the end the 2000 km/s just beyond
 * the reach.
 *
 * @param line The line.
 * @param options Reach of the line and half width of its neighbours, km/s.
 * @returns Windows in order of velocity, km/s about the line.
 *
 * @example
 * ```ts
 * import { continuumWindows } from "@millrace/millrace/trail";
 * import { lineNamed } from "@millrace/millrace/sky";
 * import { assert } from "@std/assert";
 *
 * // He I 4922 stands at +3740 km/s from H beta: the windows keep clear of it.
 * const windows = continuumWindows(lineNamed("H beta"), { reach_kms: 2000 });
 * assert(windows.every(([low, high]) => low > 3740 || high < 3740));
 * ```
 */
export function continuumWindows(
  line: SpectralLine,
  options: {
    /** Velocities used on either side of the line, km/s. */
    readonly reach_kms: number;
    /**
     * Half width of a neighbouring line, km/s.
     * @default 0.6 of the reach
     */
    readonly width_kms?: number;
  },
): VelocityRange[] {
  const { reach_kms, width_kms = 0.6 * reach_kms } = options;
  const others = spectralLines
    .filter((other) => WIDE.test(other.name))
    .map((other) => lineVelocity(other.vacuum_angstrom, line))
    .filter((v) => Math.abs(v) > 50);
  const red = clearest(reach_kms, width_kms, others);
  const blue = clearest(reach_kms, width_kms, others.map((v) => -v));
  return [...blue.map(([low, high]): VelocityRange => [-high, -low]).reverse(), ...red];
}
