import {
  drawMap,
  INTENSITY_UNIT,
  intensityScale,
  limitsOf,
  MAP_SHAPE,
  powered,
} from "./map_drawing.ts";
import { type PanelKind, requireField, tellScale } from "./panel_kind.ts";
import type { PanelName } from "./panel_names.ts";
import type { PlateSubject } from "./plate_subject.ts";

/** Panels of what else than the line alone may stand in a map. */
export type RealityPanelName = Extract<PanelName, "sampling" | "blend">;

function samplingOf(subject: PlateSubject) {
  return requireField(subject, {
    field: "sampling_structures",
    panel: "sampling",
    remedy: "a line of either sign has none: state lines.sign",
  });
}

function blendOf(subject: PlateSubject) {
  const remedy = 'give a blend of the line map = "own"';
  return requireField(subject, { field: "blend_map", panel: "blend", remedy });
}

/** The panels of what else than the line alone may stand in a map. */
export const realityKinds: Readonly<Record<RealityPanelName, PanelKind>> = {
  sampling: {
    ...MAP_SHAPE,
    name: () => "of the sampling alone",
    scale_family: "sampling",
    scale: (subjects, style) => {
      const limits = limitsOf(subjects.map(samplingOf), true);
      return powered({ map: style.signed_colour_map ?? "tide", limits }, INTENSITY_UNIT);
    },
    draw: (subject, drawing) =>
      drawMap(samplingOf(subject), subject, { ...drawing, name: "sampling" }),
    tell: (_, scale) =>
      "What the same exposures and inversion make of the round part of the map, beyond that part: " +
      `structures of the sampling alone; ${tellScale(scale)} per km/s.`,
  },
  blend: {
    ...MAP_SHAPE,
    name: (subject) => blendOf(subject).name,
    scale_family: "blend",
    scale: (subjects, style) =>
      intensityScale(subjects.map((subject) => blendOf(subject).map), {
        ...style,
        map_limits: undefined,
      }),
    draw: (subject, drawing) => {
      const { name, rest_air_angstrom, map } = blendOf(subject);
      const line = { ...subject.line, name, air_angstrom: rest_air_angstrom };
      return drawMap(map, { ...subject, line }, { ...drawing, name: "blend", marked: false });
    },
    tell: (subject, scale) => {
      const { name, rest_air_angstrom } = blendOf(subject);
      return `Map of ${name} (rest wavelength ${rest_air_angstrom.toFixed(2)} Å in air), blended ` +
        `with the line and fitted with it; ${tellScale(scale)} per km/s.`;
    },
  },
};
