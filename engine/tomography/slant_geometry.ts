import { type MapShape, mapStep } from "./map_shape.ts";

/** How the map's lines fall on the velocity grid of one instant; see {@linkcode SlantPlan}. */
export interface SlantGeometry {
  /** Line direction: 0 rows (Vx runs along a line), 1 columns (Vy runs). */
  readonly axis: 0 | 1;
  /** Grid position of pixel 0 of line 0. */
  readonly u0: number;
  /** Change of grid position from line to line. */
  readonly du: number;
  /** Largest grid position of any pixel; the smallest is the margin. */
  readonly last: number;
  /** Velocity of grid position 0, km/s. */
  readonly zero_kms: number;
  /** Velocity step of the grid, km/s; negative where velocity falls along a line. */
  readonly grid_step_kms: number;
}

/** Options of {@linkcode slantGeometry}. */
export interface SlantOptions extends MapShape {
  /** Grid points per pixel along a line. */
  readonly over: number;
  /** Grid points kept free before the first pixel. */
  readonly margin: number;
}

/**
 * Lays the lines of a map on the velocity grid of one instant.
 *
 * @param phase Orbital phase, cycles.
 * @param options Map's shape, fineness of the grid, and margin.
 * @returns Where the lines fall.
 *
 * @example At phase 0.25 velocity is Vy: columns land on top of one another
 * ```ts
 * import { slantGeometry } from "@millrace/millrace/tomography";
 * import { assertAlmostEquals, assertEquals } from "@std/assert";
 *
 * const shape = { pixels: 11, half_width_kms: 500, over: 2, margin: 3 };
 * const line = slantGeometry(0.25, shape);
 * assertEquals(line.axis, 1);
 * assertAlmostEquals(line.zero_kms + line.u0 * line.grid_step_kms, -500, 1e-9);
 * ```
 */
export function slantGeometry(phase: number, options: SlantOptions): SlantGeometry {
  const { pixels, half_width_kms, over, margin } = options;
  const cos = Math.cos(2 * Math.PI * phase), sin = Math.sin(2 * Math.PI * phase);
  const columns = Math.abs(sin) >= Math.abs(cos);
  const grid_step_kms = mapStep(options) / over * (columns ? sin : -cos);
  const du = over * (columns ? -cos / sin : -sin / cos);
  const u0 = margin + Math.max(0, -du) * (pixels - 1);
  return {
    axis: columns ? 1 : 0,
    u0,
    du,
    last: u0 + Math.max(0, du) * (pixels - 1) + over * (pixels - 1),
    zero_kms: half_width_kms * (cos - sin) - u0 * grid_step_kms,
    grid_step_kms,
  };
}
