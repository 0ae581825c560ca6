import { InputError } from "../../errors.ts";
import { type ColourMapName, colourMapNames } from "../colour/colour_map.ts";
import type { StretchName } from "../colour/stretch.ts";
import { POINTS_PER_MM } from "../display_list.ts";
import type { WindowShape } from "../panels/map_window.ts";
import { checkName } from "./known_name.ts";
import { type PanelName, panelNames } from "./panel_names.ts";

/** Colours, limits and shapes of a plate. */
export interface PlateStyle {
  /** Colours of maps and trails. @default {"ink"} */
  readonly colour_map?: ColourMapName;
  /** Colours of signed panels: residual, asymmetric part. @default {"tide"} */
  readonly signed_colour_map?: ColourMapName;
  /** Stretch of maps and trails. @default {"linear"} */
  readonly stretch?: StretchName;
  /** Limits of maps; from the map when absent. */
  readonly map_limits?: readonly [low: number, high: number];
  /** Limits of trail and model; from the trail when absent. */
  readonly trail_limits?: readonly [low: number, high: number];
  /** Limit of the residual on either side, σ. @default {5} */
  readonly residual_limit_sigma?: number;
  /** Shape of the maps' windows. @default {"round"} */
  readonly shape?: WindowShape;
  /** Scales that all subjects have in common. @default {[]} */
  readonly share?: readonly ("map" | "trail")[];
}

/** One panel of a plate. */
export interface PanelEntry {
  /** What is drawn. */
  readonly panel: PanelName;
  /** Which subject, from 0; the row's when absent. */
  readonly subject?: number;
  /** Name above the panel in place of the usual one. */
  readonly name?: string;
}

/** Panels side by side. */
export interface PlateRow {
  /** The panels from left to right. */
  readonly panels: readonly (PanelName | PanelEntry)[];
  /** Height of their frames, mm; chosen to suit the panels when absent. */
  readonly height_mm?: number;
  /** Which subject, from 0. @default {0} */
  readonly subject?: number;
}

/** A plate, described: the `[plate]` table of a target file comes to this. */
export interface PlateDescription extends PlateStyle {
  /** Width: a journal's column, or mm. @default {"two-column"} */
  readonly width?: "one-column" | "two-column" | number;
  /** Rows of panels from the top down; the standard plate when absent. */
  readonly rows?: readonly PlateRow[];
  /** True to repeat the rows for every subject. @default {false} */
  readonly each_subject?: boolean;
  /** True to letter the panels (a), (b), … @default {false} */
  readonly letters?: boolean;
  /** How many times as large letters and lines are, within the same width: for slides. @default {1} */
  readonly enlarge?: number;
}

/** A row with everything chosen. */
export interface FullRow {
  /** The panels with their subjects, and with the keys under which they were described. */
  readonly panels: readonly (PanelEntry & { readonly subject: number; readonly key: string })[];
  /** Height of the frames, mm; chosen by the layout when absent. */
  readonly height_mm?: number;
}

/** Widths of a journal's columns, mm. */
export const COLUMN_MM = { "one-column": 84, "two-column": 174 } as const;

const standardRows = {
  "one-column": [{ panels: ["map"] }, { panels: ["trail", "model", "residual"] }],
  "two-column": [{ panels: ["map", "trail", "model", "residual"] }],
} as const satisfies Record<string, readonly PlateRow[]>;

/**
 * Width in which a plate is laid out: that of the page, over the enlargement.
 *
 * @param description The plate.
 * @returns Its width, pt.
 * @throws {InputError} When it is not from 40 to 1200 mm, or the enlargement not from 0.5 to 10.
 *
 * @example
 * ```ts
 * import { plateWidth } from "@millrace/millrace/figures";
 * import { assertAlmostEquals } from "@std/assert";
 *
 * assertAlmostEquals(plateWidth({ width: "one-column" }), 84 / 25.4 * 72, 1e-9);
 * ```
 */
