import { NotConverged, type Warning } from "../../errors.ts";
import {
  type Excess,
  featureBias,
  mapExcess,
  mapStep,
  pointResponses,
  samplingStructures,
  type VelocityMap,
} from "../../tomography/mod.ts";
import type { MappedLine } from "../map_line.ts";
import { pause } from "../pause.ts";

/** What the exposures and the inversion alone do to a feature. */
export interface FeatureStudy {
  /**
   * What a round disc, seen at these phases and inverted alike, shows at the feature's place, over the height
   * that the map has there; the feature's significance is of what is beyond it.
   */
  readonly sampling_part: number;
  /** Flux of the feature after a second pass through the inversion, over its flux; null where it is lost. */
  readonly flux_kept: number | null;
  /** Full width at half maximum of a point at its place, along the longer axis, km/s. */
  readonly resolution_major_kms: number;
  /** The same along the shorter axis. */
  readonly resolution_minor_kms: number;
  /** Direction of the longer axis, degrees from +Vx towards +Vy. */
  readonly resolution_tilt_deg: number;
}

/** What the sampling alone makes of a map, and what the inversion makes of its features. */
export interface Structures {
  /**
   * What the same exposures and inversion make of the round disc that fits the data best, beyond what is
   * round; null where the inversion does not settle.
   */
  readonly sampling: VelocityMap | null;
  /** One entry a feature, in order. */
  readonly features: readonly FeatureStudy[];
  /** What a user should know. */
  readonly warnings: readonly Warning[];
}

/**
 * Puts the map through its own exposures and inversion once more, without noise: what of it the sampling
 * alone could make, what of its features is lost, how sharp a point is at their places.
 *
 * @param mapped The map.
 * @param options How to work.
 * @param options.signal Aborts the work.
 * @returns The structures.
 */
export async function structuresStudy(
  mapped: MappedLine,
  options: { signal?: AbortSignal } = {},
): Promise<Structures> {
  try {
    return await settled(mapped, options);
  } catch (error) {
    if (!(error instanceof NotConverged)) throw error;
    const line = mapped.trail.line.name;
    const text = `what sampling and inversion do to features is not known: ${error.message}`;
    return {
      sampling: null,
      features: [],
      warnings: [{ code: "structures-not-settled", line, text }],
    };
  }
}

async function settled(
  mapped: MappedLine,
  options: { signal?: AbortSignal },
): Promise<Structures> {
  const { signal } = options;
  const { recipe, map, features, centre, resolution_kms, data } = mapped;
  const found = {
    map,
    model: mapped.samples,
    scale: Math.abs(mapped.scale),
    reduced_chi_square: mapped.reduced_chi_square,
    iterations: mapped.iterations,
    multiplier: mapped.multiplier,
  };
  const sampling = samplingStructures(data, mapped);
  await pause(signal);
  if (features.length === 0) return { sampling, features: [], warnings: [] };
  const look = { centre, resolution_kms };
  const excess = mapExcess(map, look), made = mapExcess(sampling, look);
  const step = mapStep(map);
  const pixel = (v: number) =>
    Math.min(map.pixels - 1, Math.max(0, Math.round((v + map.half_width_kms) / step)));
  const peaks = features.map(({ vx_kms, vy_kms }) =>
    excess.climb(pixel(vy_kms) * map.pixels + pixel(vx_kms))
  );
  const kept = featureBias(data, { recipe, found, peaks, ...look });
  await pause(signal);
  const points = pointResponses(data, { recipe, found, places: features });
  await pause(signal);
  return {
    sampling,
    warnings: saidOf(mapped, { made, excess, peaks }),
    features: peaks.map((peak, i) => ({
      sampling_part: made.values[peak]! / excess.values[peak]!,
      flux_kept: Number.isFinite(kept[i]!) ? kept[i]! : null,
      resolution_major_kms: points[i]!.major_fwhm_kms,
      resolution_minor_kms: points[i]!.minor_fwhm_kms,
      resolution_tilt_deg: points[i]!.tilt_deg,
    })),
  };
}

/** A feature that the sampling made more than this part of in the map is told. */
const SUSPECT = 0.5;

function saidOf(
  { trail }: MappedLine,
  found: { readonly made: Excess; readonly excess: Excess; readonly peaks: readonly number[] },
): Warning[] {
  const { made, excess, peaks } = found;
  const suspects = peaks.flatMap((peak, i) =>
    made.values[peak]! / excess.values[peak]! > SUSPECT ? [`${i + 1}`] : []
  );
  if (suspects.length === 0) return [];
  return [{
    code: "sampling-structure",
    line: trail.line.name,
    text: `the sampling of the orbit makes most of what the map shows at ${
      suspects.length === 1 ? "feature" : "features"
    } ${suspects.join(", ")} of a round disc: only what is left beyond it counts, and is told`,
  }];
}
