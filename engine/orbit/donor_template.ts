import { SPEED_OF_LIGHT_KMS } from "../constants.ts";
import { InputError } from "../errors.ts";
import { solveLeastSquares } from "../numerics/mod.ts";
import type { SpectralLine } from "../sky/mod.ts";
import type { Spectrum } from "../spectra/mod.ts";
import { FWHM_OVER_SIGMA, lineVelocity } from "../trail/mod.ts";
import { Matrix } from "ml-matrix";

const C = SPEED_OF_LIGHT_KMS.value;

/** The donor's spectrum about a line, at rest: what its exposures are compared with. */
export interface DonorTemplate {
  /** Name: a spectral type, a file, or "gaussian". */
  readonly name: string;
  /** First velocity about the line's rest wavelength, km/s. */
  readonly first_kms: number;
  /** Uniform step, km/s. */
  readonly step_kms: number;
  /** Normalised flux minus one, N values: negative in absorption. 0 beyond the ends. */
  readonly flux: Float64Array;
  /** Standard deviation of the profile already in it, km/s. */
  readonly sigma_kms: number;
}

/**
 * A template made of Gaussian components: for a doublet or a multiplet when no template star is at
 * hand, in absorption or emission.
 *
 * @param line The line whose rest wavelength makes the velocities.
 * @param options Components and width.
 * @returns The template.
 * @throws {InputError} When widths or wavelengths are not positive, or strengths not as many.
 *
 * @example The sodium doublet lies 423 km/s apart
 * ```ts
 * import { airToVacuum } from "@millrace/millrace/sky";
 * import { gaussianTemplate } from "@millrace/millrace/orbit";
 * import { assertAlmostEquals } from "@std/assert";
 *
 * const [blue, red] = [airToVacuum(8183.26), airToVacuum(8194.82)];
 * const line = { name: "Na I 8190", vacuum_angstrom: blue, air_angstrom: 8183.26, source: "" };
 * const template = gaussianTemplate(line, {
 *   components_vacuum_angstrom: [blue, red], sigma_kms: 60,
 * });
 * const at = (v: number) => template.flux[Math.round((v - template.first_kms) / template.step_kms)]!;
 * assertAlmostEquals(at(0), -1, 1e-3);
 * assertAlmostEquals(at(423.4), -1, 2e-3);
 * ```
 */
export function gaussianTemplate(line: SpectralLine, options: {
  /** Rest wavelengths of the components, vacuum, Å. @default {the line's own} */
  readonly components_vacuum_angstrom?: readonly number[];
  /** Relative strengths. @default {1 each} */
  readonly strengths?: readonly number[];
  /** Standard deviation of each component, km/s. */
  readonly sigma_kms: number;
  /** @default {"absorption"} */
  readonly sign?: "absorption" | "emission";
}): DonorTemplate {
  const { components_vacuum_angstrom = [line.vacuum_angstrom], sigma_kms } = options;
  const { strengths = components_vacuum_angstrom.map(() => 1), sign = "absorption" } = options;
  const action = `make template for ${line.name}`;
  if (!(sigma_kms > 0) || !components_vacuum_angstrom.every((w) => w > 0)) {
    throw new InputError({
      action,
      rule: "width and wavelengths must be positive",
      value: [sigma_kms, ...components_vacuum_angstrom],
    });
  }
  if (strengths.length !== components_vacuum_angstrom.length) {
    throw new InputError({
      action,
      rule: "there must be one strength for each component",
      value: strengths.length,
    });
  }
  const centres = components_vacuum_angstrom.map((wave) => lineVelocity(wave, line));
  const step_kms = sigma_kms / 8;
  const low = Math.min(...centres) - 6 * sigma_kms, high = Math.max(...centres) + 6 * sigma_kms;
  const count = Math.ceil((high - low) / step_kms) + 1;
  const factor = sign === "absorption" ? -1 : 1;
  const flux = Float64Array.from({ length: count }, (_, k) => {
    const v = low + k * step_kms;
    return factor * centres.reduce(
      (sum, centre, j) => sum + strengths[j]! * Math.exp(-0.5 * ((v - centre) / sigma_kms) ** 2),
      0,
    );
  });
  return { name: "gaussian", first_kms: low, step_kms, flux, sigma_kms };
}

