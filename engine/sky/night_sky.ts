import { airToVacuum } from "./air.ts";

/** An emission line of the night sky, at rest in the observer's frame. */
export interface NightSkyLine {
  /** Name, as in "[O I] 5577". */
  readonly name: string;
  /** Wavelength in air, Å; for a blend its middle. */
  readonly air_angstrom: number;
  /** Wavelength in vacuum, Å. */
  readonly vacuum_angstrom: number;
  /** True when it is single and stands apart, so that it can measure the zero of wavelengths. */
  readonly isolated: boolean;
  /** Where it comes from: the atmosphere, or street lamps. */
  readonly origin: "airglow" | "lamps";
  /** Where the wavelength comes from. */
  readonly source: string;
}

type Row = readonly [name: string, air: number, isolated: boolean];

const ATOMS = "NIST Atomic Spectra Database, from memory";
const HYDROXYL = "Osterbrock et al. 1996, PASP 108, 277 and 1997, PASP 109, 614, from memory";

const AIRGLOW: readonly Row[] = [
  ["[N I] 5199", 5199.1, false],
  ["[O I] 5577", 5577.339, true],
  ["Na I 5890", 5889.951, false],
  ["Na I 5896", 5895.924, false],
  ["[O I] 6300", 6300.304, true],
  ["[O I] 6364", 6363.776, true],
];

const LAMPS: readonly Row[] = [
  ["Hg I 4047", 4046.563, true],
  ["Hg I 4358", 4358.328, true],
  ["Hg I 5461", 5460.735, true],
  ["Hg I 5770", 5769.598, true],
  ["Hg I 5791", 5790.663, true],
  ["Na I 5683", 5682.633, false],
  ["Na I 5688", 5688.205, false],
  ["Na I 6154", 6154.226, false],
  ["Na I 6161", 6160.747, false],
];

const BANDS: readonly Row[] = [
  ["OH 6864", 6863.955, true],
  ["OH 6923", 6923.220, true],
  ["OH 7276", 7276.405, true],
  ["OH 7284", 7284.439, false],
  ["OH 7316", 7316.282, true],
  ["OH 7341", 7340.885, true],
  ["OH 7750", 7750.640, true],
  ["OH 7794", 7794.112, true],
  ["OH 7821", 7821.503, true],
  ["OH 7914", 7913.708, true],
  ["OH 7965", 7964.650, true],
  ["OH 7993", 7993.332, true],
  ["OH 8344", 8344.602, true],
  ["OH 8399", 8399.170, true],
  ["OH 8430", 8430.174, true],
  ["OH 8465", 8465.2, false],
  ["OH 8493", 8493.389, false],
  ["OH 8505", 8504.6, false],
  ["OH 8778", 8778.3, false],
  ["OH 8791", 8791.186, false],
  ["OH 8827", 8827.096, true],
  ["OH 8886", 8885.850, true],
  ["OH 8904", 8903.114, false],
  ["OH 8920", 8919.641, true],
  ["OH 8943", 8943.395, false],
  ["OH 8958", 8957.9, false],
  ["OH 8988", 8988.366, false],
  ["OH 9002", 9001.3, false],
  ["OH 9038", 9038.1, false],
  ["OH 9376", 9375.961, true],
  ["OH 9420", 9419.729, false],
  ["OH 9440", 9439.650, true],
  ["OH 9503", 9502.815, true],
];

const line =
  (origin: NightSkyLine["origin"], source: string) =>
  ([name, air_angstrom, isolated]: Row): NightSkyLine => ({
    name,
    air_angstrom,
    vacuum_angstrom: airToVacuum(air_angstrom),
    isolated,
    origin,
    source,
  });

/**
 * The strong emission lines of the night sky between 4000 and 9600 Å, in order of wavelength, in the observer's
 * frame. Hydroxyl lines are unresolved doublets.
 */
export const nightSkyLines: readonly NightSkyLine[] = [
  ...AIRGLOW.map(line("airglow", ATOMS)),
  ...LAMPS.map(line("lamps", ATOMS)),
  ...BANDS.map(line("airglow", HYDROXYL)),
].sort((a, b) => a.air_angstrom - b.air_angstrom);
