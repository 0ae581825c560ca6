import { keplerianSpeed } from "../../binary/mod.ts";
import { plotPlace } from "../axes.ts";
import { colourBar, tidyExponent } from "../colour/colour_bar.ts";
import type { ColourScale } from "../colour/colour_scale.ts";
import { robustLimits } from "../colour/limits.ts";
import { type Box, ellipsePath, type Item, linePath, type Picture } from "../display_list.ts";
import { type BinaryMarks, binaryMarks } from "../panels/binary_marks.ts";
import { discRims } from "../panels/map_marks.ts";
import { mapPanel } from "../panels/map_panel.ts";
import { type MapWindow, mapWindow } from "../panels/map_window.ts";
import { plotPanel } from "../panels/plot_panel.ts";
import { KMS_LABEL, trailPanel } from "../panels/trail_panel.ts";
import { drawBinaryMarks } from "../panels/map_overlay.ts";
import type { PlotLayer } from "../plot_layer.ts";
import { labelRuns } from "../runs.ts";
import { ACCENT, INK, LABEL_PT, PAPER, SERIES } from "../style.ts";
import {
  type PageBinary,
  type PageLine,
  type PageMap,
  type PageState,
  seenVelocity,
  speedsOf,
  turned,
} from "./page_state.ts";

/** The line and the map that a state shows. */
export interface Shown {
  readonly line: PageLine;
  readonly map: PageMap;
}

/** Size of the map's drawing, pt. */
export const MAP_SIZE = { width: 292, height: 300 } as const;
/** Size of the trails' drawing, pt. */
export const TRAIL_SIZE = { width: 360, height: 300 } as const;
/** Size of the exposure's drawing, pt. */
export const EXPOSURE_SIZE = { width: 652, height: 190 } as const;

const MAP_FRAME: Box = { x: 40, y: 24, width: 246, height: 246 };

/** Where the map's velocities stand in its drawing. */
export function mapPlace(shown: Shown): MapWindow {
  return mapWindow(shown.map.map, MAP_FRAME);
}

/** Frames of the three trails. */
export const TRAIL_FRAMES: readonly [Box, Box, Box] = [0, 1, 2].map((i) => {
  return { x: 42 + i * 106, y: 34, width: 98, height: 236 };
}) as [Box, Box, Box];

/** Where velocities and phases stand in a trail. */
export function trailPlace(shown: Shown, frame: Box) {
  const { first_kms, step_kms, columns } = shown.line.grid;
  const low = first_kms - step_kms / 2;
  return plotPlace(frame, {
    x: { range: [low, low + columns * step_kms] },
    y: { range: [0, 2] },
  });
}

/** The map with its ring, without the marks that sliders move. */
export function mapPicture(shown: Shown, state: PageState): Picture {
  const { map, features, method } = shown.map;
  const { grid, name } = shown.line;
  const limits = robustLimits(map.intensity, { part: 0.9995 });
  const scale: ColourScale = { limits, stretch: state.stretch };
  const exponent = tidyExponent(limits);
  const power = exponent === 0 ? "" : `× 10^{${String(exponent).replace("-", "−")}} `;
  const sampling = { count: grid.rows, phase: grid.phase, phase_width: grid.phase_width };
  return {
    ...MAP_SIZE,
    title: `Velocity map in ${name} by ${method}`,
    description: `Velocity map in ${name} by ${method}, Vx to the right, Vy upwards, in km/s`,
    items: [
      mapPanel(map, { frame: MAP_FRAME, scale, sampling, features }),
      ...colourBar(scale, {
        box: { x: MAP_FRAME.x, y: 14, width: MAP_FRAME.width, height: 5 },
        divide_by: 10 ** exponent,
        unit: `${power}(${KMS_LABEL})^{−1}`,
      }),
    ],
  };
}

const knownMarks = new WeakMap<PageBinary, BinaryMarks>();

/** The marks of the binary as the sliders have it, turned by the shift of phase zero. */
export function shiftedMarks(binary: PageBinary): BinaryMarks {
  const known = knownMarks.get(binary) ?? findMarks(binary);
  knownMarks.set(binary, known);
  return known;
}

function findMarks(binary: PageBinary): BinaryMarks {
  const marks = binaryMarks(speedsOf(binary));
  const turn = (curve: BinaryMarks["stream"]) =>
    curve.map((place) => turned(place, binary.phase_zero));
  return {
    ...marks,
    accretor: turned(marks.accretor, binary.phase_zero),
    donor: turned(marks.donor, binary.phase_zero),
    donor_lobe: turn(marks.donor_lobe),
    stream: turn(marks.stream),
    kepler_at_stream: turn(marks.kepler_at_stream),
  };
}

