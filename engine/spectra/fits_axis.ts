import type { FitsHeader } from "../fits/mod.ts";
import { customaryAxis } from "./customary_axis.ts";
import { fillAxis, type FitsAxisOptions, linearKeys, refuseAxis } from "./linear_axis.ts";
import type { RecordedAxis } from "./recorded_axis.ts";
import { standardAxis } from "./standard_axis.ts";
import { angstromIn, unitBySize } from "./wavelength_units.ts";
import { readWatCards } from "./wat_cards.ts";

export type { FitsAxisOptions } from "./linear_axis.ts";

/**
 * Reads the wavelength axis of an image from its header, as it is found: FITS 4.0 spectral types
 * (WAVE, AWAV, FREQ, VELO, VOPT, VRAD; linear, -LOG and changes of variable such as -F2W), `WAT`
 * cards with a dispersion for each spectrum, LINEAR or no type, log axes by DC-FLAG.
 *
 * @param header Header of the image.
 * @param options Number of pixels; which axis and row; file for messages.
 * @returns Wavelengths as recorded, Å, and what was decided.
 * @throws {InputError} When there is no wavelength axis (it lists what was tried), or one of a kind
 * that is not read.
 *
 * @example
 * ```ts
 * import { fitsAxis } from "@millrace/millrace/spectra";
 * import { encodeFits, parseFits } from "@millrace/millrace/fits";
 * import { assertEquals } from "@std/assert";
 *
 * const bytes = encodeFits([{
 *   kind: "image",
 *   shape: [3],
 *   data: new Float32Array(3),
 *   cards: [
 *     { keyword: "CTYPE1", value: "AWAV" },
 *     { keyword: "CUNIT1", value: "nm" },
 *     { keyword: "CRVAL1", value: 486 },
 *     { keyword: "CDELT1", value: 0.5 },
 *     { keyword: "CRPIX1", value: 1 },
 *   ],
 * }]);
 * const axis = fitsAxis(parseFits(bytes).hdus[0]!.header, { count: 3 });
 * assertEquals([axis.medium, ...axis.wavelength_angstrom], ["air", 4860, 4865, 4870]);
 * ```
 */
export function fitsAxis(header: FitsHeader, options: FitsAxisOptions): RecordedAxis {
  const { axis = 1, row = 1, count, file } = options;
  const wat = readWatCards(header);
  const own = wat.spectra.find((s) => s.row === row);
  if (own !== undefined) {
    const unit = wat.units || unitBySize(own.at(1)) || "angstrom";
    const factor = angstromIn(unit);
    if (factor === null) {
      throw refuseAxis("the unit of the axis must be known", unit, {
        ...options,
        key: "WAT1_001",
        remedy: "write units=angstroms",
      });
    }
    return {
      wavelength_angstrom: fillAxis(count, (p) => factor * own.at(p)),
      medium: null,
      decisions: [{
        what: "wavelength axis",
        value: `${own.kind}, ${count} pixels, ${unit}`,
        from: `WAT2 cards, spec${row}`,
        assumed: false,
      }],
    };
  }
  const type = (header.string(`CTYPE${axis}`) ?? "").trim().toUpperCase();
  const linear = linearKeys(header, options);
  if (linear === null) {
    throw refuseAxis(
      `the image must have a wavelength axis; CTYPE${axis}, CRVAL${axis}, CDELT${axis}, CD${axis}_${axis}, WAT cards and an HDU of wavelengths were tried`,
      type === "" ? "none of them" : type,
      {
        ...options,
        key: `CTYPE${axis}`,
        remedy: "write CRVAL1, CDELT1 and CTYPE1 into the header",
        ...(file === undefined ? {} : { file }),
      },
    );
  }
  if (/^(WAVE|AWAV|FREQ|VELO|VOPT|VRAD)(-...)?$/.test(type)) {
    return standardAxis(header, type, linear, options);
  }
  if (/^(WAVN|ENER|ZOPT|BETA|PIXEL)/.test(type)) {
    throw refuseAxis(
      "a spectral axis must be one of WAVE, AWAV, FREQ, VELO, VOPT, VRAD, LINEAR, LOG-LINEAR",
      type,
      { ...options, key: `CTYPE${axis}`, remedy: "resample the spectra to wavelength" },
    );
  }
  return customaryAxis(header, type, linear, options);
}
