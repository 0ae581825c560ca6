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
  /**
   * Velocity of the blue peak, km/s: the highest maximum blueward of the middle of the half width;
   * with one peak alone, its velocity.
   */
  readonly blue_peak_kms: number;
  /** Velocity of the red peak, km/s, likewise redward; NaN with one peak alone. */
  readonly red_peak_kms: number;
  /** Separation of the two peaks, km/s; NaN with one peak alone. */
  readonly peak_separation_kms: number;
  /**
   * V/R: highest flux blueward of the middle of the half width over the highest redward, above the
   * continuum. While a peak crosses the middle it is 1. NaN with one peak alone.
   */
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

/** The two sides of a profile about its centre. */
interface Sides {
  /** Bins of the two peaks: the highest local maxima on either side. */
  readonly peaks: readonly [blue: number, red: number];
  /** Highest flux on the blue side over the highest on the red side. */
  readonly blue_over_red: number;
}

// Peaks on one side each: of the three maxima of a disc with a bright spot, two that lie on one side
// are no pair, and which of them is higher is a matter of noise.
function sidesOf(
  profile: UniformProfile,
  centre: number,
  options: { readonly dip: number; readonly highest: number },
): Sides | null {
  const { velocity_kms: v, flux } = profile;
  const { dip, highest } = options;
  const step = v[1]! - v[0]!;
  const place = (centre - v[0]!) / step;
  const below = Math.floor(place);
  if (!(below >= 0 && below + 1 < flux.length)) return null;
  let blue = -1, red = -1;
  // Flux at the centre belongs to both sides, so that the ratio is 1 when the highest flux is there
  // and does not jump when it passes.
  const middle = flux[below]! + (place - below) * (flux[below + 1]! - flux[below]!);
  let left = Number.isFinite(middle) ? middle : 0;
  let right = left;
  for (let i = 1; i + 1 < flux.length; i++) {
    if (!(flux[i]! > 0)) continue;
    const top = flux[i]! >= flux[i - 1]! && flux[i]! > flux[i + 1]!;
    if (i <= below) {
      left = Math.max(left, flux[i]!);
      if (top && (blue < 0 || flux[i]! > flux[blue]!)) blue = i;
    } else {
      right = Math.max(right, flux[i]!);
      if (top && (red < 0 || flux[i]! > flux[red]!)) red = i;
    }
  }
  if (blue < 0 || red < 0) return null;
  const lower = Math.min(flux[blue]!, flux[red]!);
  let valley = Infinity;
  for (let k = blue; k <= red; k++) valley = Math.min(valley, flux[k]!);
  if (lower - valley < dip * lower || lower < 0.25 * highest) return null;
  return { peaks: [blue, red], blue_over_red: left / right };
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
  let highest = 0;
  smooth.flux.forEach((f, j) =>
    highest = f > smooth.flux[highest]! || Number.isNaN(smooth.flux[highest]!) ? j : highest
  );
  const top = peakAt(smooth, highest);
  const crossing = (level: number, from: "low" | "high") =>
    top.height > 0 ? outerCrossing(smooth, level * top.height, from) : NaN;
  const half = [crossing(0.5, "low"), crossing(0.5, "high")] as const;
  const sides = sidesOf(smooth, (half[0] + half[1]) / 2, { dip, highest: top.height });
  const [blue, red] = sides === null
    ? [top, null]
    : sides.peaks.map((i) => peakAt(smooth, i)) as [typeof top, typeof top];
  return {
    // A gap cannot be integrated over: a profile with more than a tenth missing has no width.
    equivalent_width_kms: missing > 0.1 * bins ? NaN : width * bins / (bins - missing),
    centroid_kms: moment / width,
    fwhm_kms: half[1] - half[0],
    full_width_kms: crossing(0.1, "high") - crossing(0.1, "low"),
    blue_peak_kms: blue.v,
    red_peak_kms: red?.v ?? NaN,
    peak_separation_kms: red === null ? NaN : red.v - blue.v,
    blue_over_red: sides?.blue_over_red ?? NaN,
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
