import type { VelocityMap } from "../../tomography/mod.ts";
import type { Item } from "../display_list.ts";
import { measuredText } from "../measured_text.ts";
import { mapContours } from "../panels/map_contours.ts";
import { asymmetricMap, significanceMap } from "../panels/map_family.ts";
import { resolutionEllipses } from "../panels/map_marks.ts";
import { mapWindow } from "../panels/map_window.ts";
import { KMS_LABEL } from "../panels/trail_panel.ts";
import {
  centreOf,
  drawMap,
  INTENSITY_UNIT,
  intensityScale,
  limitsOf,
  MAP_SHAPE,
  powered,
} from "./map_drawing.ts";
import {
  captionNumber,
  type PanelDrawing,
  type PanelKind,
  requireField,
  tellScale,
} from "./panel_kind.ts";
import type { PanelName } from "./panel_names.ts";
import type { PlateSubject } from "./plate_subject.ts";

/** Panels in velocity space. */
export type MapPanelName = Extract<
  PanelName,
  | "map"
  | "asymmetric"
  | "half-one"
  | "half-two"
  | "spread"
  | "significance"
  | "resolution"
  | "detection-limit"
>;

const remedies: Partial<Record<keyof PlateSubject, string>> = {
  spread: "set map.resamples to 2 or more",
  detection_limit: "let [binary] fix K1 and K2, and the zero of phase mark the donor",
};

function need<K extends keyof PlateSubject>(subject: PlateSubject, field: K, panel: MapPanelName) {
  return requireField(subject, {
    field,
    panel,
    remedy: remedies[field] ?? "millrace map makes it",
  });
}

function contourItems(map: VelocityMap, subject: PlateSubject, drawing: PanelDrawing): Item[] {
  const { contour_parts = [] } = subject;
  if (contour_parts.length === 0) return [];
  const peak = map.intensity.reduce((top, value) => Math.max(top, value), 0);
  const levels = contour_parts.map((part) => part * peak);
  return mapContours(map, { levels, place: mapWindow(map, drawing.frame) });
}

function tellMap(subject: PlateSubject): string {
  const { title, line, method, systemic_kms, reduced_chi_square: chi = null, map } = subject;
  const { phase_gap } = subject;
  const size = map
    ? `, ${map.pixels} × ${map.pixels} pixels out to ${captionNumber(map.half_width_kms)} km/s`
    : "";
  return `${title === "" ? "" : `${title}, `}${line.name} (rest wavelength ` +
    `${line.air_angstrom.toFixed(2)} Å in air, V/c = λ/λ0 − 1) by ${method}${size}, systemic ` +
    `velocity ${captionNumber(systemic_kms)} km/s${
      chi === null ? "" : `, χ²/N = ${chi.toFixed(2)}`
    }${
      phase_gap === undefined
        ? ""
        : `, in spite of a gap of ${captionNumber(phase_gap)} cycles in phase modulo half an orbit`
    }`;
}

function tellMarks(subject: PlateSubject): string {
  const { binary, binary_range, features = [], contour_parts = [], rims = [], trail } = subject;
  const told: string[] = [];
  if (trail) {
    told.push(
      `The ${trail.sampling.count} ticks around it stand at the angles along which the exposures ` +
        "project it, phase 0 (donor nearest the observer) at the left, 0.25 at the top.",
    );
  }
  if (binary) {
    told.push(
      "Marked: centre of mass (×), accretor (+), the donor's lobe, the ballistic stream (solid) and " +
        "the Keplerian velocity under it (dashed) with a tick every 0.1 of the separation, for q = " +
        `${captionNumber(binary.mass_ratio)}, K1 = ${captionNumber(binary.k_accretor_kms)} km/s, ` +
        `K2 = ${captionNumber(binary.k_donor_kms)} km/s.`,
    );
  }
  if (binary_range) {
    const [low, high] = binary_range.map((end) => captionNumber(end.mass_ratio));
    told.push(`Band: streams from q = ${low} to ${high}.`);
  }
  features.forEach(({ vx_kms, vy_kms, vx_error_kms = null, vy_error_kms = null }, i) => {
    told.push(
      `Feature ${i + 1}: Vx = ${measuredText(vx_kms, vx_error_kms)} km/s, ` +
        `Vy = ${measuredText(vy_kms, vy_error_kms)} km/s.`,
    );
  });
  if (contour_parts.length > 0) {
    told.push(`Contours at ${contour_parts.map(captionNumber).join(", ")} of the peak.`);
  }
  for (const { speed_kms } of rims) {
    told.push(`Dotted circle: Keplerian speed ${captionNumber(speed_kms)} km/s.`);
  }
  return told.join(" ");
}

/** Which of the two halves a panel shows. */
function halfKind(panel: "half-one" | "half-two"): PanelKind {
  const i = panel === "half-one" ? 0 : 1;
  return {
    ...MAP_SHAPE,
    name: (subject) => need(subject, "halves", panel).names[i],
    scale_family: "halves",
    scale: (subjects, style) =>
      intensityScale(subjects.flatMap((subject) => need(subject, "halves", panel).maps), style),
    draw: (subject, drawing) =>
      drawMap(need(subject, "halves", panel).maps[i], subject, {
        ...drawing,
        name: panel,
        marked: false,
      }),
    tell: (subject, scale) => {
      const { names } = need(subject, "halves", panel);
      return `Map of ${names[i]} alone; ${tellScale(scale)} per km/s in both halves.`;
    },
  };
}

