import { robustLimits } from "../colour/limits.ts";
import type { Group } from "../display_list.ts";
import { stackedProfilesPanel } from "../panels/stacked_profiles_panel.ts";
import { trailPanel } from "../panels/trail_panel.ts";
import {
  captionNumber,
  type PanelDrawing,
  type PanelKind,
  type PanelScale,
  requireField,
  tellScale,
} from "./panel_kind.ts";
import type { PanelName } from "./panel_names.ts";
import type { PlateStyle } from "./plate_description.ts";
import type { PlateSubject } from "./plate_subject.ts";

/** Panels of velocity against phase. */
export type TrailPanelName = Extract<
  PanelName,
  "trail" | "model" | "residual" | "stacked-profiles"
>;

function need<K extends "trail" | "model" | "residual">(
  subject: PlateSubject,
  field: K,
  panel: TrailPanelName,
) {
  const remedy = `millrace ${field === "trail" ? "trail" : "map"} makes it`;
  return requireField(subject, { field, panel, remedy });
}

function fluxScale(subjects: readonly PlateSubject[], style: PlateStyle): PanelScale {
  const { colour_map: map = "ink", stretch, trail_limits } = style;
  const ends = subjects.map((subject) => robustLimits(need(subject, "trail", "trail").grid.flux));
  const low = Math.min(...ends.map((end) => end[0]));
  const high = Math.max(...ends.map((end) => end[1]));
  const unit = "*F*/*F*_{c} − 1";
  return { map, stretch, limits: trail_limits ?? [low, high], unit, divide_by: 1 };
}

function drawTrail(
  subject: PlateSubject,
  drawing: PanelDrawing,
  options: { readonly name: TrailPanelName; readonly values?: Float64Array },
): Group {
  return trailPanel(need(subject, "trail", options.name).grid, {
    frame: drawing.frame,
    scale: drawing.scale!,
    y_labels: drawing.first,
    x_label: drawing.names_axis,
    x_room_pt: drawing.axis_room_pt,
    x_label_x: drawing.axis_name_x,
    systemic_kms: subject.systemic_kms,
    ...options,
  });
}

/** Trails side by side share their axes where they show the same velocities. */
function phaseAxis({ trail }: PlateSubject): string {
  if (trail === undefined) return "phase";
  const { first_kms, step_kms, columns } = trail.grid;
  return `phase ${first_kms} ${step_kms * columns}`;
}

const shape = { weight: 1, height_pt: 150, axis: phaseAxis } as const;

function ofParts({ model_name }: PlateSubject): string {
  return model_name === undefined ? "" : ` of ${model_name}`;
}

/** The panels of velocity against phase. */
export const trailKinds: Readonly<Record<TrailPanelName, PanelKind>> = {
  trail: {
    ...shape,
    name: () => "observed",
    scale_family: "trail",
    scale: fluxScale,
    draw: (subject, drawing) => drawTrail(subject, drawing, { name: "trail" }),
    tell: (subject, scale) =>
      `Trail as observed over two cycles, phases without an exposure blank; ${
        tellScale(scale)
      } of ` +
      `the continuum; the wedge marks the systemic velocity, ${
        captionNumber(subject.systemic_kms)
      } km/s.`,
  },
  model: {
    ...shape,
    name: ({ model_name }) => model_name ?? "from the map",
    scale_family: "trail",
    scale: fluxScale,
    draw: (subject, drawing) =>
      drawTrail(subject, drawing, { name: "model", values: need(subject, "model", "model") }),
    tell: ({ model_name }) =>
      model_name === undefined
        ? "The map projected again, colours as for the trail."
        : `Model of ${model_name}, colours as for the trail.`,
  },
  residual: {
    ...shape,
    name: ({ model_name }) => model_name === undefined ? "residual" : `less ${model_name}`,
    scale_family: "residual",
    scale_is_common: true,
    scale: (_, style) => {
      const { signed_colour_map: map = "tide", residual_limit_sigma: limit = 5 } = style;
      return { map, limits: [-limit, limit], unit: "*σ*", divide_by: 1 };
    },
    draw: (subject, drawing) =>
      drawTrail(subject, drawing, {
        name: "residual",
        values: need(subject, "residual", "residual"),
      }),
    tell: ({ model_name = "model" }, scale) =>
      `Data less ${model_name} in standard deviations; ${tellScale(scale)}.`,
  },
  "stacked-profiles": {
    weight: 1.4,
    height_pt: 180,
    name: () => "",
    draw: (subject, { frame }) =>
      stackedProfilesPanel(need(subject, "trail", "stacked-profiles").grid, {
        frame,
        ...(subject.model ? { model: subject.model } : {}),
      }),
    tell: (subject) =>
      "Profiles averaged in 12 bins of phase, each standing on the level of its phase" +
      (subject.model ? `; grey underneath, the model${ofParts(subject)}.` : "."),
  },
};