/** Continuum-normalised copy of part of a spectrum, minus one. */
function normalised(velocity: number[], flux: number[], order: number): number[] {
  const [low, high] = [velocity[0]!, velocity.at(-1)!];
  const rows = velocity.map((v) => {
    const x = 2 * (v - low) / (high - low) - 1;
    return Array.from({ length: order + 1 }, (_, k) => x ** k);
  });
  const design = new Matrix(rows);
  // Absorption lies below the continuum: points far below the fit are left out, thrice.
  let kept = flux.map(() => true);
  let level = flux;
  for (let round = 0; round < 4; round++) {
    const error = Float64Array.from(kept, (keep) => keep ? 1 : Infinity);
    const { parameters } = solveLeastSquares(design, flux, { error });
    level = rows.map((row) => row.reduce((sum, x, j) => sum + x * parameters[j]!, 0));
    const off = flux.map((f, k) => f - level[k]!);
    const used = off.filter((_, k) => kept[k]);
    const scatter = Math.sqrt(used.reduce((sum, r) => sum + r * r, 0) / used.length);
    const next = off.map((r) => r > -1.5 * scatter);
    if (next.filter(Boolean).length < 3 * (order + 1)) break;
    kept = next;
  }
  return flux.map((f, k) => f / level[k]! - 1);
}

/**
 * A template from a spectrum of a single star, normalised about the line by a polynomial that
 * follows its upper envelope.
 *
 * @param spectrum The star's spectrum, at any velocity.
 * @param options Line, range and the star's velocity.
 * @returns The template, at rest.
 * @throws {InputError} When the spectrum does not cover the range, or its resolution is not known.
 *
 * @example
 * ```ts
 * import type { Spectrum } from "@millrace/millrace/spectra";
 * import type { SpectralLine } from "@millrace/millrace/sky";
 * import { spectrumTemplate } from "@millrace/millrace/orbit";
 *
 * function deepest(spectrum: Spectrum, line: SpectralLine): number {
 *   return Math.min(...spectrumTemplate(spectrum, { line, reach_kms: 1500 }).flux);
 * }
 * ```
 */
export function spectrumTemplate(spectrum: Spectrum, options: {
  /** The line whose rest wavelength makes the velocities. */
  readonly line: SpectralLine;
  /** Velocities used on either side, km/s. */
  readonly reach_kms: number;
  /** Radial velocity of the template star, km/s. @default {0} */
  readonly velocity_kms?: number;
  /** Order of the continuum. @default {1} */
  readonly continuum_order?: number;
}): DonorTemplate {
  const { line, reach_kms, velocity_kms = 0, continuum_order = 1 } = options;
  const action = `use template ${spectrum.source}`;
  if (spectrum.resolution_angstrom === null) {
    throw new InputError({
      action,
      rule: "its resolution must be known, to bring it to that of the exposures",
      value: null,
      file: spectrum.source,
    });
  }
  const velocity: number[] = [], flux: number[] = [];
  let resolution = 0;
  spectrum.wavelength_angstrom.forEach((wave, k) => {
    const rest = wave / (1 + velocity_kms / C);
    const v = lineVelocity(rest, line);
    if (Math.abs(v) > reach_kms || !(spectrum.error[k]! < Infinity)) return;
    velocity.push(v);
    flux.push(spectrum.flux[k]!);
    resolution += spectrum.resolution_angstrom![k]! / wave * C / FWHM_OVER_SIGMA;
  });
  const [low, high] = [velocity[0] ?? NaN, velocity.at(-1) ?? NaN];
  if (!(low < -0.8 * reach_kms && high > 0.8 * reach_kms) || velocity.length < 20) {
    throw new InputError({
      action,
      rule: `it must overlap the line's range of ±${reach_kms} km/s about ${line.name}`,
      value: velocity.length === 0 ? "no overlap" : `${low.toFixed(0)} to ${high.toFixed(0)}`,
      unit: velocity.length === 0 ? undefined : "km/s",
      file: spectrum.source,
      remedy: "take a template of this wavelength range",
    });
  }
  const relative = normalised(velocity, flux, continuum_order);
  const step_kms = (high - low) / (velocity.length - 1) / 3;
  const count = Math.floor((high - low) / step_kms) + 1;
  let at = 0;
  return {
    name: spectrum.source,
    first_kms: low,
    step_kms,
    flux: Float64Array.from({ length: count }, (_, k) => {
      const v = low + k * step_kms;
      while (at < velocity.length - 2 && velocity[at + 1]! < v) at++;
      const share = (v - velocity[at]!) / (velocity[at + 1]! - velocity[at]!);
      return (1 - share) * relative[at]! + share * relative[at + 1]!;
    }),
    sigma_kms: resolution / velocity.length,
  };
}
