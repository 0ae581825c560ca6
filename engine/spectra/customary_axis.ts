import type { FitsHeader } from "../fits/mod.ts";
import type { OneDecision } from "./decision.ts";
import { fillAxis, type FitsAxisOptions, type LinearKeys, refuseAxis } from "./linear_axis.ts";
import type { RecordedAxis } from "./recorded_axis.ts";
import { angstromIn, unitBySize } from "./wavelength_units.ts";
import { readWatCards } from "./wat_cards.ts";

/** Reads an axis without a FITS type: LINEAR or nothing, LOG-LINEAR, DC-FLAG, names such as WAVELENGTH. */
export function customaryAxis(
  header: FitsHeader,
  type: string,
  linear: LinearKeys,
  options: FitsAxisOptions,
): RecordedAxis {
  const { axis = 1, count } = options;
  const flag = header.number("DC-FLAG");
  const wat = readWatCards(header);
  const decisions: OneDecision[] = [];
  if (flag === -1) {
    throw refuseAxis(
      "the spectrum must have a wavelength scale, and this says that it has none",
      flag,
      {
        ...options,
        key: "DC-FLAG",
        remedy: "calibrate the wavelengths first",
      },
    );
  }
  const isLog = flag === 1 || /^LOG|-LOG$/.test(type) ||
    (flag === undefined && linear.value > 2.5 && linear.value < 5 && Math.abs(linear.step) < 0.01);
  const { value, step, pixel } = linear;
  const from = type === "" ? `no CTYPE${axis}` : `CTYPE${axis} = '${type}'`;
  if (isLog) {
    const why = flag === 1 ? "DC-FLAG = 1" : /LOG/.test(type) ? from : `CRVAL${axis} = ${value}`;
    // With a natural logarithm an optical wavelength in ångström is 8 to 9.3.
    const base = value > 6 ? Math.E : 10;
    decisions.push({
      what: "wavelength axis",
      value: `${base === 10 ? "log10" : "natural log"} of wavelength, ${count} pixels`,
      from: `${why}, ${linear.keys}`,
      assumed: flag !== 1,
    });
    const first = base ** value;
    const unit = unitBySize(first) ?? "angstrom";
    decisions.push({
      what: "wavelength unit",
      value: unit,
      from: `size of CRVAL${axis}`,
      assumed: true,
    });
    const factor = angstromIn(unit)!;
    return {
      wavelength_angstrom: fillAxis(count, (p) => factor * base ** (value + step * (p - pixel))),
      medium: null,
      decisions,
    };
  }
  const stated = header.string(`CUNIT${axis}`)?.trim() || wat.units;
  const size = unitBySize(value);
  // Micrometres in steps of a twentieth are no spectrum: such an axis counts pixels.
  const counted = size === "um" && Math.abs(step) > 0.05 * value;
  const unit = stated || (counted ? "" : size ?? "");
  const factor = angstromIn(unit);
  if (factor === null) {
    throw refuseAxis(
      "the axis must be a wavelength in a known unit",
      stated || `CRVAL${axis} = ${value}`,
      {
        ...options,
        key: `CUNIT${axis}`,
        remedy: "write the axis type and unit, such as CTYPE1 = 'AWAV' and CUNIT1 = 'Angstrom'",
      },
    );
  }
  decisions.push({
    what: "wavelength axis",
    value: `linear, ${count} pixels`,
    from: `${from}, ${linear.keys}`,
    assumed: false,
  }, {
    what: "wavelength unit",
    value: unit,
    from: stated === ""
      ? `no unit: from the size of CRVAL${axis}`
      : header.has(`CUNIT${axis}`)
      ? `CUNIT${axis}`
      : "WAT1",
    assumed: stated === "",
  });
  return {
    wavelength_angstrom: fillAxis(count, (p) => factor * (value + step * (p - pixel))),
    medium: null,
    decisions,
  };
}
