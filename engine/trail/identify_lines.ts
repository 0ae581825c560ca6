import { Matrix } from "ml-matrix";
import { median, robustSigma, solveLeastSquares } from "../numerics/mod.ts";
import { type SpectralLine, spectralLines } from "../sky/mod.ts";
import type { MeanSpectrum } from "./mean_spectrum.ts";
import { pixelEdges } from "./pixel_edges.ts";
import { lineVelocity } from "./velocity.ts";

/** A line of the list looked for in a mean spectrum. */
export interface IdentifiedLine {
  /** The line. */
  readonly line: SpectralLine;
  /** Equivalent width within the half width on either side, Å, emission positive. */
  readonly equivalent_width_angstrom: number;
  /** Its standard deviation, Å. */
  readonly error_angstrom: number;
  /**
   * Whether it stands out by 5σ and half a per cent, above what lies on both of its sides or below
   * it. A slope, as the wing of a stronger line makes it, is no line.
   */
  readonly seen: boolean;
  /** Other lines of the list within the half width: the equivalent width is shared with them. */
  readonly blended_with: readonly string[];
}

/** Fewest standard deviations at which a line is seen. */
const SEEN_SIGMA = 5;
/** Reach of a line's wings, in units of the half width of integration. */
const WINGS = 1.35;
/** Least contrast against the continuum: what continua do on their own. */
const SEEN_CONTRAST = 0.005;

interface Level {
  readonly value: number;
  readonly error: number;
  /** Mean velocity, km/s. */
  readonly at_kms: number;
}

interface Measured {
  readonly width: number;
  readonly error: number;
  readonly seen: boolean;
}

// Common lines before rare ones, where several could be meant by one feature.
function rank({ name }: SpectralLine): number {
  if (/^(H|Pa|Br) /.test(name)) return 0;
  return /^He (I |II 4686)|^Bowen|^Ca II|^Na I/.test(name) ? 1 : 2;
}

/** Order of the polynomial that takes the slope out. */
const ORDER = 3;

// The spectrum over a smooth course, so that its slope looks like no line. Lines are left out of the fit
// again and again.
function flattened(mean: MeanSpectrum): MeanSpectrum {
  const { wavelength_angstrom: w, flux, error } = mean;
  const [low, high] = [w[0]!, w.at(-1)!];
  const powers = Array.from(
    w,
    (x) => Array.from({ length: ORDER + 1 }, (_, k) => (2 * (x - low) / (high - low) - 1) ** k),
  );
  let used = Array.from(w.keys()).filter((i) => Number.isFinite(flux[i]! + error[i]!));
  let course = flux.map(() => 1);
  for (let round = 0; round < 8 && used.length > 4 * ORDER; round++) {
    const fit = solveLeastSquares(
      new Matrix(used.map((i) => powers[i]!)),
      used.map((i) => flux[i]!),
    );
    course = flux.map((_, i) => powers[i]!.reduce((sum, p, k) => sum + p * fit.parameters[k]!, 0));
    const off = used.map((i) => flux[i]! - course[i]!);
    const limit = 2.5 * robustSigma(off);
    const kept = used.filter((_, k) => Math.abs(off[k]!) <= limit);
    if (kept.length === used.length) break;
    used = kept;
  }
  if (course.some((level) => !(level > 0))) return mean;
  return {
    ...mean,
    flux: flux.map((f, i) => f / course[i]!),
    error: error.map((e, i) => e / course[i]!),
  };
}

// Does what lies between two levels stand above both of them, or below?
function standsOut(core: Level, sides: readonly Level[]): boolean {
  const differences = sides.map((side) => ({
    off: core.value - side.value,
    sigma: Math.hypot(core.error, side.error),
    level: Math.abs(side.value),
  }));
  return [1, -1].some((sign) =>
    differences.every(({ off, sigma, level }) =>
      sign * off > SEEN_SIGMA * sigma && sign * off > SEEN_CONTRAST * level
    )
  );
}

/**
 * Looks for every line of the list in a mean spectrum: the strongest first; where that one is, none
 * is sought any more, and next to it others must stand out of its wing.
 *
 * @param spectrum The mean spectrum.
 * @param options Half width of the integration, km/s; the continuum comes from as much on each side.
 * @returns The lines covered, in order of wavelength.
 *
 * @example
 * ```ts
 * import { identifyLines } from "@millrace/millrace/trail";
 * import { lineNamed } from "@millrace/millrace/sky";
 * import { assertEquals } from "@std/assert";
 *
 * const rest = lineNamed("H beta").vacuum_angstrom;
 * const wavelength_angstrom = Float64Array.from({ length: 400 }, (_, i) => 4760 + 0.5 * i);
 * const found = identifyLines({
 *   wavelength_angstrom,
 *   flux: wavelength_angstrom.map((w) => 1 + Math.exp(-(((w - rest) / 8) ** 2))),
 *   error: wavelength_angstrom.map(() => 0.02),
 *   exposures: 10,
 * }, { half_width_kms: 1500 });
 * assertEquals(found.filter(({ seen }) => seen).map(({ line }) => line.name), ["H beta"]);
 * ```
 */
