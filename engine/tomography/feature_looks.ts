import type { MapPlace } from "./axisymmetric_part.ts";
import { type Excess, mapExcess } from "./map_excess.ts";
import type { MapFeaturesOptions } from "./map_features.ts";
import type { VelocityMap } from "./velocity_map.ts";

/** The middle of a map. */
export const ORIGIN: MapPlace = { vx_kms: 0, vy_kms: 0 };

/** What a feature is measured on. */
export interface FeatureLooks {
  /** The excess that features are looked for in. */
  readonly excess: Excess;
  /** Excesses of maps with other regularisation. */
  readonly others: readonly Excess[];
  /** That of the map of the map. */
  readonly again: Excess | null;
  /** Excesses about centres an error to either side, along each axis that has one. */
  readonly beside: readonly (readonly [Excess, Excess])[];
}

/** A centre an error to a side, and what that changes in what a round disc alone makes. */
export interface MovedCentre {
  /** The centre. */
  readonly centre: MapPlace;
  /** The change; null where nothing is explained. */
  readonly change: Float64Array | null;
}

/**
 * The centres an error to either side along each axis that has one.
 *
 * @param options Options of the features.
 * @returns One pair an axis.
 */
export function movedCentres(
  options: MapFeaturesOptions,
): (readonly [MovedCentre, MovedCentre])[] {
  const { centre = ORIGIN, centre_error_kms = ORIGIN, explain = null } = options;
  const { vx_kms: x, vy_kms: y } = centre_error_kms;
  const sides = [...(x > 0 ? [[x, 0] as const] : []), ...(y > 0 ? [[0, y] as const] : [])];
  const unmoved = sides.length > 0 && explain !== null ? explain([]).intensity : null;
  const moved = (vx_kms: number, vy_kms: number): MovedCentre => ({
    centre: { vx_kms: centre.vx_kms + vx_kms, vy_kms: centre.vy_kms + vy_kms },
    change: explain &&
      explain([], { vx_kms, vy_kms }).intensity.map((f, k) => f - unmoved![k]!),
  });
  return sides.map(([vx, vy]) => [moved(-vx, -vy), moved(vx, vy)] as const);
}

/**
 * The excesses that features are measured on, beyond what sampling makes of those found already.
 *
 * @param map The map.
 * @param options Options of the features, what is taken off, the moved centres.
 * @returns The excesses.
 */
export function featureLooks(
  map: VelocityMap,
  options: MapFeaturesOptions & {
    readonly alone: VelocityMap | null;
    readonly moved: readonly (readonly [MovedCentre, MovedCentre])[];
  },
): FeatureLooks {
  const { resolution_kms, centre = ORIGIN, alone } = options;
  const look = { centre, resolution_kms, alone };
  // What spots make hardly depends on where the disc is: the change is that of the disc alone.
  const about = ({ centre, change }: MovedCentre) =>
    mapExcess(map, {
      centre,
      resolution_kms,
      alone: alone && change &&
        { ...alone, intensity: alone.intensity.map((f, k) => f + change[k]!) },
    });
  return {
    excess: mapExcess(map, look),
    others: (options.alternatives ?? []).map((other) => mapExcess(other, look)),
    again: options.remade ? mapExcess(options.remade, look) : null,
    beside: options.moved.map(([low, high]) => [about(low), about(high)] as const),
  };
}
