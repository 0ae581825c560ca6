import { SPEED_OF_LIGHT_KMS } from "../constants.ts";
import type { Binary } from "../binary/mod.ts";
import { InputError } from "../errors.ts";
import type { SpectralLine } from "../sky/mod.ts";
import type { Sampling } from "../trail/mod.ts";
import { type ArmPixels, PLACES } from "./arm_pixels.ts";
import type { Model } from "./model.ts";
import type { TabulatedProfile } from "./observation.ts";
import { synthesize } from "./synthesize.ts";

/** Farther from the line than this no part of a model is looked for, km/s. */
const REACH_KMS = 15_000;

/** Gaussians on a table's offsets blend when they are this wide, in units of its spacing. */
const BLEND = 0.6;

/** When and how an exposure sees the line. */
export interface LineExposure {
  /** Orbital phase at mid-exposure, cycles. */
  readonly phase: number;
  /** Duration, cycles. */
  readonly phase_width: number;
  /** Barycentric over recorded wavelength: the observer's factor, and the error of the zero. */
  readonly factor: number;
  /** The pixels. */
  readonly pixels: ArmPixels;
}

/**
 * A line's light in every exposure, averaged over each pixel, over the continuum: the model at four
 * places in a pixel through the profile of the optics.
 */
export function lineLight(
  model: Model,
  { line, exposures, binary, systemic_kms, profile }: {
    readonly line: SpectralLine;
    readonly exposures: readonly LineExposure[];
    readonly binary: Binary;
    readonly systemic_kms: number;
    readonly profile: TabulatedProfile | null;
  },
): Float64Array[] {
  const c = SPEED_OF_LIGHT_KMS.value;
  const rest = line.vacuum_angstrom;
  const windows = exposures.map(({ pixels, factor }) => {
    const velocities = pixels.places_vacuum_angstrom.map((w) => c * (w * factor / rest - 1));
    const inside = (v: number) => Math.abs(v - systemic_kms) <= REACH_KMS;
    // Whole pixels only.
    const first = PLACES * Math.floor(Math.max(0, velocities.findIndex(inside)) / PLACES);
    const last = velocities.findLastIndex(inside);
    return {
      first,
      velocities: velocities.subarray(
        first,
        last < 0 ? first : PLACES * Math.ceil((last + 1) / PLACES),
      ),
    };
  });
  const start = new Uint32Array(exposures.length + 1);
  windows.forEach(({ velocities }, i) => start[i + 1] = start[i]! + velocities.length);
  const velocity_kms = new Float64Array(start[exposures.length]!);
  windows.forEach(({ velocities }, i) => velocity_kms.set(velocities, start[i]));
  const kernel = kernelOf(profile);
  const sampling: Sampling = {
    count: exposures.length,
    phase: Float64Array.from(exposures, ({ phase }) => phase),
    cycle: new Float64Array(exposures.length),
    phase_width: Float64Array.from(exposures, ({ phase_width }) => phase_width),
    start,
    velocity_kms,
    pixel_kms: new Float64Array(velocity_kms.length),
    profile_sigma_kms: Float64Array.from(exposures, ({ pixels, factor }) => {
      const sigma = kernel?.sigma_angstrom ?? pixels.optics_sigma_angstrom;
      return c * sigma * factor / rest;
    }),
  };

  let light = new Float64Array(velocity_kms.length);
  if (kernel === null) {
    light = synthesize(model, { binary, sampling, systemic_kms }) as typeof light;
  }
  for (const { offset_angstrom, share } of kernel?.nodes ?? []) {
    const shift = c * offset_angstrom / rest;
    const moved = { ...sampling, velocity_kms: velocity_kms.map((v) => v - shift) };
    const flux = synthesize(model, { binary, sampling: moved, systemic_kms });
    for (let n = 0; n < light.length; n++) light[n]! += share * flux[n]!;
  }
  return exposures.map(({ pixels }, i) => {
    const mean = new Float64Array(pixels.wavelength_angstrom.length);
    const { first } = windows[i]!;
    for (let n = start[i]!; n < start[i + 1]!; n++) {
      const place = first + n - start[i]!;
      mean[Math.floor(place / PLACES)]! += pixels.weights[place % PLACES]! * light[n]!;
    }
    return mean;
  });
}

/** A tabulated profile as shares of light in narrow Gaussians. */
function kernelOf(profile: TabulatedProfile | null) {
  if (profile === null) return null;
  const { offset_angstrom, weight } = profile;
  const count = offset_angstrom.length;
  const spacing = (offset_angstrom[count - 1]! - offset_angstrom[0]!) / (count - 1);
  const weights = Array.from(weight);
  const sum = weights.reduce((a, b) => a + b, 0);
  const even = Array.from(offset_angstrom).every((offset, k) =>
    Math.abs(offset - offset_angstrom[0]! - k * spacing) < 1e-3 * spacing
  );
  if (
    count < 2 || weights.length !== count || !even || !(sum > 0) || !weights.every((w) => w >= 0)
  ) {
    throw new InputError({
      action: "use instrumental profile",
      rule:
        "its offsets must be even and increasing, its weights as many, not negative, not all zero",
      value: `${count} offsets, ${weights.length} weights`,
    });
  }
  return {
    sigma_angstrom: BLEND * spacing,
    nodes: weights.map((w, k) => ({ offset_angstrom: offset_angstrom[k]!, share: w / sum })),
  };
}
