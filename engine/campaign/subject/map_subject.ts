import { backProject, type VelocityMap } from "../../tomography/mod.ts";
import type { Trail, TrailGrid } from "../../trail/mod.ts";
import type { PlateSubject } from "../../figures/mod.ts";
import type { MappedLine } from "../map_line.ts";

/** What plates show of a map. */
export function mapSubject(
  mapped: MappedLine,
): Pick<
  PlateSubject,
  "map" | "model" | "residual" | "features" | "reduced_chi_square" | "spread"
> {
  return {
    map: mapped.map,
    model: mapped.model,
    residual: mapped.residual,
    features: mapped.features,
    reduced_chi_square: mapped.reduced_chi_square,
    ...(mapped.spread === null ? {} : { spread: mapped.spread }),
  };
}

/**
 * Maps of two halves of the data by back-projection, whatever inversion made the map itself: odd and
 * even exposures within a night, the first nights and the later ones otherwise.
 *
 * @param mapped The map of all data.
 * @returns Two maps with their names.
 */
export function halvesSubject(mapped: MappedLine): NonNullable<PlateSubject["halves"]> {
  const { trail, map, systemic_kms } = mapped;
  const shape = { pixels: map.pixels, half_width_kms: map.half_width_kms, systemic_kms };
  const nights = nightsOf(trail);
  const last = Math.max(...nights);
  const half = (row: number) => (last === 0 ? row % 2 : nights[row]! <= (last - 1) / 2 ? 0 : 1);
  const made = ([0, 1] as const).map((which): VelocityMap =>
    backProject(
      { ...trail, grid: rowsOf(trail.grid, (row) => half(row) === which) },
      shape,
    )
  );
  return {
    maps: [made[0]!, made[1]!],
    names: last === 0
      ? ["odd exposures", "even exposures"]
      : ["first half of the nights", "second half of the nights"],
  };
}

/** Night of each row, from 0: gaps of more than half an orbit part them, where rows are exposures. */
function nightsOf(trail: Trail): number[] {
  const { cycle, phase } = trail.sampling;
  const binned = trail.grid.rows !== trail.sampling.count;
  let night = 0;
  return Array.from({ length: trail.grid.rows }, (_, row) => {
    if (!binned && row > 0) {
      const gap = cycle[row]! + phase[row]! - cycle[row - 1]! - phase[row - 1]!;
      if (gap > 1.5) night++;
    }
    return night;
  });
}

function rowsOf(grid: TrailGrid, keep: (row: number) => boolean): TrailGrid {
  const rows = Array.from({ length: grid.rows }, (_, row) => row).filter(keep);
  const pick = (values: Float64Array, stride: number) => {
    const out = new Float64Array(rows.length * stride);
    rows.forEach((row, i) =>
      out.set(values.subarray(row * stride, (row + 1) * stride), i * stride)
    );
    return out;
  };
  return {
    ...grid,
    rows: rows.length,
    phase: pick(grid.phase, 1),
    phase_width: pick(grid.phase_width, 1),
    flux: pick(grid.flux, grid.columns),
    error: pick(grid.error, grid.columns),
  };
}