function significance(subject: PlateSubject): VelocityMap {
  if (subject.significance) return subject.significance;
  const spread = need(subject, "spread", "significance");
  return significanceMap(need(subject, "map", "significance"), spread);
}

/** The panels in velocity space. */
export const mapKinds: Readonly<Record<MapPanelName, PanelKind>> = {
  map: {
    ...MAP_SHAPE,
    name: () => "",
    scale_family: "map",
    scale: (subjects, style) =>
      intensityScale(subjects.map((subject) => need(subject, "map", "map")), style),
    draw(subject, drawing) {
      const map = need(subject, "map", "map");
      const overlay = contourItems(map, subject, drawing);
      return drawMap(map, subject, { ...drawing, name: "map", overlay });
    },
    tell: (subject, scale) =>
      `Velocity map of ${tellMap(subject)}; ${tellScale(scale)} per km/s. ${tellMarks(subject)}`,
  },
  asymmetric: {
    ...MAP_SHAPE,
    name: () => "asymmetric part",
    scale_family: "asymmetric",
    scale: (subjects, style) => {
      const maps = subjects.map((subject) => {
        return asymmetricMap(need(subject, "map", "asymmetric"), { centre: centreOf(subject) });
      });
      const { signed_colour_map: map = "tide" } = style;
      return powered({ map, limits: limitsOf(maps, true) }, INTENSITY_UNIT);
    },
    draw: (subject, drawing) => {
      const map = need(subject, "map", "asymmetric");
      const rest = asymmetricMap(map, { centre: centreOf(subject) });
      return drawMap(rest, subject, { ...drawing, name: "asymmetric" });
    },
    tell: (subject, scale) =>
      "The map less the medians of its rings about (0, " +
      `${captionNumber(centreOf(subject).vy_kms)}) km/s; ${tellScale(scale)} per km/s.`,
  },
  "half-one": halfKind("half-one"),
  "half-two": halfKind("half-two"),
  spread: {
    ...MAP_SHAPE,
    name: () => "spread",
    scale_family: "spread",
    scale: (subjects, style) => {
      const maps = subjects.map((subject) => need(subject, "spread", "spread"));
      return intensityScale(maps, { ...style, map_limits: undefined });
    },
    draw: (subject, drawing) =>
      drawMap(need(subject, "spread", "spread"), subject, {
        ...drawing,
        name: "spread",
        marked: false,
      }),
    tell: (_, scale) =>
      `One standard deviation of each pixel among maps of resampled data; ${
        tellScale(scale)
      } per km/s.`,
  },
  significance: {
    ...MAP_SHAPE,
    name: () => "significance",
    scale_family: "significance",
    scale: (subjects, style) => ({
      map: style.signed_colour_map ?? "tide",
      limits: limitsOf(subjects.map(significance), true),
      unit: "*σ*",
      divide_by: 1,
    }),
    draw: (subject, drawing) =>
      drawMap(significance(subject), subject, { ...drawing, name: "significance" }),
    tell: (_, scale) => `Significance of each pixel; ${tellScale(scale)} standard deviations.`,
  },
  resolution: {
    ...MAP_SHAPE,
    name: () => "local resolution",
    scale_family: "map",
    scale: (subjects, style) =>
      intensityScale(subjects.map((subject) => need(subject, "map", "resolution")), style),
    draw(subject, drawing) {
      const map = need(subject, "map", "resolution");
      const ellipses = need(subject, "resolution", "resolution");
      const overlay = resolutionEllipses(ellipses, mapWindow(map, drawing.frame));
      return drawMap(map, subject, { ...drawing, name: "resolution", marked: false, overlay });
    },
    tell: (subject) =>
      "Ellipses: full width at half maximum of a point, seen at these phases and back-projected, at " +
      `${need(subject, "resolution", "resolution").length} places, ` +
      `${
        need(subject, "resolution", "resolution")
          .map((e) => `${captionNumber(e.major_kms)} × ${captionNumber(e.minor_kms)}`).join(", ")
      } km/s.`,
  },
  "detection-limit": {
    ...MAP_SHAPE,
    name: () => "detection limit",
    scale_family: "detection-limit",
    scale: (subjects, style) => {
      const maps = subjects.map((subject) => need(subject, "detection_limit", "detection-limit"));
      const { colour_map: map = "ink" } = style;
      return powered({ map, limits: limitsOf(maps) }, KMS_LABEL);
    },
    draw: (subject, drawing) =>
      drawMap(need(subject, "detection_limit", "detection-limit"), subject, {
        ...drawing,
        name: "detection-limit",
        marked: false,
      }),
    tell: (subject, scale) => {
      const limit = need(subject, "detection_limit", "detection-limit");
      return `Least flux of a compact source, ${
        captionNumber(limit.sigma_kms)
      } km/s wide (σ), that ` +
        `would have been found at each place in ${
          captionNumber(100 * limit.found_part)
        } % of all ` +
        `cases (false alarms ${
          captionNumber(100 * limit.false_alarm)
        } %, ${limit.trials} trials); ` +
        `${tellScale(scale)} km/s of the continuum.`;
    },
  },
};
