import type { FitsHeader } from "../fits/mod.ts";
import { factorOfVelocity } from "../sky/mod.ts";
import type { OneDecision } from "./decision.ts";
import { fillAxis, type FitsAxisOptions, type LinearKeys, refuseAxis } from "./linear_axis.ts";
import type { RecordedAxis } from "./recorded_axis.ts";
import { fromVacuumAngstrom, type SpectralLetter, toVacuumAngstrom } from "./spectral_variable.ts";
import { angstromIn, unitBySize } from "./wavelength_units.ts";

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

// Rest wavelength of a velocity axis, vacuum, Å.
function restAngstrom(header: FitsHeader, options: FitsAxisOptions, key: string): number {
  const wavelength = header.number("RESTWAV");
  if (wavelength !== undefined) return wavelength * 1e10;
  const frequency = header.number("RESTFRQ") ?? header.number("RESTFREQ");
  if (frequency !== undefined) return toVacuumAngstrom(frequency, "F", { rest_angstrom: NaN });
  throw refuseAxis("a velocity axis needs its rest wavelength; RESTWAV, RESTFRQ were tried", key, {
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

/** Reads an axis with a type of FITS 4.0, section 8.4: uniform in one variable, told in another. */
export function standardAxis(
  header: FitsHeader,
  type: string,
  linear: LinearKeys,
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
    throw refuseAxis(`the unit of a ${kind} axis must be known`, stated, {
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
  return { wavelength_angstrom: fillAxis(count, at), medium, decisions };
}

// Greisen et al. 2006, section 3.4: uniform in P, told as S: X = X_r + dX/dS (S_r) × step × offset.
function nonlinearAxis(
  kind: string,
  algorithm: string,
  parts: {
    readonly linear: LinearKeys;
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
    throw refuseAxis(
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
