import { randomStream } from "../../engine/numerics/mod.ts";
import { encodeExposure, type RawExposure } from "../../engine/spectra/mod.ts";

/** A target file for {@linkcode writeCampaign}. */
export const TARGET = `format = 1
title = "Small"

[orbit]
period_d = 0.0823714
zero_bjd_tdb = 2460311.62107
systemic_kms = 0.0

[[exposures]]
files = ["*.fits"]

[[lines]]
name = "H beta"
reach_kms = 1500
continuum_kms = [[-4000, -2000], [2000, 4000]]

[map]
half_width_kms = 1200
resamples = 4
`;

/** One raw exposure of a steady emission line. */
export function rawExposure(k: number, change: Partial<RawExposure> = {}): RawExposure {
  const wavelength_angstrom = Float64Array.from({ length: 320 }, (_, i) => 4790 + 0.45 * i);
  const stream = randomStream(1, k);
  return {
    object: "Small",
    ra_deg: 83.1,
    dec_deg: -12.4,
    site: { latitude_deg: -12.4, longitude_east_deg: 15.2, height_m: 1700 },
    wavelength_angstrom,
    medium: "air",
    flux: wavelength_angstrom.map((w) =>
      100 * (1 + 2 * Math.exp(-(((w - 4861.3) / 6) ** 2))) + stream.normal()
    ),
    flux_unit: "adu",
    error: wavelength_angstrom.map(() => 1),
    start: [2460311, 0.4 + 0.004 * k],
    exposure_s: 300,
    resolution_angstrom: 1.5,
    ...change,
  };
}

/** Writes six exposures and a target file into a new folder; returns the folder. */
export async function writeCampaign(
  options: {
    target?: string;
    change?: (k: number) => Partial<RawExposure>;
  } = {},
): Promise<string> {
  const { target = TARGET, change = () => ({}) } = options;
  const folder = await Deno.makeTempDir({ prefix: "millrace-test-" });
  await Deno.writeTextFile(`${folder}/star.toml`, target);
  for (let k = 0; k < 6; k++) {
    await Deno.writeFile(`${folder}/e${k}.fits`, encodeExposure(rawExposure(k, change(k))));
  }
  return folder;
}