/** What lies over the map: the binary's parts, rims, and what is pointed at. */
export function mapOverlay(shown: Shown, state: PageState): Item[] {
  const place = mapPlace(shown);
  const { window } = place;
  const centre = [window.x + window.width / 2, window.y + window.height / 2] as const;
  const items: Item[] = [];
  if (state.binary) {
    const marks = shiftedMarks(state.binary);
    const speeds = speedsOf(state.binary);
    const rim = (radius_over_a: number, name: string) => ({
      speed_kms: keplerianSpeed(radius_over_a, speeds),
      name,
    });
    const rims = [
      rim(state.binary.outer_radius_over_a, "outer rim"),
      rim(state.binary.inner_radius_over_a, "inner rim"),
    ];
    items.push(...discRims(rims, { place, accretor: marks.accretor }));
    items.push(...drawBinaryMarks(marks, place));
  }
  items.push(...mapProbe(place, state, shown.line.systemic_kms));
  return [{ kind: "group", clip: ellipsePath(centre, { rx: window.width / 2 }), items }];
}

function mapProbe(place: MapWindow, state: PageState, made_with_kms: number): Item[] {
  const { probe } = state;
  if (probe === null) return [];
  if (probe.at === "map") {
    const x = place.x(probe.vx_kms);
    const y = place.y(probe.vy_kms);
    const d = linePath([[x - 9, y], [x - 3, y]]) + linePath([[x + 3, y], [x + 9, y]]) +
      linePath([[x, y - 9], [x, y - 3]]) + linePath([[x, y + 3], [x, y + 9]]);
    return cased(d + ellipsePath([x, y], { rx: 3 }));
  }
  // Every place that would be seen at this velocity: −Vx cos 2πφ + Vy sin 2πφ = V − γ.
  const angle = 2 * Math.PI * probe.phase;
  const along = [-Math.cos(angle), Math.sin(angle)] as const;
  const offset = probe.velocity_kms - systemicOf(state, made_with_kms);
  const far = 3 * place.reach_kms;
  const end = (sign: 1 | -1) =>
    [
      place.x(offset * along[0] - sign * far * along[1]),
      place.y(offset * along[1] + sign * far * along[0]),
    ] as const;
  return cased(linePath([end(1), end(-1)]));
}

/** γ of the sliders, or the one given where there are none. */
export function systemicOf(state: PageState, otherwise: number): number {
  return state.binary?.systemic_kms ?? otherwise;
}

function cased(d: string): Item[] {
  return [
    { kind: "path", d, stroke: PAPER, stroke_pt: 2.6, stroke_opacity: 0.85 },
    { kind: "path", d, stroke: ACCENT, stroke_pt: 1.1 },
  ];
}

/** The trail as observed, the map projected again, and what is left. */
export function trailPicture(shown: Shown, state: PageState): Picture {
  const { grid, name } = shown.line;
  const { model, residual } = shown.map;
  const scale: ColourScale = { limits: robustLimits(grid.flux), stretch: state.stretch };
  const left: ColourScale = { map: "tide", limits: [-5, 5] };
  const [a, b, c] = TRAIL_FRAMES;
  const word = (frame: Box, text: string): Item => {
    const at = { x: frame.x, y: 10, size_pt: LABEL_PT, fill: INK };
    return { kind: "text", ...at, runs: labelRuns(text) };
  };
  const bar = (from: Box, to: Box) => ({
    x: from.x,
    y: 25,
    width: to.x + to.width - from.x,
    height: 5,
  });
  return {
    ...TRAIL_SIZE,
    title: `Trail in ${name}`,
    description: `Trail in ${name} over two cycles: observed, the map projected again, residual`,
    items: [
      trailPanel(grid, { frame: a, scale, x_label: false, name: "observed" }),
      trailPanel(grid, { frame: b, scale, values: model, y_labels: false, name: "model" }),
      trailPanel(grid, {
        frame: c,
        scale: left,
        values: residual,
        y_labels: false,
        x_label: false,
        name: "residual",
      }),
      word(a, "observed"),
      word(b, "from the map"),
      word(c, "residual"),
      ...colourBar(scale, { box: bar(a, b), unit: "*F*/*F*_{c} − 1" }),
      ...colourBar(left, { box: bar(c, c), unit: "*σ*" }),
    ],
  };
}

