import { InputError } from "../errors.ts";
import { type CardSpec, encodeFits, type HduSpec } from "../fits/mod.ts";
import { geocentricOfSite, isoDate } from "../sky/mod.ts";
import type { RawExposure } from "./raw_exposure.ts";
import type { SpectraLayout } from "./read_options.ts";

/** A file to be written. */
export interface EncodedFile {
  /** Its name, without folder. */
  readonly name: string;
  /** Its content. */
  readonly bytes: Uint8Array;
}

/** Options of {@linkcode encodeExposures}. */
export interface EncodeExposuresOptions {
  /**
   * How the files are laid out.
   * @default "image"
   */
  readonly layout?: SpectraLayout;
  /**
   * First part of the files' names.
   * @default "exposure"
   */
  readonly stem?: string;
}

const card = (keyword: string, value: CardSpec["value"], comment: string): CardSpec => ({
  keyword,
  value,
  comment,
});

const CREATOR = card("CREATOR", "Millrace", "program that wrote this file");

function startCards(exposure: RawExposure): CardSpec[] {
  return [
    card("DATE-OBS", isoDate(exposure.start), "start of exposure"),
    card("XPOSURE", exposure.exposure_s, "[s] exposure time"),
  ];
}

function siteCards(exposure: RawExposure): CardSpec[] {
  const [x, y, z] = geocentricOfSite(exposure.site);
  return [
    CREATOR,
    card("OBJECT", exposure.object, "target"),
    card("RA", exposure.ra_deg, "[deg] right ascension, ICRS"),
    card("DEC", exposure.dec_deg, "[deg] declination, ICRS"),
    card("RADESYS", "ICRS", "frame of RA and DEC"),
    card("TIMESYS", "UTC", "scale of times"),
    card("OBSGEO-X", x, "[m] observatory, geocentric"),
    card("OBSGEO-Y", y, "[m] observatory, geocentric"),
    card("OBSGEO-Z", z, "[m] observatory, geocentric"),
    card("SPECSYS", "TOPOCENT", "wavelengths as observed"),
    ...(exposure.resolution_angstrom === null
      ? []
      : [card("SPEC_RES", exposure.resolution_angstrom, "[Angstrom] FWHM of the profile")]),
  ];
}

function isLinear(wavelength: Float64Array): boolean {
  const step = (wavelength.at(-1)! - wavelength[0]!) / (wavelength.length - 1);
  return wavelength.every((w, i) => Math.abs(w - wavelength[0]! - i * step) < 1e-6 * step);
}

function axisCards({ wavelength_angstrom: w, medium }: RawExposure): CardSpec[] {
  return [
    card("CTYPE1", medium === "air" ? "AWAV" : "WAVE", `wavelength in ${medium}`),
    card("CUNIT1", "Angstrom", "unit of the axis"),
    card("CRPIX1", 1, "reference pixel"),
    card("CRVAL1", w[0]!, "wavelength of the reference pixel"),
    card("CDELT1", (w.at(-1)! - w[0]!) / (w.length - 1), "wavelength step"),
  ];
}

const written = (error: Float64Array) => error.map((e) => Number.isFinite(e) ? e : 0);

// Uneven pixels get a list of wavelengths beside them.
function listHdu({ wavelength_angstrom: w, medium }: RawExposure): HduSpec {
  return {
    kind: "image",
    name: medium === "air" ? "WAVE_AIR" : "WAVE_VAC",
    shape: [w.length],
    data: w,
    unit: "Angstrom",
  };
}

function encodeImage(exposure: RawExposure): Uint8Array {
  const { flux, flux_unit, error, wavelength_angstrom } = exposure;
  const linear = isLinear(wavelength_angstrom);
  const shape = [flux.length];
  return encodeFits([
    {
      kind: "image",
      shape,
      data: Float32Array.from(flux),
      unit: flux_unit,
      cards: [
        ...(linear ? axisCards(exposure) : []),
        ...startCards(exposure),
        ...siteCards(exposure),
      ],
    },
    ...(error === null ? [] : [{
      kind: "image" as const,
      name: "ERROR",
      shape,
      data: Float32Array.from(written(error)),
      unit: flux_unit,
    }]),
    ...(linear ? [] : [listHdu(exposure)]),
  ]);
}

function encodeTable(exposure: RawExposure): Uint8Array {
  const { flux, flux_unit, error, wavelength_angstrom, medium } = exposure;
  return encodeFits([{ kind: "image", shape: [], data: null, cards: [CREATOR] }, {
    kind: "table",
    name: "SPECTRUM",
    cards: [...startCards(exposure), ...siteCards(exposure)],
    columns: [
      {
        name: "WAVE",
        unit: "Angstrom",
        data: wavelength_angstrom,
        description: `wavelength in ${medium}`,
      },
      { name: "FLUX", unit: flux_unit, data: Float32Array.from(flux) },
      ...(error === null ? [] : [{
        name: "IVAR",
        unit: `1/(${flux_unit})2`,
        data: Float32Array.from(error, (e) => Number.isFinite(e) ? 1 / (e * e) : 0),
        description: "inverse variance, 0 = masked",
      }]),
    ],
  }]);
}

