import { InputError, type Warning } from "../errors.ts";
import { randomStream, studentTail } from "../numerics/mod.ts";
import type { TrailSamples } from "./check_trail.ts";
import { axisymmetricPart } from "./axisymmetric_part.ts";
import { type BestPositiveMap, bestPositiveMap } from "./best_positive_map.ts";
import { coreMiss } from "./core_miss.ts";
import type { LinearOperator } from "./linear_operator.ts";
import type { MapShape } from "./map_shape.ts";
import type { MaximumEntropyOptions } from "./maximum_entropy.ts";
import { noiseReplica } from "./noise_replica.ts";
import { makeProjector } from "./projector.ts";
import { shiftVelocities, systemFrame } from "./system_frame.ts";
import { type MirrorTest, mirrorTest } from "./mirror_test.ts";
import {
  type MomentTest,
  momentTest,
  systemicByParity,
  type SystemicVelocity,
} from "./moment_test.ts";

/** Options of {@linkcode canAnyMapFit}. */
export interface AnyMapOptions extends MapShape {
  /** Systemic velocity γ, km/s. */
  readonly systemic_kms: number;
  /** Seed of the simulations. */
  readonly seed: number;
  /**
   * Number of simulations: data from the best positive map with fresh noise, mapped again.
   *
   * @default {20}
   */
  readonly simulations?: number;
  /**
   * Error of each exposure's continuum level, relative; P values.
   *
   * @default {none}
   */
  readonly continuum_error?: Float64Array | null;
  /**
   * Whether to go on in spite of a large gap in phase.
   *
   * @default {false}
   */
  readonly force?: boolean;
}

/** Whether the middle of the line is deeper than positive maps make it. */
export interface CoreTest {
  /** Probability of so deep a core if a fixed positive map made the data. */
  readonly p_value: number;
  /** Mean of data minus best positive model in the core, over the highest mean flux of the line. */
  readonly miss_over_peak: number;
  /** The miss in standard deviations, less what simulated data miss on average. */
  readonly sigma: number;
  /** Half the range of velocities that counts as core, km/s. */
  readonly core_kms: number;
}

/** What the tests before an inversion say. A test that the data do not allow is null. */
export interface AnyMap {
  /** Moments against trigonometric polynomials: breaks for whatever is not a fixed map. */
  readonly moments: MomentTest | null;
  /** Profiles half an orbit apart: breaks for modulated emission. */
  readonly mirror: MirrorTest | null;
  /** The middle of the line against positive maps: breaks for optically thick discs. */
  readonly core: CoreTest;
  /** γ from the parity of the moments. */
  readonly systemic: SystemicVelocity | null;
  /** Reduced chi-square of the best positive map, on pixels of half the resolution. */
  readonly best_reduced_chi_square: number;
  /** What a user should know. */
  readonly warnings: readonly Warning[];
}

/** Probability below which a test is said to fail. */
const FAILS_BELOW = 1e-3;

/**
 * Asks, before any inversion, whether a map can have made a trail: moments of the profiles, profiles
 * half an orbit apart, and the middle of the line against positive maps. Each finds what the others
 * pass over: a shear-broadened core passes the mirror test, modulation passes the core test.
 *
 * @param trail Exposures, data, errors.
 * @param options Size of the map in mind (its number of pixels is not used), systemic velocity, seed.
 * @returns One result per test, γ from parity, warnings for tests that fail.
 * @throws {InputError} When the data cannot be mapped (see {@linkcode checkTrail}).
 *
 * @example
 * ```ts
 * import { canAnyMapFit, makeProjector } from "@millrace/millrace/tomography";
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
 * const map = Float64Array.from({ length: 441 }, (_, k) =>
 *   1e-4 * Math.exp(-0.5 * ((k % 21 - 6) ** 2 + (Math.floor(k / 21) - 12) ** 2) / 9)
 * );
 * const random = randomStream(3);
 * const flux = makeProjector(sampling, shape).forward(map).map((f) => f + 0.003 * random.normal());
 * const found = canAnyMapFit({ sampling, flux, error: flux.map(() => 0.003) }, {
 *   ...shape,
 *   seed: 1,
 *   simulations: 8,
 * });
 * assert(found.warnings.length === 0);
 * ```
 */
