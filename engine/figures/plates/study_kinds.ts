import { insideOutMap, type VelocityMap } from "../../tomography/mod.ts";
import { binaryMarks } from "../panels/binary_marks.ts";
import { insideOutMarks, insideOutPlace } from "../panels/inside_out.ts";
import { mapPanel } from "../panels/map_panel.ts";
import { mapHeading } from "./map_heading.ts";
import {
  drawMap,
  INTENSITY_UNIT,
  intensityScale,
  limitsOf,
  MAP_SHAPE,
  powered,
} from "./map_drawing.ts";
import { captionNumber, type PanelKind, requireField, tellScale } from "./panel_kind.ts";
import type { PanelName } from "./panel_names.ts";
import type { PlateSubject } from "./plate_subject.ts";

/** Panels of what was asked of a map beside the map itself. */
export type StudyPanelName = Extract<
  PanelName,
  "closer-fit" | "looser-fit" | "sensitivity" | "cosine" | "sine" | "inside-out"
>;

function mapOf(subject: PlateSubject, panel: StudyPanelName): VelocityMap {
  return requireField(subject, { field: "map", panel, remedy: "millrace map makes it" });
}

function sensitivityOf(subject: PlateSubject, panel: StudyPanelName) {
  const remedy = 'set map.method to "entropy" or "total-variation"';
  return requireField(subject, { field: "sensitivity", panel, remedy });
}

function modulationOf(subject: PlateSubject, panel: StudyPanelName) {
  const remedy = "the line must be one alone, and of one sign";
  return requireField(subject, { field: "modulation", panel, remedy });
}

/** A map at another χ², on the scale of the map itself. */
function fitKind(panel: "closer-fit" | "looser-fit"): PanelKind {
  const which = panel === "closer-fit" ? "closer" : "looser";
  return {
    ...MAP_SHAPE,
    name: () => panel.replace("-", " "),
    scale_family: "map",
    scale: (subjects, style) =>
      intensityScale(subjects.map((subject) => mapOf(subject, panel)), style),
    draw: (subject, drawing) =>
      drawMap(sensitivityOf(subject, panel)[which].map, subject, {
        ...drawing,
        name: panel,
        marked: false,
      }),
    tell: (subject, scale) => {
      const { reduced_chi_square, reached } = sensitivityOf(subject, panel)[which];
      return `Map that fits ${which === "closer" ? "more" : "less"} closely, χ²/N = ` +
        `${reduced_chi_square.toFixed(3)}${reached ? "" : ", as near to its goal as it came"}; ` +
        `${tellScale(scale)} per km/s.`;
    },
  };
}

/** The part of the emission that varies with the cosine or the sine of the orbital phase. */
function modulatedKind(panel: "cosine" | "sine"): PanelKind {
  return {
    ...MAP_SHAPE,
    name: () => `${panel} part`,
    scale_family: "modulation",
    scale: (subjects, style) => {
      const maps = subjects.map((subject) => modulationOf(subject, panel));
      const limits = limitsOf(maps.flatMap(({ cosine, sine }) => [cosine, sine]), true);
      return powered({ map: style.signed_colour_map ?? "tide", limits }, INTENSITY_UNIT);
    },
    draw: (subject, drawing) =>
      drawMap(modulationOf(subject, panel)[panel], subject, { ...drawing, name: panel }),
    tell: (_, scale) =>
      `Part of the emission that varies with the ${panel} of the orbital phase; ` +
      `${tellScale(scale)} per km/s.`,
  };
}

/** Panels of what was asked of a map beside the map itself. */
export const studyKinds: Readonly<Record<StudyPanelName, PanelKind>> = {
  "closer-fit": fitKind("closer-fit"),
  "looser-fit": fitKind("looser-fit"),
  sensitivity: {
    ...MAP_SHAPE,
    name: () => "sensitivity",
    scale_family: "sensitivity",
    scale: (subjects, style) => {
      const maps = subjects.map((one) => sensitivityOf(one, "sensitivity").half_difference);
      const map = style.signed_colour_map ?? "tide";
      return powered({ map, limits: limitsOf(maps, true) }, INTENSITY_UNIT);
    },
    draw: (subject, drawing) =>
      drawMap(sensitivityOf(subject, "sensitivity").half_difference, subject, {
        ...drawing,
        name: "sensitivity",
      }),
    tell: (subject, scale) => {
      const { closer, looser } = sensitivityOf(subject, "sensitivity");
      return "Half of the difference between the map that fits more closely " +
        `(χ²/N = ${closer.reduced_chi_square.toFixed(3)}) and the one that fits less closely ` +
        `(χ²/N = ${looser.reduced_chi_square.toFixed(3)}); ${tellScale(scale)} per km/s.`;
    },
  },
  cosine: modulatedKind("cosine"),
  sine: modulatedKind("sine"),
  "inside-out": {
    ...MAP_SHAPE,
    axis: undefined, // its axes count speeds from the rim
    name: () => "inside out",
    scale_family: "inside-out",
    scale: (subjects, { map_limits: _, ...style }) =>
      intensityScale(subjects.map((one) => insideOutMap(mapOf(one, "inside-out"))), style),
    draw(subject, { frame, scale, style }) {
      const map = mapOf(subject, "inside-out");
      const { binary, features = [], trail } = subject;
      const { half_width_kms } = map;
      const panel = mapPanel(insideOutMap(map), {
        frame,
        scale: scale!,
        name: "inside-out",
        inside_out: true,
        named: false, // donor and accretor lie at the rim
        ...(style.shape ? { shape: style.shape } : {}),
        ...(trail ? { sampling: trail.sampling } : {}),
        marks: binary && insideOutMarks(binaryMarks(binary), half_width_kms),
        // Errors would be stretched: a feature is marked where it lies.
        features: features.map(({ vx_kms, vy_kms }) => {
          const [x, y] = insideOutPlace([vx_kms, vy_kms], half_width_kms);
          return { vx_kms: x, vy_kms: y };
        }),
      });
      return { ...panel, items: [...panel.items, ...mapHeading(subject, frame)] };
    },
    tell: (subject, scale) => {
      const { half_width_kms } = mapOf(subject, "inside-out");
      return `The map with speeds v turned inside out, ${captionNumber(half_width_kms)} km/s − v ` +
        `at the same angle, fluxes of regions kept; ${tellScale(scale)} per km/s.`;
    },
  },
};
