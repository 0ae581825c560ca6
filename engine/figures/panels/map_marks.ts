import { ellipsePath, type Item, linePath } from "../display_list.ts";
import type { PlotPlace } from "../axes.ts";
import type { MapWindow } from "./map_window.ts";
import { labelRuns } from "../runs.ts";
import { INK, NOTE_PT, PAPER, QUIET } from "../style.ts";
import type { VelocityCurve } from "./binary_marks.ts";

/** Local resolution of a map at one place: the ellipse of a point's half-maximum. */
export interface ResolutionEllipse {
  /** Place, km/s. */
  readonly vx_kms: number;
  /** Place, km/s. */
  readonly vy_kms: number;
  /** Full width at half maximum along the longer axis, km/s. */
  readonly major_kms: number;
  /** Along the shorter axis, km/s. */
  readonly minor_kms: number;
  /** Angle of the longer axis from +Vx towards +Vy, degrees. */
  readonly angle_deg: number;
}

/**
 * Draws ellipses of local resolution over a map, at their true size.
 *
 * @param ellipses Where and how large.
 * @param place Where velocities stand on the page.
 * @returns Items for the overlay of a map panel.
 *
 * @example
 * ```ts
 * import { mapWindow, resolutionEllipses } from "@millrace/millrace/figures";
 * import { assertEquals } from "@std/assert";
 *
 * const place = mapWindow({ pixels: 101, half_width_kms: 1000 }, { x: 0, y: 0, width: 200, height: 200 });
 * const ellipse = { vx_kms: 0, vy_kms: 0, major_kms: 200, minor_kms: 100, angle_deg: 30 };
 * assertEquals(resolutionEllipses([ellipse], place).length, 2);
 * ```
 */
export function resolutionEllipses(
  ellipses: readonly ResolutionEllipse[],
  place: PlotPlace,
): Item[] {
  const scale = Math.abs(place.x(1) - place.x(0));
  const d = ellipses.map((ellipse) =>
    ellipsePath([place.x(ellipse.vx_kms), place.y(ellipse.vy_kms)], {
      rx: ellipse.major_kms / 2 * scale,
      ry: ellipse.minor_kms / 2 * scale,
      rotate_deg: -ellipse.angle_deg,
    })
  ).join("");
  return [
    { kind: "path", d, stroke: PAPER, stroke_pt: 1.4, stroke_opacity: 0.8 },
    { kind: "path", d, stroke: INK, stroke_pt: 0.5 },
  ];
}

/** A circle of Keplerian speed about the accretor: a rim of the disc. */
export interface DiscRim {
  /** Keplerian speed at the rim, projected, km/s. */
  readonly speed_kms: number;
  /** Name (markup of `labelRuns`). */
  readonly name?: string;
}

/**
 * Draws rims of the disc as circles about the accretor: the inner rim is the larger circle.
 *
 * @param rims The rims.
 * @param options Where velocities stand, and the accretor.
 * @returns Items for the overlay of a map panel.
 *
 * @example
 * ```ts
 * import { discRims, mapWindow } from "@millrace/millrace/figures";
 * import { assertEquals } from "@std/assert";
 *
 * const place = mapWindow({ pixels: 101, half_width_kms: 1000 }, { x: 0, y: 0, width: 200, height: 200 });
 * assertEquals(discRims([{ speed_kms: 500, name: "outer rim" }], { place, accretor: [0, -70] }).length, 3);
 * ```
 */
export function discRims(
  rims: readonly DiscRim[],
  options: {
    /** Where the map stands on the page. */
    readonly place: MapWindow;
    /** Velocity of the accretor, km/s. */
    readonly accretor: readonly [vx_kms: number, vy_kms: number];
  },
): Item[] {
  const { place, accretor: [vx, vy] } = options;
  const scale = Math.abs(place.x(1) - place.x(0));
  const centre = [place.x(vx), place.y(vy)] as const;
  const d = rims.map((rim) => ellipsePath(centre, { rx: rim.speed_kms * scale })).join("");
  const words = rims.flatMap((rim): Item[] => {
    if (rim.name === undefined) return [];
    // Lower right: the stream keeps to the left. A large circle has its name inside.
    const r = rim.speed_kms * scale * Math.SQRT1_2;
    const large = rim.speed_kms * scale > 0.55 * place.window.width / 2;
    const at = { x: centre[0] + r + (large ? -3 : 3), y: centre[1] + r + (large ? 0 : 4) };
    const style = { kind: "text", size_pt: NOTE_PT, fill: QUIET, halo: PAPER } as const;
    return [{ ...style, ...at, anchor: large ? "end" : "start", runs: labelRuns(rim.name) }];
  });
  return [
    { kind: "path", d, stroke: PAPER, stroke_pt: 1.4, stroke_opacity: 0.7 },
    { kind: "path", d, stroke: QUIET, stroke_pt: 0.7, dash_pt: [1, 1.6], cap: "round" },
    ...words,
  ];
}

/**
 * Draws a band between two curves of equal length, such as the streams of q − σ and q + σ.
 *
 * @param curves The two edges, point for point.
 * @param place Where velocities stand on the page.
 * @returns Items for the overlay of a map panel.
 *
 * @example
 * ```ts
 * import { mapWindow, uncertainBand } from "@millrace/millrace/figures";
 * import { assertEquals } from "@std/assert";
 *
 * const place = mapWindow({ pixels: 101, half_width_kms: 1000 }, { x: 0, y: 0, width: 200, height: 200 });
 * assertEquals(uncertainBand([[[0, 0], [10, 0]], [[0, 5], [10, 5]]], place).length, 1);
 * ```
 */
export function uncertainBand(
  curves: readonly [VelocityCurve, VelocityCurve],
  place: PlotPlace,
): Item[] {
  const around = [...curves[0], ...curves[1].toReversed()];
  const d = linePath(around.map(([vx, vy]) => [place.x(vx), place.y(vy)] as const), true);
  return [{ kind: "path", d, fill: INK, fill_opacity: 0.18 }];
}