export function canAnyMapFit(trail: TrailSamples, options: AnyMapOptions): AnyMap {
  const steps = anyMapSteps(trail, options);
  for (;;) {
    const step = steps.next();
    if (step.done === true) return step.value;
  }
}

/**
 * The tests of {@linkcode canAnyMapFit} as a generator that yields the number of simulations done after
 * each of them and returns the results, so that a caller may listen for an interrupt in between.
 *
 * @param trail Exposures, data, errors.
 * @param options As for `canAnyMapFit`.
 * @returns A generator that returns the tests.
 * @throws {InputError} When the data cannot be mapped (see {@linkcode checkTrail}).
 *
 * @example
 * ```ts
 * import { anyMapSteps } from "@millrace/millrace/tomography";
 * import { assertEquals } from "@std/assert";
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
 * const flux = sampling.velocity_kms.map((v) => Math.exp(-0.5 * (v / 100) ** 2));
 * const trail = { sampling, flux, error: flux.map(() => 0.01) };
 * const steps = anyMapSteps(trail, {
 *   pixels: 21,
 *   half_width_kms: 400,
 *   systemic_kms: 0,
 *   seed: 1,
 *   simulations: 3,
 * });
 * assertEquals([...steps], [1, 2, 3]);
 * ```
 */
export function* anyMapSteps(
  trail: TrailSamples,
  options: AnyMapOptions,
): Generator<number, AnyMap, void> {
  const { half_width_kms, systemic_kms, continuum_error = null } = options;
  const widest = trail.sampling.profile_sigma_kms.reduce((a, b) => Math.max(a, b), 0);
  const sharpest = trail.sampling.profile_sigma_kms.reduce((a, b) => Math.min(a, b), Infinity);
  const half_range_kms = Math.min(
    Math.SQRT2 * half_width_kms + 3 * widest,
    commonReach(trail, systemic_kms),
  );
  const pixels = 2 * Math.ceil(half_width_kms / (Math.sqrt(2 * Math.LN2) * sharpest)) + 1;
  const mapped = {
    ...options,
    pixels,
    prior: { kind: "uniform" },
    max_iterations: 60,
    // All maps of the tests share their sampling.
    projector: makeProjector(trail.sampling, { ...options, pixels }),
  } as const;
  const best = bestPositiveMap(trail, mapped);

  const range = { systemic_kms, half_range_kms, continuum_error };
  const moments = orNull(() => momentTest(trail, range));
  const systemic = orNull(() => systemicByParity(trail, range));
  const { mirror, core } = yield* simulatedTests(trail, { ...mapped, ...range, best });

  const warnings: Warning[] = [];
  const say = (code: string, p: number | undefined, text: string) => {
    if (p !== undefined && p < FAILS_BELOW) {
      warnings.push({ code, text: `No map fits: ${text} (p = ${p.toExponential(1)}).` });
    }
  };
  say(
    "moments-fail",
    moments?.p_value,
    `the profile's moments do not follow the orbit as a fixed map's do, worst at phase ${
      moments?.worst.phase.toFixed(2)
    }`,
  );
  say(
    "mirror-fails",
    mirror?.p_value,
    `profiles half an orbit apart do not mirror one another, worst at phase ${
      mirror?.worst.phase.toFixed(2)
    } and ${
      mirror?.worst.velocity_kms.toFixed(0)
    } km/s: modulated emission, or a wrong systemic velocity`,
  );
  say(
    "core-fails",
    core.p_value,
    `the middle of the line is deeper than any positive map makes it, by ${
      Math.abs(100 * core.miss_over_peak).toFixed(1)
    } % of the peak: an optically thick disc, or absorption`,
  );
  if (
    systemic !== null && Math.abs(systemic.systemic_kms - systemic_kms) > 3 * systemic.error_kms
  ) {
    warnings.push({
      code: "systemic-velocity-disagrees",
      text: `Parity of the moments asks for a systemic velocity of ${
        systemic.systemic_kms.toFixed(1)
      } ± ${systemic.error_kms.toFixed(1)} km/s, not ${systemic_kms}.`,
    });
  }
  return {
    moments,
    mirror,
    core,
    systemic,
    best_reduced_chi_square: best.found.reduced_chi_square,
    warnings: [...best.found.warnings, ...warnings],
  };
}