export function identifyLines(
  spectrum: MeanSpectrum,
  options: { readonly half_width_kms: number },
): IdentifiedLine[] {
  const { half_width_kms: half } = options;
  const mean = flattened(spectrum);
  const { wavelength_angstrom: w } = mean;
  const covered = spectralLines
    .filter(({ vacuum_angstrom }) => vacuum_angstrom > w[0]! && vacuum_angstrom < w.at(-1)!)
    .toSorted((a, b) => a.vacuum_angstrom - b.vacuum_angstrom);
  const taken: SpectralLine[] = [];
  for (;;) {
    const left = covered.filter((line) => !taken.includes(line)).flatMap((line) => {
      const measured = measureLine(mean, { line, half, taken });
      return measured?.seen ? [{ line, size: Math.abs(measured.width) }] : [];
    });
    if (left.length === 0) break;
    const strongest = left.reduce((a, b) => b.size > a.size ? b : a);
    // Of lines in one place the commonest is meant, if it explains nearly as much.
    const [chosen] = left
      .filter(({ line, size }) =>
        Math.abs(lineVelocity(line.vacuum_angstrom, strongest.line)) < half / 2 &&
        size > 0.7 * strongest.size
      )
      .sort((a, b) => rank(a.line) - rank(b.line) || b.size - a.size);
    taken.push(chosen!.line);
  }
  return covered.flatMap((line): IdentifiedLine[] => {
    const others = taken.filter((other) => other !== line);
    const measured = measureLine(mean, { line, half, taken: others });
    if (measured === null) return [];
    return [{
      line,
      equivalent_width_angstrom: measured.width,
      error_angstrom: measured.error,
      seen: taken.includes(line),
      blended_with: covered
        .filter((other) =>
          other !== line && Math.abs(lineVelocity(other.vacuum_angstrom, line)) < half
        )
        .map(({ name }) => name),
    }];
  });
}

function measureLine(
  mean: MeanSpectrum,
  options: {
    readonly line: SpectralLine;
    readonly half: number;
    readonly taken: readonly SpectralLine[];
  },
): Measured | null {
  const { line, half, taken } = options;
  const { wavelength_angstrom: w, flux, error } = mean;
  const velocity = w.map((wavelength) => lineVelocity(wavelength, line));
  const near = taken.map((other) => lineVelocity(other.vacuum_angstrom, line));
  const distance = Math.min(Infinity, ...near.map(Math.abs));
  const pick = (from: number, to: number, free = false) => {
    const found: number[] = [];
    velocity.forEach((v, i) => {
      if (!(v >= from * half && v <= to * half) || !Number.isFinite(flux[i]! + error[i]!)) return;
      if (!free || near.every((place) => Math.abs(v - place) > WINGS * half)) found.push(i);
    });
    return found;
  };
  const levelOf = (indices: readonly number[]): Level | null => {
    if (indices.length < 3) return null;
    const n = Math.sqrt(indices.length);
    return {
      value: median(indices.map((i) => flux[i]!)),
      // The median of n samples has 1.25 times the error of their mean.
      error: 1.253 * median(indices.map((i) => error[i]!)) / n,
      at_kms: indices.reduce((sum, i) => sum + velocity[i]!, 0) / indices.length,
    };
  };
  const wide = [levelOf(pick(-2, -1, true)), levelOf(pick(1, 2, true))]
    .filter((level) => level !== null);
  // Beside a stronger line the level is that of its wing, close by.
  const crowded = wide.length < 2 || distance < (1 + WINGS) * half;
  const close = [levelOf(pick(-0.8, -0.35)), levelOf(pick(0.35, 0.8))]
    .filter((level) => level !== null);
  const core = levelOf(crowded ? pick(-0.35, 0.35) : pick(-0.5, 0.5));
  const sides = crowded ? close : wide;
  const levels = wide.length > 0 ? wide : close;
  if (core === null || sides.length < 2 || levels.length === 0) return null;

  const [a, b] = [levels[0]!, levels.at(-1)!];
  const slope = a === b ? 0 : (b.value - a.value) / (b.at_kms - a.at_kms);
  const edges = pixelEdges(w);
  let width = 0, variance = 0, length = 0;
  for (const i of pick(-1, 1)) {
    const level = a.value + slope * (velocity[i]! - a.at_kms);
    const pixel = edges[i + 1]! - edges[i]!;
    width += (flux[i]! / level - 1) * pixel;
    variance += (error[i]! / level * pixel) ** 2;
    length += pixel;
  }
  const beneath = Math.hypot(a.error, b.error) / 2 / Math.abs(a.value);
  return {
    width,
    error: Math.sqrt(variance + (length * beneath) ** 2),
    seen: distance >= half && standsOut(core, sides),
  };
}
