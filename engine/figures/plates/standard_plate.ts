import type { Picture } from "../display_list.ts";
import { drawPlate } from "./draw_plate.ts";
import type { PlateDescription } from "./plate_description.ts";
import type { PlateSubject } from "./plate_subject.ts";

/** What a standard plate shows: a subject with a map, its trail, and the map projected again. */
export type PlateContent =
  & PlateSubject
  & Required<Pick<PlateSubject, "map" | "trail" | "model" | "residual">>;

/** Choices in drawing a standard plate. */
export type PlateOptions = Omit<PlateDescription, "rows" | "each_subject">;

/**
 * Draws the standard plate: the velocity map in its ring of exposures, and beside it (below it in
 * one column) the trail as observed, the map projected again, and what is left in standard
 * deviations, the three on one velocity and one phase axis. The two trails share one colour bar.
 *
 * @param content What is shown.
 * @param options Width, colours, limits.
 * @returns The picture, to be drawn as SVG, PNG or PDF; its description is the caption.
 * @throws {InputError} When a colour map is not known or the width is out of range.
 *
 * @example
 * ```ts
 * import { standardPlate, svgText } from "@millrace/millrace/figures";
 * import { assert } from "@std/assert";
 *
 * const grid = {
 *   rows: 2, columns: 3, first_kms: -300, step_kms: 300,
 *   phase: Float64Array.of(0.25, 0.75), phase_width: Float64Array.of(0.5, 0.5),
 *   flux: Float64Array.of(0, 0, 1, 1, 0, 0), error: new Float64Array(6).fill(0.1),
 * };
 * const plate = standardPlate({
 *   title: "VX-0417",
 *   line: { name: "H beta", vacuum_angstrom: 4862.69, air_angstrom: 4861.33, source: "" },
 *   map: { pixels: 3, half_width_kms: 300, intensity: new Float64Array(9) },
 *   trail: { grid, sampling: { count: 2, phase: grid.phase, phase_width: grid.phase_width } },
 *   model: new Float64Array(6),
 *   residual: new Float64Array(6),
 *   binary: null,
 *   systemic_kms: 0,
 *   method: "back-projection",
 * });
 * assert(svgText(plate).includes("VX-0417"));
 * ```
 */
export function standardPlate(content: PlateContent, options: PlateOptions = {}): Picture {
  return drawPlate(options, [content]).picture;
}
