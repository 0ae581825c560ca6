import { ellipsePath, type Item, linePath, type TextItem } from "../display_list.ts";
import type { PlotPlace } from "../axes.ts";
import { labelRuns } from "../runs.ts";
import { ACCENT, CURVE_PT, INK, NOTE_PT, PAPER } from "../style.ts";
import type { BinaryMarks, VelocityCurve } from "./binary_marks.ts";

/** A compact feature to be marked on a map. */
export interface MarkedFeature {
  /** Place, km/s. */
  readonly vx_kms: number;
  /** Place, km/s. */
  readonly vy_kms: number;
  /** One standard deviation, km/s; null when not known. */
  readonly vx_error_kms?: number | null;
  /** One standard deviation, km/s; null when not known. */
  readonly vy_error_kms?: number | null;
  /** Correlation of the two errors, −1 to 1. @default {0} */
  readonly correlation?: number;
}

/** A line to be drawn over an image. */
interface Stroke {
  readonly d: string;
  readonly colour?: string;
  readonly width?: number;
  readonly dash_pt?: readonly number[];
}

/** Lines with paper under all of them, so that they show over light and dark alike. */
function cased(strokes: readonly Stroke[]): Item[] {
  const under = strokes.map(({ d, width = CURVE_PT }): Item => {
    const stroke_pt = width + 1.2;
    return { kind: "path", d, stroke: PAPER, stroke_pt, stroke_opacity: 0.85, cap: "round" };
  });
  const over = strokes.map(({ d, colour = INK, width = CURVE_PT, dash_pt }): Item => {
    return { kind: "path", d, stroke: colour, stroke_pt: width, ...(dash_pt ? { dash_pt } : {}) };
  });
  return [...under, ...over];
}

function label(
  text: string,
  at: { readonly x: number; readonly y: number; readonly anchor?: TextItem["anchor"] },
): TextItem {
  const style = { kind: "text", size_pt: NOTE_PT, fill: INK, halo: PAPER } as const;
  return { ...style, ...at, runs: labelRuns(text) };
}

/**
 * Draws a binary's parts over its map: the centre of mass (×), the accretor (+), the donor's lobe, the stream
 * (solid) and the disc's velocity under the stream (dashed), each named beside it.
 *
 * @param marks Where the parts stand.
 * @param place Where velocities stand on the page.
 * @param options Whether they are named.
 * @returns Items, to be clipped to the map's window.
 *
 * @example
 * ```ts
 * import { binaryFrom } from "@millrace/millrace/binary";
 * import { binaryMarks, drawBinaryMarks, mapWindow } from "@millrace/millrace/figures";
 * import { assert } from "@std/assert";
 *
 * const place = mapWindow({ pixels: 101, half_width_kms: 1000 }, { x: 0, y: 0, width: 200, height: 200 });
 * const marks = binaryMarks(binaryFrom({ k_accretor_kms: 80, k_donor_kms: 320 }));
 * const texts = drawBinaryMarks(marks, place).flatMap((item) => item.kind === "text" ? item.runs : []);
 * assert(texts.some((run) => run.text === "stream"));
 * ```
 */
export function drawBinaryMarks(
  marks: BinaryMarks,
  place: PlotPlace,
  options: {
    /** False to leave out the names. @default {true} */
    readonly named?: boolean;
  } = {},
): Item[] {
  const { named = true } = options;
  const path = (curve: VelocityCurve, closed = false) =>
    linePath(curve.map(([vx, vy]) => [place.x(vx), place.y(vy)] as const), closed);
  let ticks = "";
  for (const { index } of marks.ticks) {
    ticks += tick(marks.stream, index, place);
    ticks += tick(marks.kepler_at_stream, index, place);
  }
  return [
    ...cased([
      { d: path(marks.kepler_at_stream), dash_pt: [3, 1.6] },
      { d: path(marks.stream) },
      { d: path(marks.donor_lobe, true) },
    ]),
    { kind: "path", d: ticks, stroke: INK, stroke_pt: 0.5 },
    ...cased([
      { d: plus(place.x(marks.accretor[0]), place.y(marks.accretor[1]), 3), width: 0.8 },
      {
        d: cross(place.x(marks.centre_of_mass[0]), place.y(marks.centre_of_mass[1]), 1.8),
        width: 0.6,
      },
    ]),
    ...(named ? nameMarks(marks, place) : []),
  ];
}

