import { InputError } from "../errors.ts";
import type { FitsFile, Hdu } from "../fits/mod.ts";
import type { OneDecision } from "./decision.ts";
import { besideOf, errorFrom, withMask } from "./error_kind.ts";
import { type Facts, headerFacts, joinFacts } from "./facts.ts";
import { fitsAxis } from "./fits_axis.ts";
import type { RecordedAxis } from "./recorded_axis.ts";
import { angstromIn, unitBySize } from "./wavelength_units.ts";

/** An image of fluxes with what stands beside it, in rows of pixels. */
export interface FluxImage {
  /** The HDU of the fluxes. */
  readonly hdu: Hdu;
  /** Pixels of a row. */
  readonly pixels: number;
  /** Number of rows. */
  readonly rows: number;
  /** Flux of a row, from 0. */
  readonly flux: (row: number) => Float64Array;
  /** One standard deviation of a row; null when there are no errors. */
  readonly error: (row: number) => Float64Array | null;
  /** Wavelength axis of a row. */
  readonly axis: (row: number) => RecordedAxis;
  /** Unit of the flux. */
  readonly unit: string;
  /** Facts of the file: of the HDU, then of the primary one. */
  readonly facts: Facts;
  /** What was decided. */
  readonly decisions: readonly OneDecision[];
}

function imagesOf(fits: FitsFile): Hdu[] {
  return fits.hdus.filter((hdu) => hdu.kind === "image" && hdu.shape.every((n) => n > 0));
}

/**
 * The HDU that holds the fluxes: the first image that is nothing else by name.
 *
 * @param fits The file.
 * @returns The HDU; undefined when there is none.
 */
export function fluxHdu(fits: FitsFile): Hdu | undefined {
  const images = imagesOf(fits);
  return images.find((hdu) => /^(FLUX|SCI|DATA|SPECTRUM|SPEC)$/i.test(hdu.name)) ??
    images.find((hdu) => besideOf(hdu.name) === null) ?? images[0];
}

const same = (a: readonly number[], b: readonly number[]) =>
  a.filter((n) => n > 1).join() === b.filter((n) => n > 1).join();

// Bands on a third axis, as reduction packages write them: BANDIDn says which is which.
function bandsOf(hdu: Hdu): { flux: number; error: number | null; named: boolean } {
  const names = Array.from(
    { length: hdu.shape[2] ?? 1 },
    (_, b) => hdu.header.string(`BANDID${b + 1}`)?.toLowerCase() ?? "",
  );
  const find = (word: RegExp) => names.findIndex((name) => word.test(name));
  const flux = find(/^(spectrum|flux|extracted)/);
  const error = find(/^(sigma|error|std)/);
  return { flux: Math.max(0, flux), error: error < 0 ? null : error, named: names[0] !== "" };
}

function listedAxis(hdu: Hdu, row: number, pixels: number): RecordedAxis {
  const { data, unit } = hdu.image();
  const own = data.length >= (row + 1) * pixels
    ? data.subarray(row * pixels, (row + 1) * pixels)
    : data;
  const isLog = besideOf(hdu.name) === "log-wavelength";
  const values = isLog ? own.map((v) => 10 ** v) : own;
  const name = unit ?? hdu.header.string("CUNIT1") ?? "";
  const size = unitBySize(values[0] ?? NaN);
  const factor = angstromIn(name) ?? angstromIn(size ?? "");
  if (factor === null) {
    throw new InputError({
      action: "read wavelength axis",
      rule: "the unit of the wavelengths must be known",
      value: name,
      key: `BUNIT of HDU ${hdu.name}`,
      remedy: "write a unit such as Angstrom or nm",
    });
  }
  const medium = /VAC/i.test(hdu.name) ? "vacuum" : /AIR/i.test(hdu.name) ? "air" : null;
  return {
    wavelength_angstrom: values.map((v) => v * factor),
    medium,
    decisions: [{
      what: "wavelength axis",
      value: `${isLog ? "log10 " : ""}list of ${pixels} pixels`,
      from: `HDU ${hdu.name}`,
      assumed: false,
    }, {
      what: "wavelength unit",
      value: angstromIn(name) === null ? size! : name,
      from: angstromIn(name) === null ? "size of the values" : `unit of HDU ${hdu.name}`,
      assumed: angstromIn(name) === null,
    }],
  };
}

