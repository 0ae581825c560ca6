import type { Binary } from "../binary/mod.ts";
import { InputError } from "../errors.ts";
import { type RandomStream, randomStream } from "../numerics/mod.ts";
import { type Model, synthesize } from "../synthesis/mod.ts";
import type { Sampling } from "../trail/mod.ts";
import type { WeighableTrail } from "./weighing_data.ts";

/** Options of {@linkcode simulateTrail}. */
export interface SimulateTrailOptions {
  /** The binary. */
  readonly binary: Binary;
  /**
   * Systemic velocity, km/s.
   *
   * @default {0}
   */
  readonly systemic_kms?: number;
  /**
   * Number of exposures, spread evenly over `phases`.
   *
   * @default {60}
   */
  readonly exposures?: number;
  /**
   * Range of orbits covered, in cycles; exposures follow without gaps.
   *
   * @default {[0, 1]}
   */
  readonly phases?: readonly [from: number, to: number];
  /**
   * Signal over noise of the continuum per element of `resolution_kms`; photon noise, so that the
   * line's own light adds to the noise.
   *
   * @default {25}
   */
  readonly signal_to_noise?: number;
  /**
   * Full width at half maximum of the instrumental profile, km/s.
   *
   * @default {60}
   */
  readonly resolution_kms?: number;
  /**
   * Width of a pixel, km/s.
   *
   * @default {20}
   */
  readonly pixel_kms?: number;
  /**
   * The pixels go from −reach to +reach, km/s.
   *
   * @default {2000}
   */
  readonly reach_kms?: number;
  /**
   * Relative root-mean-square variation of the line against the continuum from exposure to exposure.
   *
   * @default {0}
   */
  readonly flicker_rms?: number;
  /**
   * Time over which flickering is remembered, cycles.
   *
   * @default {0.05}
   */
  readonly flicker_cycles?: number;
  /**
   * Error of level and slope of the fitted continuum, relative.
   *
   * @default {0}
   */
  readonly continuum_error?: number;
  /**
   * Seed of the noise, or a stream to draw it from.
   *
   * @default {1}
   */
  readonly seed?: number | RandomStream;
}

/** Full width at half maximum of a Gaussian over its standard deviation. */
const FWHM = 2 * Math.sqrt(2 * Math.log(2));

/**
 * A trail as a telescope would have recorded it, divided by a fitted continuum: a model with photon
 * noise, flickering (first-order autoregressive) and errors of the continuum. For trying out what
 * a weighing can tell, and for measuring its error rates.
 *
 * @param model The model.
 * @param options The binary and the observation.
 * @returns The trail, without a display grid.
 * @throws {InputError} When a number is out of range.
 *
 * @example
 * ```ts
 * import { simulateTrail } from "@millrace/millrace/weighing";
 * import { binaryFrom } from "@millrace/millrace/binary";
 * import { assertEquals } from "@std/assert";
 *
 * const binary = binaryFrom({ k_accretor_kms: 70, k_donor_kms: 320 });
 * const options = { binary, exposures: 10, seed: 4 };
 * const trail = simulateTrail({ parts: ["disc"] }, options);
 * assertEquals(trail.sampling.count, 10);
 * assertEquals(trail.flux, simulateTrail({ parts: ["disc"] }, options).flux);
 * ```
 */
export function simulateTrail(model: Model, options: SimulateTrailOptions): WeighableTrail {
  const {
    binary,
    systemic_kms = 0,
    signal_to_noise = 25,
    flicker_rms = 0,
    flicker_cycles = 0.05,
    continuum_error = 0,
    seed = 1,
  } = options;
  const random = typeof seed === "number" ? randomStream(seed) : seed;
  const sampling = samplingOf(options);
  const line = synthesize(model, { binary, sampling, systemic_kms });
  const { count, start, velocity_kms, pixel_kms, phase_width } = sampling;
  const reach = velocity_kms.reduce((most, v) => Math.max(most, Math.abs(v)), 0);
  const flux = new Float64Array(line.length);
  const error = new Float64Array(line.length);
  const resolution = sampling.profile_sigma_kms[0]! * FWHM;
  let flicker = random.normal();
  for (let i = 0; i < count; i++) {
    const memory = Math.exp(-phase_width[i]! / flicker_cycles);
    flicker = memory * flicker + Math.sqrt(1 - memory * memory) * random.normal();
    const level = continuum_error * random.normal();
    const slope = continuum_error * random.normal();
    for (let n = start[i]!; n < start[i + 1]!; n++) {
      const light = 1 + (1 + flicker_rms * flicker) * line[n]!;
      const sigma = Math.sqrt(Math.max(0.05, light) * resolution / pixel_kms[n]!) / signal_to_noise;
      const continuum = 1 + level + slope * velocity_kms[n]! / reach;
      flux[n] = (light + sigma * random.normal()) / continuum - 1;
      error[n] = sigma / continuum;
    }
  }
  return {
    line: {
      name: "H beta",
      vacuum_angstrom: 4862.69,
      air_angstrom: 4861.33,
      source: "rounded, for simulations",
    },
    sampling,
    flux,
    error,
    group: new Uint16Array(count),
    noise: { groups: [], correlation_length_pixels: 1 },
  };
}

function samplingOf(options: SimulateTrailOptions): Sampling {
  const {
    exposures = 60,
    phases: [first, last] = [0, 1],
    resolution_kms = 60,
    pixel_kms = 20,
    reach_kms = 2000,
  } = options;
  const refuse = (rule: string, value: number, unit = "") => {
    throw new InputError({ action: "simulate trail", rule, value, ...(unit ? { unit } : {}) });
  };
  if (!Number.isInteger(exposures) || exposures < 1) {
    refuse("the number of exposures must be a whole number above 0", exposures);
  }
  if (!(last > first)) refuse("phases must increase", last, "cycles");
  if (!(resolution_kms > 0)) refuse("the resolution must be positive", resolution_kms, "km/s");
  if (!(pixel_kms > 0)) refuse("pixels must have a positive width", pixel_kms, "km/s");
  if (!(reach_kms > 4 * pixel_kms)) {
    refuse("the reach must be more than four pixels", reach_kms, "km/s");
  }
  const width = (last - first) / exposures;
  const time = Float64Array.from({ length: exposures }, (_, i) => first + (i + 0.5) * width);
  const pixels = 2 * Math.floor(reach_kms / pixel_kms) + 1;
  return {
    count: exposures,
    phase: time.map((t) => t - Math.floor(t)),
    cycle: time.map(Math.floor),
    phase_width: new Float64Array(exposures).fill(width),
    start: Uint32Array.from({ length: exposures + 1 }, (_, i) => i * pixels),
    velocity_kms: Float64Array.from(
      { length: exposures * pixels },
      (_, n) => (n % pixels - (pixels - 1) / 2) * pixel_kms,
    ),
    pixel_kms: new Float64Array(exposures * pixels).fill(pixel_kms),
    profile_sigma_kms: new Float64Array(exposures).fill(resolution_kms / FWHM),
  };
}