function nameMarks(marks: BinaryMarks, place: PlotPlace): Item[] {
  const right = marks.donor_lobe.reduce((best, point) => point[0] > best[0] ? point : best);
  const beside = ([vx, vy]: readonly [number, number], dx: number, dy: number) => ({
    x: place.x(vx) + dx,
    y: place.y(vy) + dy,
  });
  return [
    label("donor", beside(right, 3, 0)),
    label("accretor", beside(marks.accretor, 5, 4)),
    label("stream", beside(marks.stream.at(-1)!, 3, 5)),
    label("Kepler", beside(marks.kepler_at_stream.at(-1)!, 3, 5)),
  ];
}

function tick(curve: VelocityCurve, index: number, place: PlotPlace): string {
  const before = curve[Math.max(0, index - 1)]!;
  const after = curve[Math.min(curve.length - 1, index + 1)]!;
  const x = place.x(curve[index]![0]);
  const y = place.y(curve[index]![1]);
  const dx = place.x(after[0]) - place.x(before[0]);
  const dy = place.y(after[1]) - place.y(before[1]);
  const scale = 1.8 / (Math.hypot(dx, dy) || 1);
  return linePath([[x - dy * scale, y + dx * scale], [x + dy * scale, y - dx * scale]]);
}

function plus(x: number, y: number, r: number): string {
  return linePath([[x - r, y], [x + r, y]]) + linePath([[x, y - r], [x, y + r]]);
}

function cross(x: number, y: number, r: number): string {
  return linePath([[x - r, y - r], [x + r, y + r]]) + linePath([[x - r, y + r], [x + r, y - r]]);
}

/**
 * Draws features found in a map, the strongest first: a pointer with the feature's number, which leaves
 * the feature itself to be seen, and the ellipse of one standard deviation where it is large enough to
 * be drawn.
 *
 * @param features The features.
 * @param place Where velocities stand on the page.
 * @returns Items, to be clipped to the map's window.
 *
 * @example
 * ```ts
 * import { drawFeatures, mapWindow } from "@millrace/millrace/figures";
 * import { assertEquals } from "@std/assert";
 *
 * const place = mapWindow({ pixels: 101, half_width_kms: 1000 }, { x: 0, y: 0, width: 200, height: 200 });
 * const items = drawFeatures([{ vx_kms: -300, vy_kms: 400 }], place);
 * assertEquals(items.map((item) => item.kind), ["path", "path", "text"]);
 * ```
 */
export function drawFeatures(features: readonly MarkedFeature[], place: PlotPlace): Item[] {
  const scale = Math.abs(place.x(1) - place.x(0));
  return features.flatMap((feature, i) => {
    const x = place.x(feature.vx_kms);
    const y = place.y(feature.vy_kms);
    const axes = errorAxes(feature);
    const [rx, ry] = [axes.major * scale, axes.minor * scale];
    const ellipse = rx < LEAST_ELLIPSE_PT
      ? ""
      : ellipsePath([x, y], { rx, ry: Math.max(ry, 0.3), rotate_deg: -axes.angle_deg });
    // The pointer stands on the side away from the middle of the map.
    const far = Math.hypot(feature.vx_kms, feature.vy_kms) || 1;
    const [u, v] = far === 1 ? [0.7, -0.7] : [feature.vx_kms / far, -feature.vy_kms / far];
    const near = Math.max(rx, 5) + 1;
    const end = { x: x + (near + 8) * u, y: y + (near + 8) * v };
    const pointer = linePath([[x + near * u, y + near * v], [end.x, end.y]]);
    const name = label(String(i + 1), {
      x: end.x + 3.6 * u,
      y: end.y + 3.6 * v + 0.33 * NOTE_PT,
      anchor: "middle",
    });
    return [...cased([{ d: ellipse + pointer, colour: ACCENT }]), { ...name, fill: ACCENT }];
  });
}

/** Smaller ellipses would hide what they mark, pt. */
const LEAST_ELLIPSE_PT = 3;

/** Axes of the one-sigma ellipse, km/s, and the angle of the larger from +Vx towards +Vy. */
function errorAxes(feature: MarkedFeature): { major: number; minor: number; angle_deg: number } {
  const sx = feature.vx_error_kms ?? 0;
  const sy = feature.vy_error_kms ?? 0;
  const cov = (feature.correlation ?? 0) * sx * sy;
  const mean = (sx * sx + sy * sy) / 2;
  const difference = (sx * sx - sy * sy) / 2;
  const root = Math.hypot(difference, cov);
  return {
    major: Math.sqrt(mean + root),
    minor: Math.sqrt(Math.max(0, mean - root)),
    angle_deg: root === 0 ? 0 : Math.atan2(cov, difference) / 2 * 180 / Math.PI,
  };
}