/**
 * Mirror and core test, both calibrated on data simulated from the best positive rings and what of the best
 * map is not round. The map's own round part would not do: entropy fills in the dark middle and the edges
 * of a disc, just where it matters that flux cannot fall below zero. Mapping takes up a little of what is
 * antisymmetric where phases do not match; how much is measured against the same data's residuals from what
 * made them.
 */
function* simulatedTests(
  trail: TrailSamples,
  options: MaximumEntropyOptions & {
    readonly projector: LinearOperator;
    readonly half_range_kms: number;
    readonly continuum_error: Float64Array | null;
    readonly best: BestPositiveMap;
    readonly seed: number;
    readonly simulations?: number;
  },
): Generator<number, { mirror: MirrorTest | null; core: CoreTest }, void> {
  const { best: { found }, seed, simulations = 20, projector } = options;
  const { miss, core_kms, peak, roundProfile, skewness } = coreMiss(trail, {
    ...options,
    map: found.map,
  });
  const round = axisymmetricPart(found.map, {
    centre: { vx_kms: 0, vy_kms: 0 },
    statistic: "mean",
  });
  const shift = systemFrame(options.systemic_kms);
  const speed = shiftVelocities(trail.sampling.velocity_kms, shift).map(Math.abs);
  const truth = projector
    .forward(found.map.intensity.map((f, k) => f - round.intensity[k]!))
    .map((f, k) => f + roundProfile(speed[k]!));
  const misses: number[] = [];
  let left = 0, made = 0;
  for (let s = 0; s < simulations; s++) {
    const simulated = {
      ...trail,
      ...noiseReplica({ flux: truth, error: trail.error }, randomStream(seed, s)),
    };
    const again = bestPositiveMap(simulated, options).found;
    misses.push(coreMiss(simulated, { ...options, map: again.map, core_kms }).miss);
    left += mirrorTest(simulated, { ...options, model: again.model })?.chi_square ?? 0;
    made += mirrorTest(simulated, { ...options, model: truth })?.chi_square ?? 0;
    yield s + 1;
  }
  const mean = misses.reduce((a, b) => a + b, 0) / simulations;
  const square = misses.reduce((sum, m) => sum + (m - mean) ** 2, 0);
  const scatter = Math.sqrt(square / (simulations - 1) * (1 + 1 / simulations));
  const off = (miss - mean) / scatter;
  const sigma = unskewed(off, skewness(randomStream(seed, simulations)));
  return {
    mirror: mirrorTest(trail, {
      ...options,
      model: found.model,
      left: made > 0 ? left / made : 1,
    }),
    core: {
      p_value: studentTail(-sigma, simulations - 1),
      miss_over_peak: miss / peak,
      sigma,
      core_kms,
    },
  };
}

/** A deviate of a skewed distribution as one of a normal distribution (Wilson & Hilferty 1931, PNAS 17, 684). */
function unskewed(off: number, skewness: number): number {
  if (Math.abs(skewness) < 1e-3) return off;
  return 6 / skewness * (Math.cbrt(1 + 0.5 * skewness * off) - 1) + skewness / 6;
}

/** The range about γ that all exposures with data cover. */
function commonReach(trail: TrailSamples, systemic_kms: number): number {
  const { sampling, error } = trail;
  const velocity = shiftVelocities(sampling.velocity_kms, systemFrame(systemic_kms));
  let reach = Infinity;
  for (let i = 0; i < sampling.count; i++) {
    let low = Infinity, high = -Infinity;
    for (let k = sampling.start[i]!; k < sampling.start[i + 1]!; k++) {
      if (!(error[k]! < Infinity)) continue;
      low = Math.min(low, velocity[k]!);
      high = Math.max(high, velocity[k]!);
    }
    if (low < high) reach = Math.min(reach, -low, high);
  }
  return reach;
}

function orNull<T>(run: () => T): T | null {
  try {
    return run();
  } catch (cause) {
    if (cause instanceof InputError) return null;
    throw cause;
  }
}
