// Raw exposures of an invented system, as a telescope would deliver them, with the truth beside.
import { type Ephemeris, orbitalPhase } from "../../engine/binary/mod.ts";
import { randomStream } from "../../engine/numerics/mod.ts";
import {
  lineNamed,
  midExposureBjd,
  parseIsoDate,
  type SplitDate,
  splitDate,
  vacuumToAir,
} from "../../engine/sky/mod.ts";
import { lineVelocity } from "../../engine/trail/mod.ts";
import type { EncodedFile, RawExposure } from "../../engine/spectra/mod.ts";

export const SITE = { latitude_deg: -30.2, longitude_east_deg: -70.7, height_m: 2700 };
export const TARGET = { ra_deg: 83.1, dec_deg: -12.4 };
export const EPHEMERIS: Ephemeris = {
  period_d: 0.08,
  period_error_d: 1e-8,
  zero: [2460310, 0.6],
  zero_error_d: 1e-5,
  covariance_d2: 0,
  period_derivative: 0,
  zero_marks: "donor-conjunction",
};

export interface Making {
  count?: number;
  start?: string;
  exposure_s?: number;
  cadence_s?: number;
  signal_to_noise?: number;
  seed?: number;
  medium?: "air" | "vacuum";
  errors?: boolean;
  low_angstrom?: number;
  high_angstrom?: number;
  step_angstrom?: number;
  resolution_angstrom?: number;
  uneven?: boolean;
}

const H_BETA = lineNamed("H beta");

/** A compact source that moves as the map point (300, 400) km/s, on a flat continuum. */
export function truth(velocity_kms: number, phase: number): number {
  const orbit = 2 * Math.PI * phase;
  const centre = -300 * Math.cos(orbit) + 400 * Math.sin(orbit);
  return 1.5 * Math.exp(-0.5 * ((velocity_kms - centre) / 150) ** 2);
}

/** Raw exposures of H beta, one night, topocentric, UTC start. */
export function madeExposures(making: Making = {}): RawExposure[] {
  const {
    count = 24,
    start = "2024-01-01T02:00:00",
    exposure_s = 240,
    cadence_s = 300,
    signal_to_noise = 50,
    seed = 1,
    medium = "air",
    errors = true,
    low_angstrom = 4760,
    high_angstrom = 5010,
    step_angstrom = 0.5,
    resolution_angstrom = 1.2,
    uneven = false,
  } = making;
  const random = randomStream(seed);
  const first = parseIsoDate(start);
  const pixels = Math.round((high_angstrom - low_angstrom) / step_angstrom);
  const vacuum = Float64Array.from(
    { length: pixels },
    (_, i) => low_angstrom + step_angstrom * (i + (uneven ? 0.2 * (i / pixels) ** 2 * pixels : 0)),
  );
  return Array.from({ length: count }, (_, k) => {
    const begin: SplitDate = splitDate(first[0], first[1] + k * cadence_s / 86400);
    const { bjd, observer_factor } = midExposureBjd({ date: begin, exposure_s }, {
      target: TARGET,
      site: SITE,
    });
    const { phase } = orbitalPhase(EPHEMERIS, bjd);
    const level = 1000 * (1 + 0.2 * Math.sin(3 * k));
    const wavelength_angstrom = medium === "air"
      ? vacuum.map((_, i) => vacuumToAir(vacuum[0]!) + step_angstrom * i)
      : vacuum;
    const flux = new Float64Array(pixels);
    const error = new Float64Array(pixels);
    wavelength_angstrom.forEach((w, i) => {
      // Air to vacuum by iteration here, so that the test does not lean on the code's own inverse.
      let v = w;
      for (let n = 0; n < 6; n++) v = w * v / vacuumToAir(v);
      const rest = (medium === "air" ? v : w) * observer_factor;
      const shape = 1 + truth(lineVelocity(rest, H_BETA), phase);
      error[i] = level / signal_to_noise * Math.sqrt(shape);
      flux[i] = level * shape + error[i]! * random.normal();
    });
    return {
      object: "VX-0417",
      ...TARGET,
      wavelength_angstrom,
      medium,
      flux,
      flux_unit: "adu",
      error: errors ? error : null,
      start: begin,
      exposure_s,
      site: SITE,
      resolution_angstrom,
    };
  });
}

const folders: string[] = [];
globalThis.addEventListener("unload", () => {
  for (const folder of folders) Deno.removeSync(folder, { recursive: true });
});

/** Writes files into a fresh folder and gives their paths. */
export async function written(files: readonly EncodedFile[]): Promise<string[]> {
  const folder = await Deno.makeTempDir({ prefix: "millrace-spectra-" });
  folders.push(folder);
  const paths: string[] = [];
  for (const { name, bytes } of files) {
    await Deno.writeFile(`${folder}/${name}`, bytes);
    paths.push(`${folder}/${name}`);
  }
  return paths;
}
