import {
  backProject,
  localResolution,
  type MapFeaturesOptions,
  type VelocityMap,
} from "../../tomography/mod.ts";
import { median } from "../../numerics/mod.ts";
import { FWHM_OVER_SIGMA } from "../../trail/mod.ts";
import type { PlateSubject } from "../../figures/mod.ts";
import type { Binary } from "../../binary/mod.ts";
import type { MappedLine } from "../map_line.ts";
import { uprightTrail } from "../sign_of.ts";
import { nightsOf, rowsOf } from "./nights.ts";

/** What plates show of a map. */
export function mapSubject(
  mapped: MappedLine,
): Pick<
  PlateSubject,
  "map" | "model" | "residual" | "features" | "reduced_chi_square" | "spread" | "phase_gap"
> {
  return {
    map: mapped.map,
    model: mapped.model,
    residual: mapped.residual,
    features: mapped.features,
    reduced_chi_square: mapped.reduced_chi_square,
    ...(mapped.spread === null ? {} : { spread: mapped.spread }),
    ...(mapped.phase_gap === null ? {} : { phase_gap: mapped.phase_gap }),
  };
}

/** A map of some of the exposures. */
export interface PartMap {
  /** Which, as in "odd exposures". */
  readonly name: string;
  /** Number of exposures. */
  readonly exposures: number;
  /** The map; null when they are too few, or cover too little of the half orbit. */
  readonly map: VelocityMap | null;
}

/** Fewest exposures of which a map is made. */
const FEWEST = 8;

/** How features of a part's map are looked for: as those of the whole map are. */
export function featureOptions(mapped: MappedLine, binary: Binary | null): MapFeaturesOptions {
  return {
    resolution_kms: FWHM_OVER_SIGMA * median(mapped.trail.sampling.profile_sigma_kms),
    centre: { vx_kms: 0, vy_kms: binary === null ? 0 : -binary.k_accretor_kms },
  };
}

/**
 * Maps of two halves of the data by back-projection, whatever inversion made the map itself: odd and
 * even exposures within a night, the first nights and the later ones otherwise.
 *
 * @param mapped The map of all data.
 * @param options The orbit.
 * @param options.period_d Period, d.
 * @returns Two maps with their names.
 */
export function halvesSubject(
  mapped: MappedLine,
  options: { period_d: number },
): NonNullable<PlateSubject["halves"]> {
  const nights = rowNights(mapped, options);
  const last = Math.max(...nights);
  const half = (row: number) => (last === 0 ? row % 2 : nights[row]! <= (last - 1) / 2 ? 0 : 1);
  const made = ([0, 1] as const).map((which) => partMap(mapped, (row) => half(row) === which));
  return {
    maps: [made[0]!, made[1]!],
    names: last === 0
      ? mapped.trail.grid.rows === mapped.trail.sampling.count
        ? ["odd exposures", "even exposures"]
        : ["odd bins of phase", "even bins of phase"]
      : last === 1
      ? ["first night", "second night"]
      : ["first half of the nights", "second half of the nights"],
  };
}

/**
 * A map of each night by back-projection.
 *
 * @param mapped The map of all data.
 * @param options The orbit.
 * @param options.period_d Period, d.
 * @returns One entry a night, in order.
 */
export function nightMaps(mapped: MappedLine, options: { period_d: number }): PartMap[] {
  const nights = rowNights(mapped, options);
  const last = Math.max(...nights);
  return Array.from({ length: last + 1 }, (_, night): PartMap => {
    const exposures = nights.filter((one) => one === night).length;
    return {
      name: `night ${night + 1}`,
      exposures,
      map: exposures < FEWEST ? null : partMap(mapped, (row) => nights[row] === night),
    };
  });
}

/** Night of each row of the display grid; all one where rows are bins of phase. */
function rowNights({ trail }: MappedLine, options: { period_d: number }): number[] {
  return trail.grid.rows === trail.sampling.count
    ? nightsOf(trail.sampling, options)
    : new Array<number>(trail.grid.rows).fill(0);
}

function partMap(mapped: MappedLine, keep: (row: number) => boolean): VelocityMap {
  const { map, systemic_kms } = mapped;
  return backProject(
    { grid: rowsOf(uprightTrail(mapped).grid, keep) },
    { pixels: map.pixels, half_width_kms: map.half_width_kms, systemic_kms },
  );
}

/** Ellipses of the local resolution of the back-projection of a line. */
export function resolutionSubject(mapped: MappedLine): Pick<PlateSubject, "resolution"> {
  const { trail, map, systemic_kms } = mapped;
  const { grid, sampling } = trail;
  const sigma = sampling.profile_sigma_kms;
  return {
    resolution: localResolution(grid, {
      pixels: map.pixels,
      half_width_kms: map.half_width_kms,
      systemic_kms,
      // Rows that are bins mix exposures: they have the middle profile.
      profile_sigma_kms: grid.rows === sampling.count
        ? sigma
        : new Float64Array(grid.rows).fill(median(sigma)),
    }),
  };
}
