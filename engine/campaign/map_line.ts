import { type Binary, type Ephemeris, keplerianSpeed, phaseError } from "../binary/mod.ts";
import type { Warning } from "../errors.ts";
import { median } from "../numerics/mod.ts";
import {
  featurePeaks,
  type InversionRecipe,
  type MapFeature,
  mapFeatures,
  type MapPeak,
  mapPeak,
  type MapPlace,
  partFinder,
  resampleMaps,
  type VelocityMap,
} from "../tomography/mod.ts";
import type { SplitDate } from "../sky/mod.ts";
import type { Trail } from "../trail/mod.ts";
import type { Progress } from "../workers/mod.ts";
import { gridModel } from "./grid_model.ts";
import { blendsOf } from "./blends_of.ts";
import { invertTrail } from "./invert.ts";
import type { LineSign } from "./inversion/inverted.ts";
import { priorOf } from "./prior_of.ts";
import { signOf, turned } from "./sign_of.ts";
import type { SystemicVelocity } from "./systemic_of.ts";
import type { Target } from "./target.ts";
import type { MapSettings } from "./schema/map_section.ts";

const FWHM_PER_SIGMA = Math.sqrt(8 * Math.LN2);

/** The map of one line and how well it meets the trail. */
export interface MappedLine {
  /** The trail it was made from. */
  readonly trail: Trail;
  /** The map. */
  readonly map: VelocityMap;
  /** Inversion. */
  readonly method: MapSettings["method"];
  /** Systemic velocity taken out, km/s. */
  readonly systemic_kms: number;
  /** Whether the line was inverted as it is, with its sign turned, or with either sign allowed. */
  readonly sign: LineSign;
  /** Factor on the map's projection that fits the data best: ±1 where the inversion fits them itself. */
  readonly scale: number;
  /** χ² over the number of samples. */
  readonly reduced_chi_square: number;
  /** Number of unmasked samples. */
  readonly sample_count: number;
  /** χ² per sample that was aimed for in the end; null where there was no such goal. */
  readonly goal: number | null;
  /** Multiplier of the entropy or weight of the variation; null for back-projection. */
  readonly multiplier: number | null;
  /** Iterations; 1 for a direct inversion. */
  readonly iterations: number;
  /** Whether the iteration met its goal. */
  readonly converged: boolean;
  /** How far the gradients of entropy and misfit are from parallel; null for other inversions. */
  readonly misalignment: number | null;
  /** Brightest place. */
  readonly peak: MapPeak;
  /** Compact excesses over the axisymmetric part. */
  readonly features: readonly MapFeature[];
  /** One standard deviation of each pixel, from the replicas; null without them. */
  readonly spread: VelocityMap | null;
  /** The map projected on the trail's display grid, R × C. */
  readonly model: Float64Array;
  /** Data less model on the display grid, standard deviations. */
  readonly residual: Float64Array;
  /** How it is made again from other data, with the multiplier held. */
  readonly recipe: InversionRecipe;
  /** The map's data on native pixels, sign as in the trail, scaled to fit. */
  readonly samples: Float64Array;
  /** Resolution (FWHM) that features are measured at, km/s. */
  readonly resolution_kms: number;
  /** Centre of the axisymmetric part that features stand out of: the accretor where it is known. */
  readonly centre: MapPlace;
  /** What a user should know. */
  readonly warnings: readonly Warning[];
}

/**
 * Makes the map of one line.
 *
 * @param trail The line's trail.
 * @param options How.
 * @param options.target The target: `[map]` and the seed.
 * @param options.systemic Systemic velocity with its error.
 * @param options.binary Where the parts of the binary are; null when not known.
 * @param options.ephemeris The ephemeris, for what its zero marks.
 * @param options.epoch Any instant within the data: where the error of the phase is told.
 * @param options.workers Number of workers for the replicas. @default 1
 * @param options.force Whether to go on in spite of a large gap in phase. @default false
 * @param options.stream Added to the seed, so that lines do not share their chance. @default 0
 * @param options.progress Told of each replica.
 * @param options.signal Aborts the work.
 * @returns The map with its fit and features.
 */
