import { SPEED_OF_LIGHT_KMS } from "../constants.ts";

/** What is measured on one line profile. A value that cannot be had is NaN. */
export interface ProfileMeasures {
  /** Equivalent width, km/s, emission positive. */
  readonly equivalent_width_kms: number;
  /** Mean velocity, weighted by flux above the continuum, km/s. */
  readonly centroid_kms: number;
  /** Full width at half of the highest peak, km/s. */
  readonly fwhm_kms: number;
  /** Full width at a tenth of the highest peak, km/s: "near zero". */
  readonly full_width_kms: number;
  /** Velocity of the blue peak, km/s; with one peak alone, its velocity. */
  readonly blue_peak_kms: number;
  /** Velocity of the red peak, km/s; NaN with one peak alone. */
  readonly red_peak_kms: number;
  /** Separation of the two peaks, km/s; NaN with one peak alone. */
  readonly peak_separation_kms: number;
  /** Height of the blue over that of the red peak, above the continuum; NaN with one peak alone. */
  readonly blue_over_red: number;
}

/** Options of {@linkcode measureProfile}. */
export interface ProfileMeasureOptions {
  /** Full width at half maximum of the Gaussian that smooths a profile before peaks are sought, km/s. */
  readonly smooth_kms: number;
  /**
   * How deep the dip between two peaks must be, as a fraction of the lower peak.
   * @default 0.03
   */
  readonly dip?: number;
  /**
   * Range of integration, km/s.
   * @default all
   */
  readonly range_kms?: readonly [number, number];
}

/** A profile on a uniform grid of velocity. */
export interface UniformProfile {
  /** Bin centres, C values, km/s, uniform. */
  readonly velocity_kms: Float64Array;
  /** Normalised flux minus one, C values; NaN where not covered. */
  readonly flux: Float64Array;
}

function smoothed({ velocity_kms, flux }: UniformProfile, fwhm: number): Float64Array {
  const step = velocity_kms[1]! - velocity_kms[0]!;
  const sigma = fwhm / 2.3548 / step;
  const half = Math.ceil(4 * sigma);
  if (!(sigma > 0.2)) return flux.slice();
  const kernel = Float64Array.from(
    { length: 2 * half + 1 },
    (_, k) => Math.exp(-0.5 * ((k - half) / sigma) ** 2),
  );
  return flux.map((own, i) => {
    if (!Number.isFinite(own)) return NaN;
    let sum = 0, weight = 0;
    for (let k = Math.max(0, i - half); k <= Math.min(flux.length - 1, i + half); k++) {
      if (!Number.isFinite(flux[k]!)) continue;
      sum += kernel[k - i + half]! * flux[k]!;
      weight += kernel[k - i + half]!;
    }
    return sum / weight;
  });
}

// Where a profile last reaches a level, coming from outside: linear between bins.
function outerCrossing(profile: UniformProfile, level: number, from: "low" | "high"): number {
  const { velocity_kms: v, flux } = profile;
  const n = flux.length;
  const order = from === "low" ? 1 : -1;
  for (let i = from === "low" ? 0 : n - 1; i >= 0 && i < n; i += order) {
    if (!(flux[i]! >= level)) continue;
    const outside = flux[i - order];
    if (outside === undefined || Number.isNaN(outside)) return NaN;
    return v[i]! - order * Math.abs(v[1]! - v[0]!) * (flux[i]! - level) / (flux[i]! - outside);
  }
  return NaN;
}

// Top of a parabola through a bin and its neighbours.
function peakAt(profile: UniformProfile, i: number): { v: number; height: number } {
  const { velocity_kms: v, flux } = profile;
  const [a, b, c] = [flux[i - 1], flux[i]!, flux[i + 1]];
  if (a === undefined || c === undefined || !Number.isFinite(a + c)) return { v: v[i]!, height: b };
  const curve = a - 2 * b + c;
  const offset = curve < 0 ? Math.max(-1, Math.min(1, 0.5 * (a - c) / curve)) : 0;
  return { v: v[i]! + offset * (v[1]! - v[0]!), height: b - 0.25 * (a - c) * offset };
}

