import { type Binary, type Ephemeris, keplerianSpeed, phaseError } from "../binary/mod.ts";
import type { Warning } from "../errors.ts";
import { median } from "../numerics/mod.ts";
import {
  type BlendMember,
  featurePeaks,
  largestHalfOrbitGap,
  mapExplainer,
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
import { centreErrorOf } from "./centre_error_of.ts";
import { gridModel } from "./grid_model.ts";
import { type InvertedLine, invertLine } from "./inversion/invert_line.ts";
import { type JoinedLine, joinTrails } from "./join_trails.ts";
import { pause } from "./pause.ts";
import { priorOf } from "./prior_of.ts";
import type { SystemicVelocity } from "./systemic_of.ts";
import type { Target } from "./target.ts";
import type { MapSettings } from "./schema/map_section.ts";

const FWHM_PER_SIGMA = Math.sqrt(8 * Math.LN2);

// Twelve directions show every other one next to none of the two beside it: what is no disc with spots
// leaves streaks that no round disc explains.
const FEW_EXPOSURES = 12;

/** The map of one line and how well it meets the trail. */
export interface MappedLine extends
  Pick<
    InvertedLine,
    | "map"
    | "scale"
    | "reduced_chi_square"
    | "sample_count"
    | "goal"
    | "multiplier"
    | "iterations"
    | "converged"
    | "misalignment"
    | "sign"
    | "data"
    | "recipe"
    | "blends"
    | "own_maps"
    | "baselines"
  > {
  /** The trail it was made from. */
  readonly trail: Trail;
  /** Inversion. */
  readonly method: MapSettings["method"];
  /** Systemic velocity taken out, km/s. */
  readonly systemic_kms: number;
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
  /** Other lines of which it is the map, too. */
  readonly together: readonly JoinedLine[];
  /** The map's data on the native pixels of `data`, sign as in the trail, scaled to fit. */
  readonly samples: Float64Array;
  /** Resolution (FWHM) that features are measured at, km/s. */
  readonly resolution_kms: number;
  /** Centre of the axisymmetric part that features stand out of: the accretor where it is known. */
  readonly centre: MapPlace;
  /** One standard deviation of that centre along each axis, km/s. */
  readonly centre_error_kms: MapPlace;
  /** What the same exposures and inversion make of the round disc that fits the data best. */
  readonly alone: VelocityMap;
  /** Largest gap in phase modulo half an orbit, where it is so large that the map had to be forced. */
  readonly phase_gap: number | null;
  /** What a user should know. */
  readonly warnings: readonly Warning[];
}

/**
 * Makes the map of one line.
 *
 * @param trail The line's trail.
 * @param options How.
 * @param options.target The target: `[map]` and the seed.
 * @param options.together Trails of other lines of which the same map is made. @default none
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
    together?: readonly { readonly trail: Trail; readonly ratio: number | "measured" }[];
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
  const { half_width_kms } = settings;
  const { joint, joined } = joinTrails(trail, {
    others: options.together ?? [],
    systemic_kms,
    half_width_kms,
  });
  const pixels = settings.pixels ?? pixelsFor(joint, half_width_kms);
  const resolution_kms = FWHM_PER_SIGMA * median(joint.sampling.profile_sigma_kms);
  // On a map that is rotated by an unknown angle only the centre of mass is known to be where it is.
  const placed = binary !== null && ephemeris.zero_marks !== "emission-crossing";
  const centre = { vx_kms: 0, vy_kms: placed ? -binary.k_accretor_kms : 0 };
  const inverted = await invertLine(joint, {
    target,
    settings,
    pixels,
    systemic_kms,
    prior: await priorOf(target, { line, resolution_kms, centre_kms: centre.vy_kms, pixels }),
    force: options.force ?? false,
    progress,
    signal,
  });
  const { map, data, sign, recipe, resampled } = inverted;
  const centre_error_kms = centreErrorOf(target, { binary, placed });
  const explain = mapExplainer(data, { recipe, centre, resolution_kms });
  const alone = explain([]);
  await pause(signal);
  const spread = settings.resamples < 2 ? null : await resampleMaps(resampled?.data ?? data, {
    recipe: resampled?.recipe ?? recipe,
    count: settings.resamples,
    seed: target.settings.seed + stream,
    kind: settings.resampling,
    peaks: featurePeaks(map, { resolution_kms, centre, alone }),
    centre,
    alone,
    resolution_kms,
    workers: options.workers,
    progress,
    signal,
  });
  const disc = target.settings.model?.disc;
  const features = mapFeatures(map, {
    resolution_kms,
    centre,
    centre_error_kms,
    explain,
    spread,
    remade: inverted.remade,
    systemic_error_kms: systemic.error_kms ?? 0,
    phase_error: phaseError(ephemeris, options.epoch),
    find_part: placed ? partFinder(binary) : null,
    rim_speed_kms: binary === null || disc?.outer_radius_over_a === undefined
      ? null
      : keplerianSpeed(disc.outer_radius_over_a, binary),
  });
  const { remade: _again, resampled: _all, model: samples, straight, ...rest } = inverted;
  return {
    ...rest,
    trail,
    method: settings.method,
    systemic_kms,
    peak: mapPeak(map),
    features,
    spread: spread?.deviation ?? null,
    ...gridModel(map, {
      trail: straight,
      systemic_kms,
      scale: inverted.scale,
      blends: membersOf(inverted),
      own: inverted.own_maps.map(({ map, blend: { rest_ratio } }) => ({ map, rest_ratio })),
    }),
    samples,
    together: joined,
    phase_gap: inverted.warnings.some(({ code }) => code === "phase-gap")
      ? largestHalfOrbitGap(trail.sampling.phase)
      : null,
    resolution_kms,
    centre,
    centre_error_kms,
    alone,
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
      ...(trail.sampling.count >= FEW_EXPOSURES ? [] : [{
        code: "few-exposures-mapped",
        line,
        text:
          `the map is of ${trail.sampling.count} exposures alone: what their few directions make of a round disc and of the features told is taken off, but a source of any other shape leaves streaks, which repeat whatever the noise`,
      }]),
      ...(settings.resamples >= 2 ? [] : [{
        code: "features-without-errors",
        line,
        text: "map.resamples is below 2: places and significance of features have no errors",
      }]),
    ],
  };
}

/** The blends that share the map. */
export function membersOf({ recipe }: Pick<MappedLine, "recipe">): readonly BlendMember[] {
  return "blends" in recipe ? recipe.blends ?? [] : [];
}

/** Pixels that sample the sharpest profile of the trail twice per full width at half maximum. */
function pixelsFor(trail: Trail, half_width_kms: number): number {
  const sharpest = FWHM_PER_SIGMA * Math.min(...trail.sampling.profile_sigma_kms);
  return 2 * Math.max(40, Math.ceil((2 * half_width_kms) / sharpest)) + 1;
}
