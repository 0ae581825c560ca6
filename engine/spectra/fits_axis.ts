import { InputError } from "../errors.ts";
import type { FitsHeader } from "../fits/mod.ts";
import { factorOfVelocity } from "../sky/mod.ts";
import type { OneDecision } from "./decision.ts";
import type { RecordedAxis } from "./recorded_axis.ts";
import { fromVacuumAngstrom, type SpectralLetter, toVacuumAngstrom } from "./spectral_variable.ts";
import { angstromIn, unitBySize } from "./wavelength_units.ts";
import { readWatCards } from "./wat_cards.ts";

/** Options of {@linkcode fitsAxis}. */
export interface FitsAxisOptions {
  /** Number of pixels along the axis. */
  readonly count: number;
  /**
   * Number of the axis, from 1.
   * @default 1
   */
  readonly axis?: number;
  /**
   * Row of the image, from 1, where each has its own dispersion.
   * @default 1
   */
  readonly row?: number;
  /** File, for messages. */
  readonly file?: string;
}

interface Linear {
  readonly value: number;
  readonly step: number;
  readonly pixel: number;
  readonly keys: string;
}

const SI_UNIT: Readonly<Record<string, string>> = {
  FREQ: "Hz",
  VELO: "m/s",
  VOPT: "m/s",
  VRAD: "m/s",
};
const HZ_IN: Readonly<Record<string, number>> = { hz: 1, khz: 1e3, mhz: 1e6, ghz: 1e9, thz: 1e12 };
const M_S_IN: Readonly<Record<string, number>> = {
  "m/s": 1,
  "km/s": 1e3,
  "m s-1": 1,
  "km s-1": 1e3,
};

function linearKeys(header: FitsHeader, axis: number): Linear | null {
  const value = header.number(`CRVAL${axis}`);
  if (value === undefined) return null;
  const matrix = header.number(`CD${axis}_${axis}`);
  const delta = header.number(`CDELT${axis}`);
  const scale = header.number(`PC${axis}_${axis}`) ?? 1;
  const usesMatrix = matrix !== undefined && matrix !== 0;
  const step = usesMatrix ? matrix : delta === undefined ? undefined : delta * scale;
  if (step === undefined || step === 0) return null;
  const keys = `CRVAL${axis}, ${usesMatrix ? `CD${axis}_${axis}` : `CDELT${axis}`}, CRPIX${axis}`;
  return { value, step, pixel: header.number(`CRPIX${axis}`) ?? 1, keys };
}

function refuse(
  rule: string,
  value: unknown,
  options: FitsAxisOptions & { readonly key: string; readonly remedy: string },
): InputError {
  const { file, key, remedy } = options;
  return new InputError({
    action: "read wavelength axis",
    rule,
    value,
    key,
    remedy,
    ...(file === undefined ? {} : { file }),
  });
}

function fill(count: number, at: (pixel: number) => number): Float64Array {
  return Float64Array.from({ length: count }, (_, i) => at(i + 1));
}

// Rest wavelength of a velocity axis, vacuum, Å.
function restAngstrom(header: FitsHeader, options: FitsAxisOptions, key: string): number {
  const wavelength = header.number("RESTWAV");
  if (wavelength !== undefined) return wavelength * 1e10;
  const frequency = header.number("RESTFRQ") ?? header.number("RESTFREQ");
  if (frequency !== undefined) return toVacuumAngstrom(frequency, "F", { rest_angstrom: NaN });
  throw refuse("a velocity axis needs its rest wavelength; RESTWAV, RESTFRQ were tried", key, {
    ...options,
    key,
    remedy: "write RESTWAV (m) into the header",
  });
}

const LETTER: Readonly<Record<string, SpectralLetter>> = {
  WAVE: "W",
  AWAV: "A",
  FREQ: "F",
  VELO: "V",
};