function encodeStack(exposures: readonly RawExposure[]): Uint8Array {
  const first = exposures[0]!;
  const pixels = first.flux.length;
  const alike = exposures.every((e) =>
    e.flux.length === pixels && e.wavelength_angstrom.every((w, i) =>
      w === first.wavelength_angstrom[i]
    ) &&
    (e.error === null) === (first.error === null)
  );
  if (!alike) {
    throw new InputError({
      action: "write stack of exposures",
      rule: "all exposures must have the same wavelengths, and errors all or none",
      value: `${exposures.length} exposures`,
      remedy: 'use layout "image"',
    });
  }
  const shape = [pixels, exposures.length];
  const rows = (pick: (e: RawExposure) => Float64Array) => {
    const out = new Float32Array(pixels * exposures.length);
    exposures.forEach((e, r) => out.set(pick(e), r * pixels));
    return out;
  };
  const linear = isLinear(first.wavelength_angstrom);
  return encodeFits([
    {
      kind: "image",
      shape,
      data: rows((e) => e.flux),
      unit: first.flux_unit,
      cards: [...(linear ? axisCards(first) : []), ...siteCards(first)],
    },
    ...(first.error === null ? [] : [{
      kind: "image" as const,
      name: "ERROR",
      shape,
      data: rows((e) => written(e.error!)),
      unit: first.flux_unit,
    }]),
    ...(linear ? [] : [listHdu(first)]),
    {
      kind: "table",
      name: "EXPOSURES",
      columns: [
        {
          name: "DATE_OBS",
          data: exposures.map((e) => isoDate(e.start)),
          description: "start of exposure, UTC",
        },
        { name: "XPOSURE", unit: "s", data: Float64Array.from(exposures, (e) => e.exposure_s) },
      ],
    },
  ]);
}

function encodeText(exposure: RawExposure): Uint8Array {
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

function encodeLog(exposures: readonly RawExposure[], names: readonly string[]): Uint8Array {
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

/**
 * Writes exposures as a telescope or a pipeline would: "image", one FITS file each; "table", one
 * binary table each, with inverse variances; "stack", one FITS file with a row each and a table of
 * times; "text", one text table each, and `log.csv`.
 *
 * @param exposures The exposures, at least one.
 * @param options Layout, first part of the names.
 * @returns The files, in order of the exposures; the log last.
 * @throws {InputError} When there is no exposure, or those of a stack differ in wavelength.
 *
 * @example
 * ```ts
 * import { encodeExposures } from "@millrace/millrace/spectra";
 * import { assertEquals } from "@std/assert";
 *
 * const files = encodeExposures([{
 *   object: "VX-0417",
 *   ra_deg: 83.1,
 *   dec_deg: -12.4,
 *   wavelength_angstrom: Float64Array.of(4860, 4861, 4862),
 *   medium: "air",
 *   flux: Float64Array.of(1, 2, 1),
 *   flux_unit: "adu",
 *   error: null,
 *   start: [2460311, 0.5],
 *   exposure_s: 120,
 *   site: { latitude_deg: -30.2, longitude_east_deg: -70.7, height_m: 2700 },
 *   resolution_angstrom: 0.97,
 * }]);
 * assertEquals(files.map((file) => file.name), ["exposure-001.fits"]);
 * ```
 */
export function encodeExposures(
  exposures: readonly RawExposure[],
  options: EncodeExposuresOptions = {},
): EncodedFile[] {
  const { layout = "image", stem = "exposure" } = options;
  if (exposures.length === 0) {
    throw new InputError({
      action: "write exposures",
      rule: "there must be at least one",
      value: 0,
    });
  }
  const width = Math.max(3, String(exposures.length).length);
  const name = (i: number, ending: string) =>
    `${stem}-${String(i + 1).padStart(width, "0")}.${ending}`;
  if (layout === "stack") return [{ name: `${stem}s.fits`, bytes: encodeStack(exposures) }];
  if (layout === "image" || layout === "table") {
    const encode = layout === "image" ? encodeImage : encodeTable;
    return exposures.map((exposure, i) => ({ name: name(i, "fits"), bytes: encode(exposure) }));
  }
  const files = exposures.map((exposure, i) => ({
    name: name(i, "txt"),
    bytes: encodeText(exposure),
  }));
  const log = encodeLog(exposures, files.map((file) => file.name));
  return [...files, { name: "log.csv", bytes: log }];
}

/**
 * Writes one exposure as one FITS file.
 *
 * @param exposure The exposure.
 * @param options Layout: "image" or "table".
 * @returns The bytes.
 *
 * @example
 * ```ts
 * import { encodeExposure } from "@millrace/millrace/spectra";
 * import { parseFits } from "@millrace/millrace/fits";
 * import { assertEquals } from "@std/assert";
 *
 * const bytes = encodeExposure({
 *   object: "VX-0417",
 *   ra_deg: 83.1,
 *   dec_deg: -12.4,
 *   wavelength_angstrom: Float64Array.of(4860, 4861, 4862),
 *   medium: "air",
 *   flux: Float64Array.of(1, 2, 1),
 *   flux_unit: "adu",
 *   error: null,
 *   start: [2460311, 0.5],
 *   exposure_s: 120,
 *   site: { latitude_deg: -30.2, longitude_east_deg: -70.7, height_m: 2700 },
 *   resolution_angstrom: 0.97,
 * });
 * assertEquals(parseFits(bytes).hdus[0]!.header.string("CTYPE1"), "AWAV");
 * ```
 */
export function encodeExposure(
  exposure: RawExposure,
  options: { readonly layout?: "image" | "table" } = {},
): Uint8Array {
  return options.layout === "table" ? encodeTable(exposure) : encodeImage(exposure);
}
