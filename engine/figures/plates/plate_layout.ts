import { type Box, POINTS_PER_MM } from "../display_list.ts";
import type { PanelKind } from "./panel_kind.ts";

/** A panel to be laid out. */
export interface LaidPanel {
  /** Its kind. */
  readonly kind: PanelKind;
  /** Its vertical axis: neighbours with the same one share it; a panel without one has its own. */
  readonly axis?: string;
  /** True when a name or letter stands above it. */
  readonly named: boolean;
}

/** A row to be laid out. */
export interface LaidRow {
  /** Its panels. */
  readonly panels: readonly LaidPanel[];
  /** Height of the frames, mm; chosen when absent. */
  readonly height_mm?: number;
}

/** A panel's place on the plate. */
export interface PanelBox {
  /** The plotting area, pt. */
  readonly frame: Box;
  /** False when the neighbour at the left shows the same vertical axis. */
  readonly first: boolean;
  /** Index of the first panel, and number of panels, with which it shares its vertical axis. */
  readonly group: { readonly from: number; readonly count: number };
}

/** Where everything of a plate stands. */
export interface PlateLayout {
  /** Height of the plate, pt. */
  readonly height: number;
  /** Boxes, row by row. */
  readonly rows: readonly (readonly PanelBox[])[];
}

const LEFT = 36; // values and label of a vertical axis
const BELOW = 27; // values and label of a horizontal axis
const RIGHT = 8; // half of the last value of a horizontal axis
const GAP = 9; // between panels that share an axis, and between rows
const LEAST_WIDTH_PT = 60;
/** Distance of a colour bar's top above its frame, pt. */
export const BAR_RISE_PT = 8;
/** Height of a colour bar, pt. */
export const BAR_PT = 4;
/** Distance of a panel name's baseline above its frame where there is a colour bar, pt. */
export const NAME_RISE_PT = 18.5;

/**
 * Lays out a plate. Within a row all frames have one height: that of the panels that keep their
 * shape, which take their part of the width by weight, or the greatest that a panel asks for.
 *
 * @param rows The rows.
 * @param width Width of the plate, pt.
 * @returns Boxes of all panels.
 *
 * @example
 * ```ts
 * import { panelKinds, plateLayout } from "@millrace/millrace/figures";
 * import { assertEquals } from "@std/assert";
 *
 * const map = { kind: panelKinds.map, named: false };
 * const { rows } = plateLayout([{ panels: [map] }], 244);
 * assertEquals(rows[0]?.[0]?.frame.width, 200); // 244 pt less 36 at the left and 8 at the right
 * ```
 */
export function plateLayout(rows: readonly LaidRow[], width: number): PlateLayout {
  let top = 0;
  const placed = rows.map((row) => {
    top += above(row);
    const { boxes, height } = layRow(row, { top, width });
    top += height + BELOW + GAP;
    return boxes;
  });
  return { height: top - GAP, rows: placed };
}

function above(row: LaidRow): number {
  return Math.max(...row.panels.map(({ kind, named }) => kind.scale ? 30 : named ? 16 : 8));
}

function layRow(row: LaidRow, options: { top: number; width: number }) {
  const { top, width } = options;
  const { panels } = row;
  const first = panels.map((panel, i) => !sharesAxis(panels[i - 1], panel));
  const margins = first.map((isFirst, i) => !isFirst ? GAP : LEFT + (i === 0 ? 0 : GAP));
  const free = width - RIGHT - margins.reduce((sum, margin) => sum + margin, 0);
  const weights = panels.reduce((sum, { kind }) => sum + kind.weight, 0);
  const shaped = panels.filter(({ kind }) => kind.aspect !== undefined);
  const aspects = shaped.reduce((sum, { kind }) => sum + kind.aspect!, 0);
  let height = row.height_mm === undefined ? undefined : row.height_mm * POINTS_PER_MM;
  if (shaped.length > 0) {
    const own = shaped.reduce((sum, { kind }) => sum + kind.weight, 0);
    const share = free * own / weights / aspects;
    const side = shaped.length === panels.length
      ? Math.min(free / aspects, tallest(panels))
      : Math.min(share, 200);
    // What keeps no shape keeps a width that can be read.
    const others = panels.length - shaped.length;
    const most = (free - others * LEAST_WIDTH_PT) / aspects;
    height = Math.max(LEAST_WIDTH_PT, Math.min(height ?? side, side, most));
  }
  height ??= Math.max(...panels.map(({ kind }) => kind.height_pt));
  const rest = free - aspects * height;
  const restWeights = panels.reduce(
    (sum, { kind }) => sum + (kind.aspect === undefined ? kind.weight : 0),
    0,
  );
  let x = 0;
  const boxes = panels.map(({ kind }, i): PanelBox => {
    x += margins[i]!;
    const wide = kind.aspect === undefined
      ? rest * kind.weight / restWeights
      : height! * kind.aspect;
    const frame = { x, y: top, width: wide, height: height! };
    x += wide;
    const from = first.lastIndexOf(true, i);
    const next = first.indexOf(true, i + 1);
    const count = (next < 0 ? panels.length : next) - from;
    return { frame, first: first[i]!, group: { from, count } };
  });
  return { boxes, height };
}

/** Squares may fill the page; a wide panel alone would be larger than it is worth. */
function tallest(panels: readonly LaidPanel[]): number {
  const square = panels.some(({ kind }) => kind.aspect === 1);
  return square ? Infinity : Math.max(...panels.map(({ kind }) => kind.height_pt));
}

function sharesAxis(left: LaidPanel | undefined, panel: LaidPanel): boolean {
  return left?.axis !== undefined && left.axis === panel.axis;
}
