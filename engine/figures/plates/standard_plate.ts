import type { Binary } from "../../binary/mod.ts";
import type { SpectralLine } from "../../sky/mod.ts";
import type { VelocityMap } from "../../tomography/mod.ts";
import type { Sampling } from "../../trail/mod.ts";
import { colourBar, tidyExponent } from "../colour/colour_bar.ts";
import type { ColourMapName } from "../colour/colour_map.ts";
import type { ColourScale } from "../colour/colour_scale.ts";
import { robustLimits } from "../colour/limits.ts";
import type { StretchName } from "../colour/stretch.ts";
import { type Box, type Item, type Picture, POINTS_PER_MM } from "../display_list.ts";
import { binaryMarks } from "../panels/binary_marks.ts";
import type { DisplayGrid } from "../panels/folded_grid.ts";
import type { MapFeature } from "../panels/map_overlay.ts";
import { mapPanel } from "../panels/map_panel.ts";
import type { MapShape } from "../panels/map_place.ts";
import { KMS_LABEL, trailPanel } from "../panels/trail_panel.ts";
import { lineLabel } from "../line_label.ts";
import { labelRuns, plainRuns } from "../runs.ts";
import { INK, LABEL_PT, NOTE_PT, QUIET } from "../style.ts";
import { standardDescription } from "./standard_description.ts";
import { standardLayout } from "./standard_layout.ts";

/** What a standard plate shows. */
export interface PlateContent {
  /** Name of the object; empty for none. */
  readonly title: string;
  /** The line, with its rest wavelength. */
  readonly line: SpectralLine;
  /** The velocity map. */
  readonly map: VelocityMap;
  /** The trail: its display grid and the sampling of the orbit. */
  readonly trail: {
    /** Uniform grid for display. */
    readonly grid: DisplayGrid;
    /** Phases and widths of the exposures. */
    readonly sampling: Pick<Sampling, "count" | "phase" | "phase_width">;
  };
  /** The map projected again, R × C on the trail's grid. */
  readonly model: Float64Array;
  /** Data less model in standard deviations, R × C on the trail's grid. */
  readonly residual: Float64Array;
  /** The binary; null when it is not known. */
  readonly binary: Pick<Binary, "mass_ratio" | "k_accretor_kms" | "k_donor_kms"> | null;
  /** Features found in the map, the strongest first. @default {[]} */
  readonly features?: readonly MapFeature[];
  /** Systemic velocity, km/s. */
  readonly systemic_kms: number;
  /** How the map was made, as in "back-projection". */
  readonly method: string;
  /** χ² per degree of freedom of the map; null when not computed. @default {null} */
  readonly reduced_chi_square?: number | null;
}

/** Choices in drawing a standard plate. */
export interface PlateOptions {
  /** Width in the journal: one column is 84 mm, two are 174 mm. @default {"two-column"} */
  readonly width?: "one-column" | "two-column";
  /** Colours of map and trail. @default {"ink"} */
  readonly colour_map?: ColourMapName;
  /** Colours of the residual. @default {"tide"} */
  readonly residual_colour_map?: ColourMapName;
  /** Stretch of map and trail. @default {"linear"} */
  readonly stretch?: StretchName;
  /** Limits of the map's colours; from the map when absent. */
  readonly map_limits?: readonly [low: number, high: number];
  /** Limits of both trails' colours; from the observed one when absent. */
  readonly trail_limits?: readonly [low: number, high: number];
  /** Limit of the residual's colours on either side, σ. @default {5} */
  readonly residual_limit_sigma?: number;
  /** Shape of the map's window. @default {"round"} */
  readonly shape?: MapShape;
}