/**
 * Opens the fluxes of an image file with errors, masks and wavelengths from other HDUs or bands.
 *
 * @param fits The file.
 * @returns The image in rows.
 * @throws {InputError} When there is no image, or it has more axes than rows and bands.
 *
 * @example
 * ```ts
 * import { openFluxImage } from "@millrace/millrace/spectra";
 * import { encodeFits, parseFits } from "@millrace/millrace/fits";
 * import { assertEquals } from "@std/assert";
 *
 * const bytes = encodeFits([
 *   { kind: "image", shape: [2], data: Float32Array.of(5, 6) },
 *   { kind: "image", name: "IVAR", shape: [2], data: Float32Array.of(4, 0) },
 * ]);
 * const image = openFluxImage(parseFits(bytes));
 * assertEquals([image.rows, image.flux(0), image.error(0)], [1, Float64Array.of(5, 6), Float64Array.of(0.5, Infinity)]);
 * ```
 */
export function openFluxImage(fits: FitsFile): FluxImage {
  const hdu = fluxHdu(fits);
  const place = fits.file === undefined ? {} : { file: fits.file };
  if (hdu === undefined) {
    throw new InputError({
      action: "read spectrum",
      rule: "the file must hold an image of fluxes, and it holds none",
      value: fits.hdus.map((h) => `${h.index}: ${h.name || h.kind}`).join(", "),
      ...place,
      remedy: 'for a binary table state layout = "table"',
    });
  }
  const [pixels = 0, rows = 1, bands = 1, more = 1] = hdu.shape;
  if (more > 1) {
    throw new InputError({
      action: "read spectrum",
      rule: "an image must have at most three axes: wavelength, spectrum, band",
      value: hdu.shape,
      ...place,
    });
  }
  const { data, unit } = hdu.image();
  const decisions: OneDecision[] = [];
  const say = (what: string, value: string, from: string, assumed = false) =>
    decisions.push({ what, value, from, assumed });
  const plane = (b: number) => (row: number) => {
    const start = (b * rows + row) * pixels;
    return data.slice(start, start + pixels);
  };
  const band = bandsOf(hdu);
  if (bands > 1) {
    const id = hdu.header.string(`BANDID${band.flux + 1}`);
    say(
      "flux",
      `band ${band.flux + 1} of ${bands}`,
      id === undefined ? "first band" : `BANDID${band.flux + 1} = '${id}'`,
      !band.named,
    );
  }

  let error: FluxImage["error"] = () => null;
  const beside = imagesOf(fits).filter((h) => h !== hdu);
  const errors = beside.find((h) => {
    const kind = besideOf(h.name);
    return (kind === "error" || kind === "variance" || kind === "inverse-variance") &&
      same(h.shape, hdu.shape);
  });
  if (errors !== undefined) {
    const kind = besideOf(errors.name) as "error" | "variance" | "inverse-variance";
    const values = errors.image().data;
    error = (row) => errorFrom(values.subarray(row * pixels, (row + 1) * pixels), kind);
    say("errors", kind, `HDU ${errors.name}`);
  } else if (band.error !== null) {
    const sigma = plane(band.error);
    error = (row) => errorFrom(sigma(row), "error");
    say("errors", "error", `BANDID${band.error + 1}`);
  }
  const masks = beside.find((h) => besideOf(h.name) === "mask" && same(h.shape, hdu.shape));
  if (masks !== undefined) say("mask", "samples not 0 are masked", `HDU ${masks.name}`);
  const mask = masks?.image().data;
  const masked = (values: Float64Array, row: number) =>
    mask === undefined ? values : values.map((f, i) => mask[row * pixels + i] === 0 ? f : NaN);

  const wavelengths = beside.find((h) =>
    /wavelength/.test(besideOf(h.name) ?? "") && h.shape[0] === pixels
  );
  const axis = (row: number) =>
    wavelengths === undefined
      ? fitsAxis(hdu.header, { count: pixels, row: row + 1, ...place })
      : listedAxis(wavelengths, row, pixels);
  const flux = plane(band.flux);
  return {
    hdu,
    pixels,
    rows,
    flux: (row) => masked(flux(row), row),
    error: (row) => {
      const own = error(row);
      return own === null || mask === undefined
        ? own
        : withMask(own, mask.subarray(row * pixels, (row + 1) * pixels));
    },
    axis,
    unit: unit ?? "",
    facts: joinFacts([headerFacts(hdu.header), headerFacts(fits.hdus[0]!.header)]),
    decisions,
  };
}