export function plateWidth(description: PlateDescription): number {
  const { width = "two-column" } = description;
  const mm = typeof width === "number" ? width : COLUMN_MM[width];
  if (!(mm >= 40 && mm <= 1200)) {
    throw new InputError({
      action: "lay out plate",
      rule: "the width must be one-column, two-column or 40 to 1200 mm",
      value: width,
      unit: typeof width === "number" ? "mm" : undefined,
      key: "plate.width",
    });
  }
  const { enlarge = 1 } = description;
  if (!(enlarge >= 0.5 && enlarge <= 10)) {
    const rule = "the enlargement must be from 0.5 to 10";
    throw new InputError({ action: "lay out plate", rule, value: enlarge, key: "plate.enlarge" });
  }
  return mm * POINTS_PER_MM / enlarge;
}

/**
 * The rows of a plate with everything chosen: the standard ones where none are described, repeated
 * for each subject where asked, every panel with its subject.
 *
 * @param description The plate.
 * @param subjects How many subjects there are.
 * @returns The rows.
 * @throws {InputError} When a panel's name is not known, a row is empty, or a subject is not there.
 *
 * @example
 * ```ts
 * import { plateRows } from "@millrace/millrace/figures";
 * import { assertEquals } from "@std/assert";
 *
 * const rows = plateRows({ rows: [{ panels: ["map", "trail"] }], each_subject: true }, 3);
 * assertEquals(rows.map((row) => row.panels[0]!.subject), [0, 1, 2]);
 * ```
 */
export function plateRows(description: PlateDescription, subjects: number): FullRow[] {
  const narrow = plateWidth(description) < 120 * POINTS_PER_MM;
  const rows: readonly PlateRow[] = description.rows ??
    standardRows[narrow ? "one-column" : "two-column"];
  const times = description.each_subject ? subjects : 1;
  return Array.from({ length: times }, (_, turn) =>
    rows.map((row, i): FullRow => {
      if (row.panels.length === 0) {
        const rule = "every row must have a panel";
        throw new InputError({ action: "lay out plate", rule, key: `plate.rows[${i}]` });
      }
      const subject = description.each_subject ? turn : row.subject ?? 0;
      const panels = row.panels.map((entry, k) => {
        const key = `plate.rows[${i}].panels[${k}]`;
        const full = { subject, ...(typeof entry === "string" ? { panel: entry } : entry), key };
        checkEntry(full, subjects);
        return full;
      });
      return { ...row, panels };
    })).flat();
}

function checkEntry(
  entry: PanelEntry & { readonly subject: number; readonly key: string },
  subjects: number,
): void {
  const { panel, subject, key } = entry;
  checkName(panel, { what: "a panel", known: panelNames, key });
  if (!(subject >= 0 && subject < subjects)) {
    throw new InputError({
      action: "lay out plate",
      rule: `the subject of a panel must be from 0 to ${subjects - 1}`,
      value: subject,
      key,
    });
  }
}

/**
 * Refuses a plate that cannot be drawn whatever the data are: its width, the names of its panels and
 * colours.
 *
 * @param description The plate.
 * @param subjects How many subjects there are.
 * @throws {InputError} With the key that is wrong, and the nearest known name.
 *
 * @example
 * ```ts
 * import { type ColourMapName, checkPlate } from "@millrace/millrace/figures";
 * import { assertThrows } from "@std/assert";
 *
 * const colour_map = "virdis" as ColourMapName;
 * assertThrows(() => checkPlate({ colour_map }, 1), Error, 'the nearest is "viridis"');
 * ```
 */
export function checkPlate(description: PlateDescription, subjects: number): void {
  plateRows(description, subjects);
  for (const key of ["colour_map", "signed_colour_map"] as const) {
    const name = description[key];
    if (name === undefined) continue;
    checkName(name, { what: "a colour map", known: colourMapNames, key: `plate.${key}` });
  }
}
