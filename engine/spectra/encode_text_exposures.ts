import { isoDate } from "../sky/mod.ts";
import type { RawExposure } from "./raw_exposure.ts";

/** One exposure as a text table. */
export function encodeText(exposure: RawExposure): Uint8Array {
  const { flux, error, wavelength_angstrom, medium } = exposure;
  const lines = [
    "# written by Millrace",
    `# wavelength in ${medium}, angstrom, topocentric; flux, ${exposure.flux_unit}${
      error === null ? "" : "; error, 0 = masked"
    }`,
    `# AIRORVAC = ${medium}`,
    ...Array.from(
      wavelength_angstrom,
      (w, i) =>
        `${w.toFixed(5)} ${flux[i]!.toPrecision(8)}${
          error === null ? "" : ` ${(Number.isFinite(error[i]!) ? error[i]! : 0).toPrecision(6)}`
        }`,
    ),
  ];
  return new TextEncoder().encode(`${lines.join("\n")}\n`);
}

/** The log of text tables, as CSV. */
export function encodeLog(exposures: readonly RawExposure[], names: readonly string[]): Uint8Array {
  const header = "file,start_utc,exposure_s,ra,dec,latitude,longitude,height,resolution";
  const rows = exposures.map((e, i) =>
    [
      names[i],
      isoDate(e.start),
      e.exposure_s,
      e.ra_deg,
      e.dec_deg,
      e.site.latitude_deg,
      e.site.longitude_east_deg,
      e.site.height_m,
      e.resolution_angstrom ?? "",
    ].join(",")
  );
  return new TextEncoder().encode(`${["# written by Millrace", header, ...rows].join("\n")}\n`);
}
