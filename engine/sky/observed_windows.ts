import { airToVacuum } from "./air.ts";
import { factorOfVelocity } from "./doppler.ts";
import { type NightSkyLine, nightSkyLines } from "./night_sky.ts";

/** A stretch of wavelength that holds something other than the target, in the observer's frame. */
export interface ObservedWindow {
  /** What is there, as in "O2 A band". */
  readonly name: string;
  /** Shortest wavelength, Å, in vacuum. */
  readonly low_angstrom: number;
  /** Longest wavelength, Å, in vacuum. */
  readonly high_angstrom: number;
  /** Shortest wavelength, Å, in air. */
  readonly low_air_angstrom: number;
  /** Longest wavelength, Å, in air. */
  readonly high_air_angstrom: number;
  /** Where the limits come from. */
  readonly source: string;
}

function inAir(
  name: string,
  [low, high]: readonly [number, number],
  source: string,
): ObservedWindow {
  return {
    name,
    low_angstrom: airToVacuum(low),
    high_angstrom: airToVacuum(high),
    low_air_angstrom: low,
    high_air_angstrom: high,
    source,
  };
}

const PRACTICE = "common practice, no source";

/**
 * Absorption bands of the Earth's atmosphere between 5000 and 10 000 Å, in order of wavelength. "Weak" in a name: a
 * few per cent deep at most, in damp air.
 */
export const telluricBands: readonly ObservedWindow[] = ([
  ["H2O weak 5700", 5685, 5760],
  ["H2O weak 5920", 5880, 5990],
  ["O2 gamma band", 6276, 6320],
  ["H2O weak 6510", 6455, 6600],
  ["O2 B band", 6866, 6960],
  ["H2O 7200", 7160, 7340],
  ["O2 A band", 7592, 7705],
  ["H2O 8230", 8105, 8375],
  ["H2O 8980", 8900, 9285],
  ["H2O 9350", 9285, 9800],
] as const).map(([name, low, high]) => inAir(name, [low, high], PRACTICE));

const CLOUDS = "atomic lines from NIST (from memory), 120 km/s either side for the clouds' motion";
const DIFFUSE = "Jenniskens & Désert 1994, A&AS 106, 39, from memory; twice the width either side";

const about = (name: string, air: number, velocity_kms: number): ObservedWindow =>
  inAir(
    name,
    [air * factorOfVelocity(-velocity_kms), air * factorOfVelocity(velocity_kms)],
    CLOUDS,
  );

const band = (air: number, width: number): ObservedWindow =>
  inAir(`diffuse band ${Math.round(air)}`, [air - 2 * width, air + 2 * width], DIFFUSE);

/**
 * Interstellar lines and the strong diffuse bands, in order of wavelength. They stand still at the barycentre rather
 * than at the observer, but the windows are wide enough for both.
 */
export const interstellarWindows: readonly ObservedWindow[] = [
  about("Ca II K interstellar", 3933.663, 120),
  about("Ca II H interstellar", 3968.468, 120),
  about("Ca I interstellar", 4226.728, 120),
  about("CH+ interstellar", 4232.548, 120),
  about("CH interstellar", 4300.313, 120),
  about("Na I D2 interstellar", 5889.951, 120),
  about("Na I D1 interstellar", 5895.924, 120),
  about("K I 7665 interstellar", 7664.899, 120),
  about("K I 7699 interstellar", 7698.9644, 120),
  band(4428.4, 12.3),
  band(4726.3, 2.7),
  band(4762.6, 2.5),
  band(5705.2, 3.5),
  band(5780.5, 2.1),
  band(5797.1, 1.0),
  band(6010.1, 4.1),
  band(6177, 23),
  band(6195.97, 0.7),
  band(6203.1, 1.8),
  band(6269.8, 1.4),
  band(6283.85, 4.8),
  band(6379.3, 0.8),
  band(6613.6, 1.1),
  band(6660.6, 0.8),
  band(6993.2, 1.0),
  band(7224.0, 1.3),
  band(8620.8, 4.3),
].sort((a, b) => a.low_angstrom - b.low_angstrom);

/**
 * Windows about night-sky emission lines, as wide as an instrument shows them.
 *
 * @param resolution_angstrom Full width at half maximum of the instrumental profile, Å.
 * @param options Options.
 * @param options.lines The lines.
 * @default lines All of `nightSkyLines`
 * @returns One window a line, 1.5 full widths either side.
 *
 * @example
 * ```ts
 * import { nightSkyWindows } from "@millrace/millrace/sky";
 * import { assert } from "@std/assert";
 *
 * const windows = nightSkyWindows(2);
 * assert(windows.some(({ low_angstrom, high_angstrom }) => low_angstrom < 5578 && high_angstrom > 5580));
 * ```
 */
export function nightSkyWindows(
  resolution_angstrom: number,
  { lines = nightSkyLines }: { lines?: readonly NightSkyLine[] } = {},
): ObservedWindow[] {
  const reach = 1.5 * resolution_angstrom;
  return lines.map(({ name, air_angstrom, source }) =>
    inAir(name, [air_angstrom - reach, air_angstrom + reach], source)
  );
}