function twoPeaks(profile: UniformProfile, dip: number): readonly [number, number] | null {
  const { flux } = profile;
  const tops: number[] = [];
  for (let i = 1; i + 1 < flux.length; i++) {
    if (flux[i]! > 0 && flux[i]! >= flux[i - 1]! && flux[i]! > flux[i + 1]!) tops.push(i);
  }
  const highest = Math.max(...tops.map((i) => flux[i]!));
  let best: readonly [number, number] | null = null;
  let score = 0;
  for (const a of tops) {
    for (const b of tops) {
      if (b <= a) continue;
      const lower = Math.min(flux[a]!, flux[b]!);
      let valley = Infinity;
      for (let k = a; k <= b; k++) valley = Math.min(valley, flux[k]!);
      if (lower - valley < dip * lower || lower < 0.25 * highest) continue;
      // Two peaks of a disc are the two that are both high: their lower one decides.
      if (lower > score) {
        score = lower;
        best = [a, b];
      }
    }
  }
  return best;
}

/**
 * Measures one line profile in emission.
 *
 * @param profile The profile.
 * @param options Smoothing, depth of a dip, range.
 * @returns What was measured.
 *
 * @example A double-peaked profile
 * ```ts
 * import { measureProfile } from "@millrace/millrace/trail";
 * import { assertAlmostEquals } from "@std/assert";
 *
 * const velocity_kms = Float64Array.from({ length: 201 }, (_, i) => 20 * (i - 100));
 * const flux = velocity_kms.map((v) =>
 *   2 * Math.exp(-(((v + 600) / 200) ** 2)) + Math.exp(-(((v - 600) / 200) ** 2))
 * );
 * const measures = measureProfile({ velocity_kms, flux }, { smooth_kms: 0 });
 * assertAlmostEquals(measures.peak_separation_kms, 1200, 1);
 * assertAlmostEquals(measures.blue_over_red, 2, 0.01);
 * assertAlmostEquals(measures.equivalent_width_kms, 3 * 200 * Math.sqrt(Math.PI), 0.1);
 * ```
 */
export function measureProfile(
  profile: UniformProfile,
  options: ProfileMeasureOptions,
): ProfileMeasures {
  const { smooth_kms, dip = 0.03, range_kms } = options;
  const { velocity_kms, flux } = profile;
  const step = velocity_kms[1]! - velocity_kms[0]!;
  let width = 0, moment = 0, missing = 0, bins = 0;
  velocity_kms.forEach((v, j) => {
    if (range_kms !== undefined && (v < range_kms[0] || v > range_kms[1])) return;
    bins++;
    if (!Number.isFinite(flux[j]!)) {
      missing++;
      return;
    }
    width += flux[j]! * step;
    moment += flux[j]! * v * step;
  });
  const smooth = { velocity_kms, flux: smoothed(profile, smooth_kms) };
  const pair = twoPeaks(smooth, dip);
  let highest = 0;
  smooth.flux.forEach((f, j) =>
    highest = f > smooth.flux[highest]! || Number.isNaN(smooth.flux[highest]!) ? j : highest
  );
  const top = peakAt(smooth, highest);
  const [blue, red] = pair === null
    ? [top, null]
    : pair.map((i) => peakAt(smooth, i)) as [typeof top, typeof top];
  const widthAt = (level: number) =>
    top.height > 0
      ? outerCrossing(smooth, level * top.height, "high") -
        outerCrossing(smooth, level * top.height, "low")
      : NaN;
  return {
    // A gap cannot be integrated over: a profile with more than a tenth missing has no width.
    equivalent_width_kms: missing > 0.1 * bins ? NaN : width * bins / (bins - missing),
    centroid_kms: moment / width,
    fwhm_kms: widthAt(0.5),
    full_width_kms: widthAt(0.1),
    blue_peak_kms: blue.v,
    red_peak_kms: red?.v ?? NaN,
    peak_separation_kms: red === null ? NaN : red.v - blue.v,
    blue_over_red: red === null ? NaN : blue.height / red.height,
  };
}

/**
 * An equivalent width in ångström from one in km/s.
 *
 * @param width_kms Equivalent width, km/s.
 * @param rest_angstrom Rest wavelength, Å.
 * @returns Equivalent width, Å, with the same sign.
 *
 * @example
 * ```ts
 * import { widthInAngstrom } from "@millrace/millrace/trail";
 * import { assertAlmostEquals } from "@std/assert";
 *
 * assertAlmostEquals(widthInAngstrom(299.792458, 5000), 5);
 * ```
 */
export function widthInAngstrom(width_kms: number, rest_angstrom: number): number {
  return width_kms * rest_angstrom / SPEED_OF_LIGHT_KMS.value;
}
