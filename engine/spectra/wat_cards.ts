import { InputError } from "../errors.ts";
import type { FitsHeader } from "../fits/mod.ts";
import { polynomialDispersion } from "./dispersion.ts";

/** Dispersion of one spectrum of several in an image, as its `WAT` cards describe it. */
export interface WatSpectrum {
  /** Number of the image row, from 1. */
  readonly row: number;
  /** Aperture number. */
  readonly aperture: number;
  /** Usable pixels. */
  readonly pixels: number;
  /** How it was described, as in "linear" or "Chebyshev polynomial". */
  readonly kind: string;
  /** Wavelength of a pixel, numbered from 1, in the unit of the axis. */
  readonly at: (pixel: number) => number;
}

/** All that the `WAT` cards of a header say. */
export interface WatAxes {
  /** Coordinate system, as in "multispec" or "equispec"; empty when not said. */
  readonly system: string;
  /** Unit of the first axis; empty when not said. */
  readonly units: string;
  /** Dispersion of each spectrum; empty when the cards do not describe it. */
  readonly spectra: readonly WatSpectrum[];
}

// The text of an axis runs on from card to card, each of 68 characters; trailing blanks that a
// reader drops are part of it.
function textOf(header: FitsHeader, axis: number): string {
  const parts: string[] = [];
  for (let n = 1; n < 1000; n++) {
    const part = header.string(`WAT${axis}_${String(n).padStart(3, "0")}`);
    if (part === undefined) break;
    parts.push(part);
  }
  return parts.map((part, n) => n < parts.length - 1 ? part.padEnd(68) : part).join("");
}

function attributes(text: string): Map<string, string> {
  const found = new Map<string, string>();
  for (const match of text.matchAll(/(\w+)\s*=\s*(?:"([^"]*)"|(\S+))/g)) {
    found.set(match[1]!.toLowerCase(), (match[2] ?? match[3]!).trim());
  }
  return found;
}

const FUNCTIONS = [
  "",
  "Chebyshev polynomial",
  "Legendre polynomial",
  "cubic spline",
  "linear spline",
  "pixel list",
  "sampled list",
];

function nonlinear(numbers: readonly number[], place: { key: string }): WatSpectrum["at"] {
  const terms: { weight: number; zero: number; at: (pixel: number) => number }[] = [];
  let k = 9;
  while (k < numbers.length) {
    const [weight, zero, kind, order, low, high] = numbers.slice(k, k + 6) as number[];
    if (kind !== 1 && kind !== 2 || !(order! >= 1)) {
      throw new InputError({
        action: "read WAT cards",
        rule: "a nonlinear dispersion must be a Chebyshev or Legendre polynomial",
        value: FUNCTIONS[kind ?? 0] ?? kind,
        ...place,
        remedy: "resample the spectra to a linear or log wavelength scale",
      });
    }
    const coefficients = numbers.slice(k + 6, k + 6 + order!);
    if (coefficients.length < order!) {
      throw new InputError({
        action: "read WAT cards",
        rule: `a polynomial of order ${order} must have as many coefficients`,
        value: coefficients.length,
        ...place,
      });
    }
    terms.push({
      weight: weight!,
      zero: zero!,
      at: polynomialDispersion(coefficients, {
        kind: kind === 1 ? "chebyshev" : "legendre",
        low_pixel: low!,
        high_pixel: high!,
      }),
    });
    k += 6 + order!;
  }
  return (pixel) => terms.reduce((sum, t) => sum + t.weight * (t.zero + t.at(pixel)), 0);
}

function spectrumOf(text: string, row: number): WatSpectrum {
  const place = { key: `WAT2, spec${row}` };
  const numbers = text.split(/\s+/).filter((part) => part !== "").map(Number);
  const [aperture, , kind, start, step, pixels, doppler = 0] = numbers;
  if (numbers.length < 6 || numbers.some((n) => Number.isNaN(n))) {
    throw new InputError({
      action: "read WAT cards",
      rule: "a spectrum must be described by at least nine numbers",
      value: text.slice(0, 60),
      ...place,
    });
  }
  const rest = 1 / (1 + doppler);
  const shared = { row, aperture: aperture!, pixels: pixels! };
  if (kind === 0) {
    return { ...shared, kind: "linear", at: (p) => rest * (start! + step! * (p - 1)) };
  }
  if (kind === 1) {
    return { ...shared, kind: "log10", at: (p) => rest * 10 ** (start! + step! * (p - 1)) };
  }
  if (kind === 2) {
    const at = nonlinear(numbers, place);
    return { ...shared, kind: FUNCTIONS[numbers[11]!]!, at: (p) => rest * at(p) };
  }
  throw new InputError({
    action: "read WAT cards",
    rule: "a spectrum must have a wavelength scale",
    value: `dispersion type ${kind}`,
    ...place,
    remedy: "calibrate the wavelengths first",
  });
}

/**
 * Reads the `WAT` cards of a header: the world coordinates of spectra as general reduction packages
 * write them, several spectra in one image with a linear, log or polynomial dispersion each
 * (Valdes 1993, ASP Conf. Ser. 52, 467).
 *
 * @param header The header.
 * @returns What the cards say; empty without such cards.
 * @throws {InputError} When a spectrum's description is incomplete or of a kind that is not read
 * (splines, lists); with the card.
 *
 * @example
 * ```ts
 * import { readWatCards } from "@millrace/millrace/spectra";
 * import { encodeFits, parseFits } from "@millrace/millrace/fits";
 * import { assertEquals } from "@std/assert";
 *
 * const bytes = encodeFits([{
 *   kind: "image",
 *   shape: [4, 1],
 *   data: new Float32Array(4),
 *   cards: [
 *     { keyword: "WAT0_001", value: "system=multispec" },
 *     { keyword: "WAT1_001", value: "wtype=multispec label=Wavelength units=angstroms" },
 *     { keyword: "WAT2_001", value: 'wtype=multispec spec1 = "1 1 0 5000. 2. 4 0. 1. 3."' },
 *   ],
 * }]);
 * const { spectra, units } = readWatCards(parseFits(bytes).hdus[0]!.header);
 * assertEquals([units, spectra[0]!.at(4)], ["angstroms", 5006]);
 * ```
 */
export function readWatCards(header: FitsHeader): WatAxes {
  const system = attributes(textOf(header, 0)).get("system") ?? "";
  const units = attributes(textOf(header, 1)).get("units") ?? "";
  const second = attributes(textOf(header, 2));
  const spectra: WatSpectrum[] = [];
  for (const [name, text] of second) {
    const row = /^spec(\d+)$/.exec(name)?.[1];
    if (row !== undefined) spectra.push(spectrumOf(text, Number(row)));
  }
  return { system, units, spectra: spectra.sort((a, b) => a.row - b.row) };
}