/** What lies over the trails: curves of the stars, of what is pointed at, and the exposure's phase. */
export function trailOverlay(shown: Shown, state: PageState): Item[] {
  const { grid, systemic_kms } = shown.line;
  const gamma = systemicOf(state, systemic_kms);
  const { probe, binary } = state;
  return TRAIL_FRAMES.flatMap((frame, i): Item[] => {
    const place = trailPlace(shown, frame);
    const curve = (at: readonly [number, number]) =>
      linePath(Array.from({ length: 121 }, (_, k) => {
        const phase = k / 60;
        return [place.x(seenVelocity(at, { phase, systemic_kms: gamma })), place.y(phase)] as const;
      }));
    const items: Item[] = [];
    const phase = grid.phase[state.exposure]!;
    for (const cycle of [0, 1]) {
      const y = place.y(phase + cycle);
      const d = linePath([[frame.x, y], [frame.x + 5, y]]) +
        linePath([[frame.x + frame.width - 5, y], [frame.x + frame.width, y]]);
      items.push({ kind: "path", d, stroke: ACCENT, stroke_pt: 1.6 });
    }
    if (binary && i < 2) {
      const marks = shiftedMarks(binary);
      for (const star of [marks.accretor, marks.donor]) {
        const d = curve(star);
        items.push({ kind: "path", d, stroke: PAPER, stroke_pt: 1.6, stroke_opacity: 0.7 });
        items.push({ kind: "path", d, stroke: INK, stroke_pt: 0.6, dash_pt: [3, 2] });
      }
    }
    if (probe?.at === "map") items.push(...cased(curve([probe.vx_kms, probe.vy_kms])));
    if (probe?.at === "trail") {
      const x = place.x(probe.velocity_kms);
      for (const cycle of [0, 1]) {
        items.push(...cased(ellipsePath([x, place.y(probe.phase + cycle)], { rx: 3.2 })));
      }
    }
    const d = linePath([[frame.x, frame.y], [frame.x + frame.width, frame.y]]) +
      `L${frame.x + frame.width},${frame.y + frame.height}L${frame.x},${frame.y + frame.height}Z`;
    return [{ kind: "group", clip: d, items }];
  });
}

/** One exposure: data with errors and the model, and the residual below. */
export function exposurePicture(shown: Shown, state: PageState): Picture {
  const { grid, name } = shown.line;
  const { columns, first_kms, step_kms } = grid;
  const row = (values: Float64Array) =>
    values.subarray(state.exposure * columns, (state.exposure + 1) * columns);
  const x = Float64Array.from({ length: columns }, (_, i) => first_kms + i * step_kms);
  const data = row(grid.flux);
  const error = row(grid.error).map((value) => Number.isFinite(value) ? value : NaN);
  const range = [x[0]! - step_kms / 2, x[columns - 1]! + step_kms / 2] as const;
  const upper = { x: 46, y: 10, width: 598, height: 96 };
  const lower = { x: 46, y: 112, width: 598, height: 46 };
  const marks: PlotLayer[] = state.probe === null
    ? []
    : [{ kind: "rule", x: probeVelocity(shown, state), colour: ACCENT }];
  const phase = grid.phase[state.exposure]!;
  const peak = top(data, error);
  const note = { kind: "note", x: range[0] + 0.015 * (range[1] - range[0]) } as const;
  return {
    ...EXPOSURE_SIZE,
    title: `Exposure at phase ${phase.toFixed(3)}`,
    description: `Profile of ${name} at phase ${phase.toFixed(3)}: data, model and residual`,
    items: [
      plotPanel([
        ...marks,
        {
          kind: "band",
          x,
          low: data.map((v, i) => v - error[i]!),
          high: data.map((v, i) => v + error[i]!),
        },
        { kind: "line", x, y: data, steps: true, width_pt: 0.8 },
        { kind: "line", x, y: row(shown.map.model), colour: SERIES[2], width_pt: 1.3 },
        { ...note, y: 0.92 * peak, text: "data ± 1 *σ*" },
        { ...note, y: 0.74 * peak, text: "model", colour: SERIES[2] },
      ], {
        frame: upper,
        name: "exposure",
        x: { range, format: null, ticks: 9 },
        y: { label: "*F*/*F*_{c} − 1", ticks: 4 },
      }),
      plotPanel([
        ...marks,
        { kind: "rule", y: 0 },
        { kind: "line", x, y: row(shown.map.residual), steps: true, width_pt: 0.8 },
      ], {
        frame: lower,
        name: "exposure-residual",
        x: { range, label: `velocity (${KMS_LABEL})`, ticks: 9 },
        y: { range: [-6, 6], label: "*σ*", ticks: [-5, 0, 5] },
      }),
    ],
  };
}

function top(data: Float64Array, error: Float64Array): number {
  return data.reduce((best, v, i) => {
    const value = v + (Number.isFinite(error[i]!) ? error[i]! : 0);
    return Number.isFinite(value) ? Math.max(best, value) : best;
  }, 0);
}

/** Velocity at which what is pointed at stands in the exposure shown. */
export function probeVelocity(shown: Shown, state: PageState): number {
  const { probe } = state;
  if (probe === null) return NaN;
  if (probe.at === "trail") return probe.velocity_kms;
  const phase = shown.line.grid.phase[state.exposure]!;
  const systemic_kms = systemicOf(state, shown.line.systemic_kms);
  return seenVelocity([probe.vx_kms, probe.vy_kms], { phase, systemic_kms });
}
