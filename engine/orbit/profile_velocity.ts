import { InputError } from "../errors.ts";
import type { LineProfile } from "./line_profile.ts";

/** A velocity with its error. */
export interface ProfileVelocity {
  /** km/s; NaN when there is none. */
  readonly velocity_kms: number;
  /** One standard deviation, km/s; infinite when there is none. */
  readonly error_kms: number;
}

const NONE: ProfileVelocity = { velocity_kms: NaN, error_kms: Infinity };

/**
 * Flux-weighted mean velocity of a line, Σ f v Δv / Σ f Δv. It follows all of the line's light,
 * spot and stream included, so it is no measure of a star's motion where the line is not symmetric.
 *
 * @param profile One exposure of the line.
 * @param options Window.
 * @returns Velocity and error; none when the net flux is below three of its errors, or a pixel in
 * the window is masked.
 *
 * @example
 * ```ts
 * import { centroidVelocity } from "@millrace/millrace/orbit";
 * import { assertAlmostEquals } from "@std/assert";
 *
 * const velocity_kms = Float64Array.from({ length: 301 }, (_, k) => 20 * (k - 150));
 * const { velocity_kms: found } = centroidVelocity({
 *   velocity_kms,
 *   pixel_kms: velocity_kms.map(() => 20),
 *   flux: velocity_kms.map((v) => Math.exp(-(((v - 63) / 400) ** 2))),
 *   error: velocity_kms.map(() => 0.01),
 * });
 * assertAlmostEquals(found, 63, 1e-6);
 * ```
 */
export function centroidVelocity(profile: LineProfile, options: {
  /** Velocities used, km/s. @default {all} */
  readonly window_kms?: readonly [low: number, high: number];
} = {}): ProfileVelocity {
  const [low, high] = options.window_kms ?? [-Infinity, Infinity];
  const { velocity_kms, pixel_kms, flux, error } = profile;
  let net = 0, moment = 0, net_variance = 0;
  for (let k = 0; k < flux.length; k++) {
    const v = velocity_kms[k]!;
    if (v < low || v > high) continue;
    if (error[k] === Infinity) return NONE;
    net += flux[k]! * pixel_kms[k]!;
    moment += flux[k]! * pixel_kms[k]! * v;
    net_variance += (error[k]! * pixel_kms[k]!) ** 2;
  }
  if (!(Math.abs(net) > 3 * Math.sqrt(net_variance))) return NONE;
  const mean = moment / net;
  let variance = 0;
  for (let k = 0; k < flux.length; k++) {
    const v = velocity_kms[k]!;
    if (v >= low && v <= high) variance += ((v - mean) * error[k]! * pixel_kms[k]! / net) ** 2;
  }
  return { velocity_kms: mean, error_kms: Math.sqrt(variance) };
}

/** Outermost crossing of a level on one side, with the error it has from its two pixels. */
function crossing(profile: LineProfile, level: number, side: 1 | -1): ProfileVelocity {
  const { velocity_kms, flux, error } = profile;
  const sign = Math.sign(level);
  const count = flux.length;
  const at = (k: number) => side === 1 ? count - 1 - k : k;
  for (let k = 1; k < count; k++) {
    const outer = at(k - 1), inner = at(k);
    if (sign * flux[inner]! < sign * level || error[inner] === Infinity) continue;
    if (error[outer] === Infinity || sign * flux[outer]! >= sign * level) return NONE;
    const rise = flux[inner]! - flux[outer]!;
    const share = (level - flux[outer]!) / rise;
    const step = velocity_kms[inner]! - velocity_kms[outer]!;
    const noise = Math.hypot((1 - share) * error[outer]!, share * error[inner]!);
    return {
      velocity_kms: velocity_kms[outer]! + share * step,
      error_kms: Math.abs(step / rise) * noise,
    };
  }
  return NONE;
}

/**
 * Velocity half-way between the two wings of a line at one level of its peak: a bisector. Low levels
 * follow the fast gas, and the noise.
 *
 * The profile is first smoothed by a Gaussian, or the outermost crossing of a noisy wing would be
 * a noise peak; errors are those of the smoothed profile.
 *
 * @param profile One exposure of the line.
 * @param options Level and smoothing.
 * @returns Velocity and error; none when the level is not crossed on both sides.
 * @throws {InputError} When the level is not in (0, 1).
 *
 * @example
 * ```ts
 * import { bisectorVelocity } from "@millrace/millrace/orbit";
 * import { assertAlmostEquals } from "@std/assert";
 *
 * const velocity_kms = Float64Array.from({ length: 301 }, (_, k) => 20 * (k - 150));
 * const { velocity_kms: found } = bisectorVelocity({
 *   velocity_kms,
 *   pixel_kms: velocity_kms.map(() => 20),
 *   flux: velocity_kms.map((v) => Math.exp(-(((v - 63) / 600) ** 2))),
 *   error: velocity_kms.map(() => 0.01),
 * }, { level: 0.3 });
 * assertAlmostEquals(found, 63, 0.1);
 * ```
 */
export function bisectorVelocity(profile: LineProfile, options: {
  /** Fraction of the (smoothed) peak. @default {0.25} */
  readonly level?: number;
  /** Standard deviation of the smoothing, km/s. @default {60} */
  readonly sigma_kms?: number;
} = {}): ProfileVelocity {
  const { level = 0.25, sigma_kms = 60 } = options;
  if (!(level > 0 && level < 1)) {
    throw new InputError({
      action: "measure bisector",
      rule: "level must be in (0, 1)",
      value: level,
    });
  }
  const smoothed = smooth(profile, sigma_kms);
  let peak = 0;
  for (const f of smoothed.flux) if (Math.abs(f) > Math.abs(peak)) peak = f;
  if (peak === 0) return NONE;
  const blue = crossing(smoothed, level * peak, -1);
  const red = crossing(smoothed, level * peak, 1);
  return {
    velocity_kms: (blue.velocity_kms + red.velocity_kms) / 2,
    error_kms: Math.hypot(blue.error_kms, red.error_kms) / 2,
  };
}

/** Gaussian-smoothed profile; neighbouring pixels then share their noise. */
function smooth(profile: LineProfile, sigma_kms: number): LineProfile {
  const { velocity_kms, pixel_kms, flux, error } = profile;
  const count = flux.length;
  const out = { flux: new Float64Array(count), error: new Float64Array(count) };
  for (let k = 0; k < count; k++) {
    let weight = 0, sum = 0, variance = 0;
    for (let j = 0; j < count; j++) {
      const u = (velocity_kms[j]! - velocity_kms[k]!) / sigma_kms;
      if (Math.abs(u) > 4 || error[j] === Infinity) continue;
      const w = pixel_kms[j]! * Math.exp(-0.5 * u * u);
      weight += w;
      sum += w * flux[j]!;
      variance += (w * error[j]!) ** 2;
    }
    out.flux[k] = weight > 0 ? sum / weight : 0;
    out.error[k] = weight > 0 ? Math.sqrt(variance) / weight : Infinity;
  }
  return { velocity_kms, pixel_kms, ...out };
}
