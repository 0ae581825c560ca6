import { NotConverged, type Warning } from "../errors.ts";
import type { Sampling } from "../trail/mod.ts";
import { checkTrail, type TrailSamples } from "./check_trail.ts";
import { type EntropyOptions, type EntropyState, entropySteps } from "./entropy_solver.ts";
import { goalRaised } from "./goal_raised.ts";
import { lineLevel } from "./line_level.ts";
import type { LinearOperator } from "./linear_operator.ts";
import type { MapShape } from "./map_shape.ts";
import { makeProjector, type Projector, type ProjectorOptions } from "./projector.ts";
import type { VelocityMap } from "./velocity_map.ts";

/** Directions of modulation that share the emission of a pixel. */
const DIRECTIONS = 6;

/**
 * The operator of emission that is modulated on the orbit (Steeghs 2003, MNRAS 344, 448), in terms of six
 * positive images: image d is as bright as a_d (1 + cos 2π(φ − d/6)). Average, cosine and sine images are
 * Σ a, Σ a cos, Σ a sin; so the amplitude never exceeds the average: no emission is ever negative.
 *
 * @param projector The projector of a fixed map.
 * @returns The operator; its image holds the six one after another.
 *
 * @example
 * ```ts
 * import { makeProjector, modulatedProjector } from "@millrace/millrace/tomography";
 * import { assertEquals } from "@std/assert";
 *
 * const sampling = {
 *   count: 1,
 *   phase: Float64Array.of(0),
 *   cycle: Float64Array.of(0),
 *   phase_width: Float64Array.of(0),
 *   start: Uint32Array.of(0, 1),
 *   velocity_kms: Float64Array.of(0),
 *   pixel_kms: Float64Array.of(20),
 *   profile_sigma_kms: Float64Array.of(10),
 * };
 * const projector = makeProjector(sampling, { pixels: 3, half_width_kms: 10, systemic_kms: 0 });
 * assertEquals(modulatedProjector(projector).image_size, 54);
 * ```
 */
export function modulatedProjector(projector: Projector): LinearOperator {
  const { sampling, image_size: size, sample_count } = projector;
  const { cos, sin } = directions();
  const wave = exposureWaves(sampling);
  const with_inner = (inner: LinearOperator): LinearOperator => {
    const image = new Float64Array(size), part = new Float64Array(sample_count);
    const scaled = new Float64Array(sample_count);
    return {
      image_size: DIRECTIONS * size,
      sample_count,
      forward(images, into = new Float64Array(sample_count)) {
        into.fill(0);
        for (const [factor, weight] of parts(wave, { cos, sin })) {
          for (let i = 0; i < size; i++) {
            let sum = 0;
            for (let d = 0; d < DIRECTIONS; d++) sum += factor[d]! * images[d * size + i]!;
            image[i] = sum;
          }
          inner.forward(image, part);
          for (let k = 0; k < sample_count; k++) into[k] = into[k]! + weight[k]! * part[k]!;
        }
        return into;
      },
      adjoint(samples, into = new Float64Array(DIRECTIONS * size)) {
        into.fill(0);
        for (const [factor, weight] of parts(wave, { cos, sin })) {
          for (let k = 0; k < sample_count; k++) scaled[k] = weight[k]! * samples[k]!;
          inner.adjoint(scaled, image);
          for (let d = 0; d < DIRECTIONS; d++) {
            const f = factor[d]!;
            for (let i = 0; i < size; i++) {
              into[d * size + i] = into[d * size + i]! + f * image[i]!;
            }
          }
        }
        return into;
      },
    };
  };
  return {
    ...with_inner(projector),
    sparing: (weight) => with_inner(projector.sparing?.(weight) ?? projector),
  };
}

function directions(): { cos: Float64Array; sin: Float64Array } {
  const angle = (d: number) => 2 * Math.PI * d / DIRECTIONS;
  return {
    cos: Float64Array.from({ length: DIRECTIONS }, (_, d) => Math.cos(angle(d))),
    sin: Float64Array.from({ length: DIRECTIONS }, (_, d) => Math.sin(angle(d))),
  };
}

interface Waves {
  readonly one: Float64Array;
  /** Mean of cos 2πφ over the exposure, one value per sample. */
  readonly cos: Float64Array;
  /** Mean of sin 2πφ over the exposure. */
  readonly sin: Float64Array;
}

function exposureWaves(sampling: Sampling): Waves {
  const size = sampling.velocity_kms.length;
  const cos = new Float64Array(size), sin = new Float64Array(size);
  for (let i = 0; i < sampling.count; i++) {
    const half = Math.PI * sampling.phase_width[i]!;
    const smeared = half > 0 ? Math.sin(half) / half : 1;
    const angle = 2 * Math.PI * sampling.phase[i]!;
    cos.fill(smeared * Math.cos(angle), sampling.start[i], sampling.start[i + 1]);
    sin.fill(smeared * Math.sin(angle), sampling.start[i], sampling.start[i + 1]);
  }
  return { one: new Float64Array(size).fill(1), cos, sin };
}

function parts(
  wave: Waves,
  { cos, sin }: { readonly cos: Float64Array; readonly sin: Float64Array },
): (readonly [Float64Array, Float64Array])[] {
  return [[new Float64Array(DIRECTIONS).fill(1), wave.one], [cos, wave.cos], [sin, wave.sin]];
}

