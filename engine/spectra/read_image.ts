import { InputError } from "../errors.ts";
import type { FitsFile } from "../fits/mod.ts";
import { openFluxImage } from "./flux_image.ts";
import type { RecordedAxis } from "./recorded_axis.ts";
import type { RecordedExposure } from "./recorded_exposure.ts";
import { readWatCards } from "./wat_cards.ts";

function overlap(a: RecordedAxis, b: RecordedAxis): number {
  const ends = ({ wavelength_angstrom: w }: RecordedAxis) => {
    const [first, last] = [w[0]!, w[w.length - 1]!];
    return first < last ? [first, last] as const : [last, first] as const;
  };
  const [[a0, a1], [b0, b1]] = [ends(a), ends(b)];
  return (Math.min(a1, b1) - Math.max(a0, b0)) / Math.min(a1 - a0, b1 - b0);
}

/**
 * Reads an image file of one exposure: one spectrum, or several that a reduction package put in the
 * rows of one image. Rows of different wavelengths (orders) are all taken; of rows that show the same
 * wavelengths (objects on the slit) one is taken.
 *
 * @param fits The file.
 * @param options Names of keys by what they hold; `aperture` is the number of the row wanted.
 * @returns One recorded exposure a row that is taken.
 * @throws {InputError} When the file has no image, no wavelength axis, or rows that nothing explains.
 *
 * @example
 * ```ts
 * import { readImage } from "@millrace/millrace/spectra";
 * import { encodeFits, parseFits } from "@millrace/millrace/fits";
 * import { assertEquals } from "@std/assert";
 *
 * const bytes = encodeFits([{
 *   kind: "image",
 *   shape: [2],
 *   data: Float32Array.of(5, 6),
 *   cards: [{ keyword: "CRVAL1", value: 5000 }, { keyword: "CD1_1", value: 2 }],
 * }]);
 * const [spectrum] = readImage(parseFits(bytes, { file: "a.fits" }));
 * assertEquals(spectrum!.axis.wavelength_angstrom, Float64Array.of(5000, 5002));
 * ```
 */
export function readImage(
  fits: FitsFile,
  options: { readonly keys?: Readonly<Record<string, string>> } = {},
): RecordedExposure[] {
  const { keys = {} } = options;
  const image = openFluxImage(fits);
  const file = fits.file ?? "spectrum";
  const explained = image.rows === 1 || readWatCards(image.hdu.header).spectra.length > 0 ||
    image.hdu.header.has("APNUM1") || keys["aperture"] !== undefined ||
    image.decisions.some((d) => d.what === "flux");
  if (!explained) {
    throw new InputError({
      action: "read spectrum",
      rule:
        "something must say what the rows of an image are; WAT cards, APNUM1, keys.aperture, and times for each row were tried",
      value: `${image.rows} rows`,
      file,
      remedy: 'state layout = "stack" with the times, or keys.aperture with the number of a row',
    });
  }
  const axes = Array.from({ length: image.rows }, (_, row) => image.axis(row));
  let taken = Array.from(axes.keys());
  const decisions = [...image.decisions];
  if (keys["aperture"] !== undefined) {
    const row = Number(keys["aperture"]) - 1;
    if (!taken.includes(row)) {
      throw new InputError({
        action: "read spectrum",
        rule: `aperture must be a row of the image, 1 to ${image.rows}`,
        value: keys["aperture"],
        file,
        key: "keys.aperture",
      });
    }
    taken = [row];
    decisions.push({ what: "row", value: keys["aperture"], from: "keys.aperture", assumed: false });
  } else if (image.rows > 1) {
    const alike = axes.slice(1).every((axis) => overlap(axes[0]!, axis) > 0.5);
    if (alike) taken = [0];
    decisions.push({
      what: "row",
      value: alike ? `1 of ${image.rows}` : `all ${image.rows}`,
      from: alike ? "they show the same wavelengths: the first" : "they show different wavelengths",
      assumed: alike,
    });
  }
  return taken.map((row) => ({
    source: image.rows === 1 ? file : `${file}[${row + 1}]`,
    file,
    axis: axes[row]!,
    flux: image.flux(row),
    error: image.error(row),
    unit: image.unit,
    times: image.facts,
    facts: image.facts,
    decisions,
  }));
}
