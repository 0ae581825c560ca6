import type { Binary, Ephemeris } from "../binary/mod.ts";
import type { Warning } from "../errors.ts";
import { median, randomStream } from "../numerics/mod.ts";
import {
  backProject,
  fitOfMap,
  makeProjector,
  type MapFeature,
  mapFeatures,
  type MapPeak,
  mapPeak,
  noiseReplica,
  partFinder,
  type VelocityMap,
} from "../tomography/mod.ts";
import type { Trail } from "../trail/mod.ts";
import type { Progress } from "../workers/mod.ts";
import { gridModel } from "./grid_model.ts";
import { pause } from "./pause.ts";
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
  /** Factor on the map's projection that fits the data best: 1 where the inversion fits them itself. */
  readonly scale: number;
  /** χ² over the number of samples. */
  readonly reduced_chi_square: number;
  /** Number of unmasked samples. */
  readonly sample_count: number;
  /** Iterations; 1 for a direct inversion. */
  readonly iterations: number;
  /** Whether the iteration met its goal. */
  readonly converged: boolean;
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
  /** What a user should know. */
  readonly warnings: readonly Warning[];
}

/**
 * Makes the map of one line.
 *
 * @param trail The line's trail.
 * @param options How.
 * @param options.settings `[map]`.
 * @param options.systemic_kms Systemic velocity, km/s.
 * @param options.binary Where the parts of the binary are; null when not known.
 * @param options.ephemeris The ephemeris, for what its zero marks.
 * @param options.seed Seed of the replicas.
 * @param options.stream First stream of the replicas, so that lines do not share their chance. @default 0
 * @param options.progress Told of each replica.
 * @param options.signal Aborts the work.
 * @returns The map with its fit and features.
 */
export async function mapLine(
  trail: Trail,
  options: {
    settings: MapSettings;
    systemic_kms: number;
    binary: Binary | null;
    ephemeris: Ephemeris;
    seed: number;
    stream?: number;
    progress?: Progress;
    signal?: AbortSignal;
  },
): Promise<MappedLine> {
  const { settings, systemic_kms, binary, ephemeris, seed, stream = 0, progress, signal } = options;
  const shape = {
    pixels: settings.pixels ?? pixelsFor(trail, settings.half_width_kms),
    half_width_kms: settings.half_width_kms,
    systemic_kms,
  };
  const map = backProject(trail, shape);
  await pause(signal);
  const projection = makeProjector(trail.sampling, shape).forward(map.intensity);
  const fit = fitOfMap(trail, { model: projection, scale: "fitted" });
  const replicas: VelocityMap[] = [];
  for (let k = 0; k < settings.resamples; k++) {
    const samples = noiseReplica(trail.grid, randomStream(seed, stream + k));
    replicas.push(backProject({ ...trail, grid: { ...trail.grid, ...samples } }, shape));
    progress?.(k + 1, settings.resamples, `${trail.line.name}: replicas of the map`);
    await pause(signal);
  }
  const named = binary !== null && ephemeris.zero_marks !== "emission-crossing";
  const warnings: Warning[] = [];
  if (ephemeris.zero_marks === "emission-crossing") {
    warnings.push({
      code: "map-rotated",
      line: trail.line.name,
      text:
        "the zero of phase is not the donor's conjunction: the map is rotated by an unknown angle and no structure is named",
    });
  }
  if (settings.resamples < 2) {
    warnings.push({
      code: "features-without-errors",
      line: trail.line.name,
      text: "map.resamples is below 2: places and significance of features have no errors",
    });
  }
  const features = mapFeatures(map, {
    resolution_kms: FWHM_PER_SIGMA * median(trail.sampling.profile_sigma_kms),
    centre: { vx_kms: 0, vy_kms: binary === null ? 0 : -binary.k_accretor_kms },
    replicas,
    find_part: named ? partFinder(binary) : null,
  });
  return {
    trail,
    map,
    method: "back-projection",
    systemic_kms,
    scale: fit.scale,
    reduced_chi_square: fit.reduced_chi_square,
    sample_count: fit.sample_count,
    iterations: 1,
    converged: true,
    peak: mapPeak(map),
    features,
    spread: spreadOf(replicas),
    ...gridModel(map, { trail, systemic_kms, scale: fit.scale }),
    warnings,
  };
}

/** Pixels that sample the sharpest profile of the trail twice per full width at half maximum. */
function pixelsFor(trail: Trail, half_width_kms: number): number {
  const sharpest = FWHM_PER_SIGMA * Math.min(...trail.sampling.profile_sigma_kms);
  return 2 * Math.max(40, Math.ceil((2 * half_width_kms) / sharpest)) + 1;
}

/** Standard deviation of each pixel among replicas. */
function spreadOf(replicas: readonly VelocityMap[]): VelocityMap | null {
  const [first] = replicas;
  if (first === undefined || replicas.length < 2) return null;
  const intensity = first.intensity.map((_, k) => {
    let sum = 0, square = 0;
    for (const replica of replicas) {
      sum += replica.intensity[k]!;
      square += replica.intensity[k]! ** 2;
    }
    const n = replicas.length;
    return Math.sqrt(Math.max(0, (square - (sum * sum) / n) / (n - 1)));
  });
  return { ...first, intensity };
}