/** Options of {@linkcode modulatedMap}. */
export interface ModulatedMapOptions extends MapShape, EntropyOptions, ProjectorOptions {
  /** Systemic velocity γ, km/s: held. A wrong one looks like modulation. */
  readonly systemic_kms: number;
  /**
   * Level of the uniform default image of the average.
   *
   * @default {the data's mean flux spread evenly over the map}
   */
  readonly level?: number;
  /**
   * Whether to go on in spite of a large gap in phase.
   *
   * @default {false}
   */
  readonly force?: boolean;
}

/** Maps of emission that is modulated on the orbit. */
export interface ModulatedMap {
  /** Average over the orbit. */
  readonly average: VelocityMap;
  /** Amplitude of cos 2πφ, of either sign. */
  readonly cosine: VelocityMap;
  /** Amplitude of sin 2πφ, of either sign. */
  readonly sine: VelocityMap;
  /** Their data. */
  readonly model: Float64Array;
  /** Chi-square over the number of unmasked samples. */
  readonly reduced_chi_square: number;
  /** Half the squared difference of the unit gradients of entropy and chi-square. */
  readonly misalignment: number;
  /** Iterations. */
  readonly iterations: number;
  /** Whether it met its goals. */
  readonly converged: boolean;
  /** What a user should know: always that single pixels mean nothing. */
  readonly warnings: readonly Warning[];
}

/**
 * Maximum-entropy maps of emission whose brightness varies as 1 + C cos 2πφ + S sin 2πφ in each pixel
 * (Steeghs 2003, MNRAS 344, 448), with √(C² + S²) no more than the average. Such maps are not unique:
 * for any smooth g, C = ∂g/∂Vy and S = ∂g/∂Vx give no data at all, so only amplitudes integrated over a
 * region mean anything: {@linkcode modulationIn}. γ is held, since a wrong one imitates modulation.
 *
 * @param trail Exposures, data, errors.
 * @param options Map's shape, systemic velocity, goal.
 * @returns Average, cosine and sine maps.
 * @throws {InputError} When the data cannot be mapped.
 * @throws {NotConverged} With the last maps when the goal is out of reach or iterations run out.
 *
 * @example
 * ```ts
 * import { makeProjector, modulatedMap } from "@millrace/millrace/tomography";
 * import { randomStream } from "@millrace/millrace/numerics";
 * import { assert } from "@std/assert";
 *
 * const count = 16, bins = 61;
 * const sampling = {
 *   count,
 *   phase: Float64Array.from({ length: count }, (_, i) => i / count),
 *   cycle: new Float64Array(count),
 *   phase_width: new Float64Array(count),
 *   start: Uint32Array.from({ length: count + 1 }, (_, i) => i * bins),
 *   velocity_kms: Float64Array.from({ length: count * bins }, (_, k) => 20 * (k % bins - 30)),
 *   pixel_kms: new Float64Array(count * bins).fill(20),
 *   profile_sigma_kms: new Float64Array(count).fill(40),
 * };
 * const shape = { pixels: 21, half_width_kms: 400, systemic_kms: 0 };
 * const blob = Float64Array.from({ length: 441 }, (_, k) =>
 *   1e-3 * Math.exp(-0.5 * ((k % 21 - 6) ** 2 + (Math.floor(k / 21) - 12) ** 2) / 6)
 * );
 * const random = randomStream(1);
 * const flux = makeProjector(sampling, shape).forward(blob).map((f, k) =>
 *   f * (1 + 0.8 * Math.cos(2 * Math.PI * Math.floor(k / bins) / count)) + 0.02 * random.normal()
 * );
 * const found = modulatedMap({ sampling, flux, error: flux.map(() => 0.02) }, {
 *   ...shape,
 *   reduced_chi_square: 1.05,
 * });
 * const sum = (m: Float64Array) => m.reduce((a, b) => a + b, 0);
 * assert(sum(found.cosine.intensity) > 0.4 * sum(found.average.intensity));
 * ```
 */
export function modulatedMap(trail: TrailSamples, options: ModulatedMapOptions): ModulatedMap {
  const { pixels, half_width_kms } = options;
  const { sampling, error } = trail;
  const warnings: Warning[] = [...checkTrail(trail, options), {
    code: "modulation-not-unique",
    text: "Maps of modulation are not unique pixel by pixel: only amplitudes over a region count.",
  }];
  const flux = trail.flux.map((f, k) => error[k] === Infinity ? 0 : f);
  const level = options.level ?? lineLevel({ sampling, flux, error }, options);
  const size = pixels * pixels;
  const fallback = new Float64Array(DIRECTIONS * size).fill(level / DIRECTIONS);
  const { cos, sin } = directions();
  const one = new Float64Array(DIRECTIONS).fill(1);
  const describe = (state: EntropyState): ModulatedMap => {
    const combined = (factor: Float64Array): VelocityMap => ({
      pixels,
      half_width_kms,
      intensity: Float64Array.from(
        { length: size },
        (_, i) => factor.reduce((sum, f, d) => sum + f * state.image[d * size + i]!, 0),
      ),
    });
    const { model, reduced_chi_square, misalignment, iterations, converged } = state;
    return {
      average: combined(one),
      cosine: combined(cos),
      sine: combined(sin),
      ...{ model, reduced_chi_square, misalignment, iterations, converged },
      warnings: [...warnings, ...goalRaised(state.goal, options)],
    };
  };
  try {
    let last: EntropyState | undefined;
    for (
      last of entropySteps({
        operator: modulatedProjector(makeProjector(sampling, options)),
        samples: { flux, error },
        prior: () => fallback,
        start: fallback,
      }, options)
    );
    return describe(last!);
  } catch (cause) {
    if (!(cause instanceof NotConverged)) throw cause;
    throw new NotConverged(cause.message, describe(cause.partial));
  }
}