// FITS 4.0 section 8.4: the axis is uniform in one variable and tells another.
function standardAxis(
  header: FitsHeader,
  type: string,
  linear: Linear,
  options: FitsAxisOptions,
): RecordedAxis {
  const { axis = 1, count } = options;
  const key = `CTYPE${axis}`;
  const kind = type.slice(0, 4);
  const algorithm = type.length > 4 ? type.slice(5) : "";
  const { value, step, pixel } = linear;
  const stated = header.string(`CUNIT${axis}`)?.trim() ?? "";
  const decisions: OneDecision[] = [];
  const said = (what: string, as: string, from: string, assumed = false) =>
    decisions.push({ what, value: as, from, assumed });

  let factor: number | null | undefined;
  if (kind === "FREQ") factor = HZ_IN[(stated || "Hz").toLowerCase()];
  else if (kind in SI_UNIT) factor = M_S_IN[(stated || "m/s").toLowerCase()];
  else {
    const unit = stated || unitBySize(value) || "m";
    if (stated === "") {
      said("wavelength unit", unit, `no CUNIT${axis}: from the size of CRVAL${axis}`, true);
    }
    factor = angstromIn(unit);
  }
  if (factor === null || factor === undefined) {
    throw refuse(`the unit of a ${kind} axis must be known`, stated, {
      ...options,
      key: `CUNIT${axis}`,
      remedy: "write a unit such as Angstrom, nm, m, Hz or m/s",
    });
  }

  const medium = kind === "AWAV" ? "air" : "vacuum";
  let at: (p: number) => number;
  if (algorithm === "" && (kind === "WAVE" || kind === "AWAV")) {
    at = (p) => factor * (value + step * (p - pixel));
  } else if (algorithm === "LOG" && (kind === "WAVE" || kind === "AWAV")) {
    at = (p) => factor * value * Math.exp(step * (p - pixel) / value);
  } else if (algorithm === "" && kind === "FREQ") {
    at = (p) =>
      toVacuumAngstrom(factor * (value + step * (p - pixel)), "F", { rest_angstrom: NaN });
  } else if (algorithm === "LOG" && kind === "FREQ") {
    at = (p) =>
      toVacuumAngstrom(factor * value * Math.exp(step * (p - pixel) / value), "F", {
        rest_angstrom: NaN,
      });
  } else if (algorithm === "" && (kind === "VELO" || kind === "VOPT" || kind === "VRAD")) {
    const rest_angstrom = restAngstrom(header, options, key);
    const convention = { VOPT: "optical", VRAD: "radio", VELO: "relativistic" } as const;
    at = (p) =>
      rest_angstrom *
      factorOfVelocity(factor * (value + step * (p - pixel)) / 1000, convention[kind]);
  } else {
    at = nonlinearAxis(kind, algorithm, { linear, factor, key, header, options });
  }
  said("wavelength axis", `${type}, ${count} pixels`, `${key} = '${type}', ${linear.keys}`);
  return { wavelength_angstrom: fill(count, at), medium, decisions };
}

// Greisen et al. 2006, section 3.4: uniform in P, told as S: X = X_r + dX/dS (S_r) × step × offset.
function nonlinearAxis(
  kind: string,
  algorithm: string,
  parts: {
    readonly linear: Linear;
    readonly factor: number;
    readonly key: string;
    readonly header: FitsHeader;
    readonly options: FitsAxisOptions;
  },
): (pixel: number) => number {
  const { linear, factor, key, header, options } = parts;
  const letters = /^([WAFV])2([WAFV])$/.exec(algorithm);
  const told = LETTER[kind];
  if (letters === null || told === undefined || letters[2] !== told) {
    throw refuse(
      "the algorithm of a spectral axis must be linear, LOG or a change of variable such as F2W; look-up tables (TAB) and grisms (GRI, GRA) are not read",
      `${kind}-${algorithm}`,
      { ...options, key, remedy: "resample the spectra to a linear or log wavelength scale" },
    );
  }
  const uniform = letters[1] as SpectralLetter;
  const needsRest = told === "V" || uniform === "V";
  const rest = { rest_angstrom: needsRest ? restAngstrom(header, options, key) : NaN };
  const toUniform = (s: number) =>
    fromVacuumAngstrom(toVacuumAngstrom(s, told, rest), uniform, rest);
  const reference = factor * linear.value;
  const h = Math.max(Math.abs(reference) * 1e-5, 1e-3);
  const slope = (toUniform(reference + h) - toUniform(reference - h)) / (2 * h);
  return (p) => {
    const x = toUniform(reference) + slope * factor * linear.step * (p - linear.pixel);
    const vacuum = toVacuumAngstrom(x, uniform, rest);
    return told === "A" ? fromVacuumAngstrom(vacuum, "A", rest) : vacuum;
  };
}

// Axes without a FITS type: LINEAR or nothing, LOG-LINEAR, DC-FLAG, names such as WAVELENGTH.
function customaryAxis(
  header: FitsHeader,
  type: string,
  linear: Linear,
  options: FitsAxisOptions,
): RecordedAxis {
  const { axis = 1, count } = options;
  const flag = header.number("DC-FLAG");
  const wat = readWatCards(header);
  const decisions: OneDecision[] = [];
  if (flag === -1) {
    throw refuse(
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
      wavelength_angstrom: fill(count, (p) => factor * base ** (value + step * (p - pixel))),
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
    throw refuse(
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
    wavelength_angstrom: fill(count, (p) => factor * (value + step * (p - pixel))),
    medium: null,
    decisions,
  };
}

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
      throw refuse("the unit of the axis must be known", unit, {
        ...options,
        key: "WAT1_001",
        remedy: "write units=angstroms",
      });
    }
    return {
      wavelength_angstrom: fill(count, (p) => factor * own.at(p)),
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
  const linear = linearKeys(header, axis);
  if (linear === null) {
    throw refuse(
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
    throw refuse(
      "a spectral axis must be one of WAVE, AWAV, FREQ, VELO, VOPT, VRAD, LINEAR, LOG-LINEAR",
      type,
      { ...options, key: `CTYPE${axis}`, remedy: "resample the spectra to wavelength" },
    );
  }
  return customaryAxis(header, type, linear, options);
}