export async function mapLine(
  trail: Trail,
  options: {
    target: Target;
    systemic: SystemicVelocity;
    binary: Binary | null;
    ephemeris: Ephemeris;
    epoch: SplitDate;
    workers?: number;
    force?: boolean;
    stream?: number;
    progress?: Progress;
    signal?: AbortSignal;
  },
): Promise<MappedLine> {
  const { target, systemic, binary, ephemeris, stream = 0, progress, signal } = options;
  const systemic_kms = systemic.kms;
  const settings = target.settings.map;
  const line = trail.line.name;
  const pixels = settings.pixels ?? pixelsFor(trail, settings.half_width_kms);
  const resolution_kms = FWHM_PER_SIGMA * median(trail.sampling.profile_sigma_kms);
  // On a map that is rotated by an unknown angle only the centre of mass is known to be where it is.
  const placed = binary !== null && ephemeris.zero_marks !== "emission-crossing";
  const centre = { vx_kms: 0, vy_kms: placed ? -binary.k_accretor_kms : 0 };
  const sign = signOf(trail, { target });
  // The linear inversion takes the data as they come: those of absorption with their sign turned.
  const data = settings.method === "back-projection" && sign === "absorption"
    ? turned(trail)
    : trail;
  const inverted = await invertTrail(data, {
    settings,
    pixels,
    systemic_kms,
    prior: await priorOf(target, { line, resolution_kms, centre_kms: centre.vy_kms, pixels }),
    blends: blendsOf(trail.line, { target }),
    sign,
    force: options.force ?? false,
    progress,
    signal,
  });
  const { map } = inverted;
  const spread = settings.resamples < 2 ? null : await resampleMaps(data, {
    recipe: inverted.recipe,
    count: settings.resamples,
    seed: target.settings.seed + stream,
    kind: settings.resampling,
    peaks: featurePeaks(map, { resolution_kms, centre }),
    centre,
    resolution_kms,
    workers: options.workers,
    progress,
    signal,
  });
  const disc = target.settings.model?.disc;
  const features = mapFeatures(map, {
    resolution_kms,
    centre,
    spread,
    alternatives: spread === null ? [] : inverted.alternatives,
    systemic_error_kms: systemic.error_kms ?? 0,
    phase_error: phaseError(ephemeris, options.epoch),
    find_part: placed ? partFinder(binary) : null,
    rim_speed_kms: binary === null || disc?.outer_radius_over_a === undefined
      ? null
      : keplerianSpeed(disc.outer_radius_over_a, binary),
  });
  return {
    trail,
    map,
    method: settings.method,
    systemic_kms,
    sign,
    scale: inverted.scale,
    reduced_chi_square: inverted.reduced_chi_square,
    sample_count: inverted.sample_count,
    goal: inverted.goal,
    multiplier: inverted.multiplier,
    iterations: inverted.iterations,
    converged: inverted.converged,
    misalignment: inverted.misalignment,
    peak: mapPeak(map),
    features,
    spread: spread?.deviation ?? null,
    ...gridModel(map, { trail, systemic_kms, scale: inverted.scale }),
    recipe: inverted.recipe,
    samples: inverted.model,
    resolution_kms,
    centre,
    warnings: [
      ...inverted.warnings,
      ...(sign !== "absorption" ? [] : [{
        code: "absorption-turned",
        line,
        text: "the line is in absorption: it is mapped with its sign turned",
      }]),
      ...(ephemeris.zero_marks !== "emission-crossing" ? [] : [{
        code: "map-rotated",
        line,
        text:
          "the zero of phase is not the donor's conjunction: the map is rotated by an unknown angle and no structure is named",
      }]),
      ...(settings.resamples >= 2 ? [] : [{
        code: "features-without-errors",
        line,
        text: "map.resamples is below 2: places and significance of features have no errors",
      }]),
    ],
  };
}

/** Pixels that sample the sharpest profile of the trail twice per full width at half maximum. */
function pixelsFor(trail: Trail, half_width_kms: number): number {
  const sharpest = FWHM_PER_SIGMA * Math.min(...trail.sampling.profile_sigma_kms);
  return 2 * Math.max(40, Math.ceil((2 * half_width_kms) / sharpest)) + 1;
}
