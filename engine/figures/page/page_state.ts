import type { StretchName } from "../colour/stretch.ts";
import type { DisplayGrid } from "../panels/folded_grid.ts";
import type { MarkedFeature } from "../panels/map_overlay.ts";
import type { VelocityMap } from "../../tomography/mod.ts";
import { unpackArray } from "./packed_array.ts";
import type { ReportBinary, ReportData, ReportLine, ReportMap } from "./report_data.ts";

/** A map ready to be drawn. */
export interface PageMap {
  readonly method: string;
  readonly reduced_chi_square: number | null;
  readonly map: VelocityMap;
  readonly model: Float64Array;
  readonly residual: Float64Array;
  readonly features: readonly MarkedFeature[];
}

/** A line ready to be drawn. */
export interface PageLine {
  readonly name: string;
  readonly air_angstrom: number;
  readonly systemic_kms: number;
  readonly sources: readonly string[];
  readonly grid: DisplayGrid;
  readonly maps: readonly PageMap[];
}

/** What sliders say of the binary. */
export interface PageBinary {
  readonly mass_ratio: number;
  readonly k_sum_kms: number;
  readonly systemic_kms: number;
  /** True phase zero less the one used, cycles. */
  readonly phase_zero: number;
  readonly outer_radius_over_a: number;
  readonly inner_radius_over_a: number;
}

/** A pointed-at place: a pixel of the map, or a phase and velocity of the trail. */
export type Probe =
  | { readonly at: "map"; readonly vx_kms: number; readonly vy_kms: number }
  | { readonly at: "trail"; readonly phase: number; readonly velocity_kms: number };

/** All that the page shows at one moment. */
export interface PageState {
  readonly line: number;
  readonly map: number;
  readonly stretch: StretchName;
  readonly exposure: number;
  readonly binary: PageBinary | null;
  readonly probe: Probe | null;
}

/** Unpacks a report's lines, each when it is first asked for. */
export function lineReader(data: ReportData): (index: number) => PageLine {
  const known = new Map<number, PageLine>();
  return (index) => {
    const line = known.get(index) ?? readLine(data.lines[index]!);
    known.set(index, line);
    return line;
  };
}

function readLine(line: ReportLine): PageLine {
  const { name, air_angstrom, systemic_kms, sources, rows, columns, first_kms, step_kms } = line;
  const error = unpackArray(line.error);
  return {
    name,
    air_angstrom,
    systemic_kms,
    sources,
    grid: {
      rows,
      columns,
      first_kms,
      step_kms,
      phase: Float64Array.from(line.phase),
      phase_width: Float64Array.from(line.phase_width),
      flux: unpackArray(line.flux),
      error: error.map((value) => Number.isFinite(value) ? value : Infinity),
    },
    maps: line.maps.map(readMap),
  };
}

function readMap(map: ReportMap): PageMap {
  const { method, reduced_chi_square, features, pixels, half_width_kms } = map;
  return {
    method,
    reduced_chi_square,
    features,
    map: { pixels, half_width_kms, intensity: unpackArray(map.intensity) },
    model: unpackArray(map.model),
    residual: unpackArray(map.residual),
  };
}

/** Where the sliders start. */
export function startBinary(binary: ReportBinary | null, systemic_kms: number): PageBinary | null {
  if (binary === null) return null;
  const { mass_ratio, outer_radius_over_a, inner_radius_over_a } = binary;
  return {
    mass_ratio,
    k_sum_kms: binary.k_accretor_kms + binary.k_donor_kms,
    systemic_kms,
    phase_zero: 0,
    outer_radius_over_a,
    inner_radius_over_a,
  };
}

/** Speeds of the two stars that the sliders stand for. */
export function speedsOf(binary: PageBinary) {
  const { mass_ratio, k_sum_kms } = binary;
  const k_accretor_kms = k_sum_kms * mass_ratio / (1 + mass_ratio);
  return { mass_ratio, k_accretor_kms, k_donor_kms: k_sum_kms - k_accretor_kms };
}

/**
 * A place of the binary's own frame in the map's: when the true zero of phase lies later by
 * `phase_zero` cycles, the binary stands turned in a map that was made with the earlier one.
 */
export function turned(
  place: readonly [vx_kms: number, vy_kms: number],
  phase_zero: number,
): [vx_kms: number, vy_kms: number] {
  const cos = Math.cos(2 * Math.PI * phase_zero);
  const sin = Math.sin(2 * Math.PI * phase_zero);
  return [place[0] * cos + place[1] * sin, place[1] * cos - place[0] * sin];
}

/** Velocity at which emission at a place of the map is seen (Marsh & Horne 1988). */
export function seenVelocity(
  place: readonly [vx_kms: number, vy_kms: number],
  at: { readonly phase: number; readonly systemic_kms: number },
): number {
  const angle = 2 * Math.PI * at.phase;
  return at.systemic_kms - place[0] * Math.cos(angle) + place[1] * Math.sin(angle);
}

/** Index of the row whose phase is nearest. */
export function nearestRow(grid: DisplayGrid, phase: number): number {
  const away = (row: number) => {
    const gap = Math.abs(grid.phase[row]! - phase) % 1;
    return Math.min(gap, 1 - gap);
  };
  let best = 0;
  for (let row = 1; row < grid.rows; row++) if (away(row) < away(best)) best = row;
  return best;
}