/**
 * Lays out the standard plate: the velocity map in its ring of exposures, and beside it (below it in
 * one column) the trail as observed, the map projected again, and what is left in standard
 * deviations, the three on one velocity and one phase axis. The two trails share one colour bar.
 *
 * @param content What is shown.
 * @param options Width, colours, limits.
 * @returns The picture, to be drawn as SVG, PNG or PDF.
 * @throws {InputError} When a colour map is not known.
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
  const { width = "two-column", shape = "round", colour_map: map = "ink", stretch } = options;
  const { residual_colour_map = "tide", residual_limit_sigma = 5 } = options;
  const { grid, sampling } = content.trail;
  const layout = standardLayout(width);
  const mapScale: ColourScale = {
    map,
    stretch,
    limits: options.map_limits ?? robustLimits(content.map.intensity, { part: 0.9995 }),
  };
  const trailScale: ColourScale = {
    map,
    stretch,
    limits: options.trail_limits ?? robustLimits(grid.flux),
  };
  const residualScale: ColourScale = {
    map: residual_colour_map,
    limits: [-residual_limit_sigma, residual_limit_sigma],
  };
  const common = { systemic_kms: content.systemic_kms, y_labels: false, x_label: false };
  const [observed, projected, residual] = layout.trails;
  const exponent = tidyExponent(mapScale.limits);
  const mapUnit = `(${KMS_LABEL})^{−1}`;
  const items: Item[] = [
    mapPanel(content.map, {
      frame: layout.map,
      scale: mapScale,
      shape,
      sampling,
      marks: content.binary && binaryMarks(content.binary),
      features: content.features,
    }),
    ...heading(layout.map, content),
    ...colourBar(mapScale, {
      box: layout.map_bar,
      divide_by: 10 ** exponent,
      unit: exponent === 0 ? mapUnit : `× 10^{${signed(exponent)}} ${mapUnit}`,
    }),
    trailPanel(grid, {
      ...common,
      frame: observed,
      scale: trailScale,
      y_labels: true,
      name: "observed",
    }),
    trailPanel(grid, {
      ...common,
      frame: projected,
      scale: trailScale,
      values: content.model,
      x_label: true,
      name: "re-projected",
    }),
    trailPanel(grid, {
      ...common,
      frame: residual,
      scale: residualScale,
      values: content.residual,
      name: "residual",
    }),
    panelName(observed, "observed"),
    panelName(projected, "map, projected"),
    panelName(residual, "residual"),
    ...colourBar(trailScale, { box: layout.trail_bar, unit: "*F*/*F*_{c} − 1" }),
    ...colourBar(residualScale, { box: layout.residual_bar, unit: "*σ*" }),
  ];
  return {
    width: layout.width,
    height: layout.height,
    items,
    title: [content.title, content.line.name].filter((text) => text !== "").join(", "),
    description: standardDescription(content, { mapScale, trailScale, residualScale }),
  };
}

/** Width of a plate on the page, pt. */
export const PLATE_WIDTH_PT = {
  "one-column": 84 * POINTS_PER_MM,
  "two-column": 174 * POINTS_PER_MM,
} as const;

function signed(exponent: number): string {
  return exponent < 0 ? `−${-exponent}` : String(exponent);
}

function panelName(frame: Box, text: string): Item {
  const at = { x: frame.x, y: frame.y - 18.5, size_pt: LABEL_PT, fill: INK };
  return { kind: "text", ...at, runs: labelRuns(text) };
}

/** Object, line and how the map was made, in the free upper corners of the round window. */
function heading(frame: Box, content: PlateContent): Item[] {
  const { title, line, method, reduced_chi_square: chi = null } = content;
  const left = { kind: "text", x: frame.x + 5, size_pt: LABEL_PT, fill: INK } as const;
  const right = {
    kind: "text",
    x: frame.x + frame.width,
    size_pt: NOTE_PT,
    fill: QUIET,
    anchor: "end",
  } as const;
  const top = frame.y + 5;
  const notes = [
    labelRuns(method),
    chi === null ? [] : labelRuns(`*χ*^{2}/*N* ${chi.toFixed(2)}`),
    labelRuns(
      `*γ* ${String(Number(content.systemic_kms.toFixed(1))).replace("-", "−")} ${KMS_LABEL}`,
    ),
  ].filter((runs) => runs.length > 0);
  return [
    { ...left, y: top, runs: plainRuns(title) },
    { ...left, y: top + (title === "" ? 0 : 10.5), runs: plainRuns(lineLabel(line.name)) },
    {
      ...left,
      y: top + (title === "" ? 9 : 19),
      size_pt: NOTE_PT,
      fill: QUIET,
      runs: plainRuns(`${line.air_angstrom.toFixed(2)} Å`),
    },
    ...notes.map((runs, i): Item => ({ ...right, y: top + 9 * i, runs })),
  ];
}
