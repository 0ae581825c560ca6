import type { Group } from "../display_list.ts";
import { coveragePanel } from "../panels/coverage_panel.ts";
import { diagnosticPanel } from "../panels/diagnostic_panel.ts";
import { discSpacePanel } from "../panels/disc_space_panel.ts";
import { lightCentrePanel } from "../panels/light_centre_panel.ts";
import { azimuthProfilePanel, radialProfilePanel } from "../panels/map_profile_panel.ts";
import { nullDistributionPanel } from "../panels/null_distribution_panel.ts";
import { phaseCurvePanel } from "../panels/phase_curve_panel.ts";
import { inclinationPlanePanel, massPlanePanel, type Plane } from "../panels/plane_panel.ts";
import type { PanelPlace } from "../panels/plot_panel.ts";
import {
  periodogramPanel,
  periodScanPanel,
  type Scan,
  systemicScanPanel,
} from "../panels/scan_panel.ts";
import { spectrumPanel } from "../panels/spectrum_panel.ts";
import { type FittedCurve, velocityCurvePanel } from "../panels/velocity_curve_panel.ts";
import { measuredText } from "../measured_text.ts";
import { captionNumber, type PanelKind, requireField } from "./panel_kind.ts";
import type { PanelName } from "./panel_names.ts";
import type { PlateSubject } from "./plate_subject.ts";
import type { MapPanelName } from "./map_kinds.ts";
import type { RealityPanelName } from "./reality_kinds.ts";
import type { StudyPanelName } from "./study_kinds.ts";
import type { TrailPanelName } from "./trail_kinds.ts";

/** Panels that are line plots. */
export type PlotPanelName = Exclude<
  PanelName,
  MapPanelName | TrailPanelName | StudyPanelName | RealityPanelName
>;

interface PlotKind<K extends keyof PlateSubject> {
  readonly panel: PlotPanelName;
  readonly field: K;
  readonly remedy: string;
  readonly draw: (
    value: NonNullable<PlateSubject[K]>,
    place: PanelPlace,
    subject: PlateSubject,
  ) => Group;
  readonly tell: (value: NonNullable<PlateSubject[K]>, subject: PlateSubject) => string;
  readonly aspect?: number;
  readonly weight?: number;
  readonly height_pt?: number;
}

/** A kind of panel that draws one field of the subject as a line plot. */
function plotKind<K extends keyof PlateSubject>(kind: PlotKind<K>): PanelKind {
  const { aspect, weight = 2, height_pt = 100 } = kind;
  const field = (subject: PlateSubject) => requireField(subject, kind);
  return {
    ...(aspect === undefined ? {} : { aspect }),
    weight,
    height_pt,
    name: () => "",
    draw: (subject, { frame }) => kind.draw(field(subject), { frame, name: kind.panel }, subject),
    tell: (subject) => kind.tell(field(subject), subject),
  };
}

function centreOf(subject: PlateSubject) {
  return { vx_kms: 0, vy_kms: subject.binary ? -subject.binary.k_accretor_kms : 0 };
}

function tellBest(scan: Scan, unit: string): string {
  const { best = null, best_error = null, reference = null, levels = [] } = scan;
  const lines = levels.map((level) => `${level.name} at ${captionNumber(level.y)}`);
  return (best === null ? "" : ` Best value: ${measuredText(best, best_error)} ${unit}.`) +
    (reference === null
      ? ""
      : ` Dotted: the adopted ${adoptedText(reference, best_error)} ${unit}.`) +
    (lines.length === 0 ? "" : ` Dashed: ${lines.join(", ")}.`);
}

/** With the digits that the error of the best value justifies, or as captions write numbers. */
function adoptedText(value: number, error: number | null): string {
  return error === null ? captionNumber(value) : measuredText(value, error).replace(/ ±.*/, "");
}

function tellPlane(plane: Plane): string {
  const { adopted } = plane;
  if (!adopted) return "";
  const value = (v: number, error = 0) => measuredText(v, error);
  return ` Adopted: ${value(adopted.x, adopted.x_error)}, ${value(adopted.y, adopted.y_error)}.`;
}

function tellCurve(curve: FittedCurve): string {
  const { name, k_error_kms, systemic_error_kms, crossing_error } = curve;
  return (name === undefined ? "" : `${name}, `) +
    `K = ${measuredText(curve.k_kms, k_error_kms ?? null)} km/s, ` +
    `γ = ${measuredText(curve.systemic_kms, systemic_error_kms ?? null)} km/s, ` +
    `upward crossing at phase ${measuredText(curve.crossing_phase, crossing_error ?? null)}`;
}

/** The panels that are line plots. */
export const plotKinds: Readonly<Record<PlotPanelName, PanelKind>> = {
  "radial-profile": plotKind({
    panel: "radial-profile",
    field: "map",
    remedy: "millrace map makes it",
    draw: (map, place, subject) => radialProfilePanel(map, { ...place, centre: centreOf(subject) }),
    tell: (_, subject) =>
      `Mean of the map against speed about (0, ${captionNumber(centreOf(subject).vy_kms)}) km/s; ` +
      "band: spread of its pixels.",
  }),
  "azimuth-profile": plotKind({
    panel: "azimuth-profile",
    field: "map",
    remedy: "millrace map makes it",
    draw: (map, place, subject) =>
      azimuthProfilePanel(map, { ...place, centre: centreOf(subject) }),
    tell: (_, subject) =>
      `Mean of the map against azimuth about (0, ${
        captionNumber(centreOf(subject).vy_kms)
      }) km/s, ` +
      "0° towards +Vx, 90° towards +Vy; band: spread of its pixels.",
  }),
  spectrum: plotKind({
    panel: "spectrum",
    field: "spectrum",
    remedy: "millrace profile makes it",
    weight: 3,
    height_pt: 110,
    draw: (spectrum, place) => spectrumPanel(spectrum, { ...place, lines: spectrum.lines ?? [] }),
    tell: () => "Mean spectrum.",
  }),
  "equivalent-width": plotKind({
    panel: "equivalent-width",
    field: "equivalent_width",
    remedy: "millrace profile makes it",
    draw: (curves, place) => phaseCurvePanel(curves, { ...place, label: "equivalent width (Å)" }),
    tell: () => "Equivalent width against phase, one standard deviation.",
  }),
  "violet-red": plotKind({
    panel: "violet-red",
    field: "violet_red",
    remedy: "millrace profile makes it",
    draw: (curves, place) => phaseCurvePanel(curves, { ...place, label: "*V*/*R*" }),
    tell: () => "Ratio of the violet to the red peak against phase, one standard deviation.",
  }),
  continuum: plotKind({
    panel: "continuum",
    field: "continuum",
    remedy: "millrace profile makes it",
    draw: (curves, place) => phaseCurvePanel(curves, { ...place, label: "continuum" }),
    tell: () => "Continuum at the line against phase, one standard deviation.",
  }),
  "velocity-curve": plotKind({
    panel: "velocity-curve",
    field: "velocities",
    remedy: "millrace orbit says why no curve was fitted",
    height_pt: 140,
    draw: (curves, place) => velocityCurvePanel(curves, place),
    tell: (curves) =>
      `Velocities with fitted orbits, and what is left of them: ${
        curves.map(tellCurve).join("; ")
      }.`,
  }),
  diagnostic: plotKind({
    panel: "diagnostic",
    field: "diagnostic",
    remedy: "millrace orbit says why the wings were not measured",
    height_pt: 190,
    draw: diagnosticPanel,
    tell: ({ chosen_kms = null }) =>
      "Orbits of the wings against the separation of two Gaussians; K and γ in km/s." +
      (chosen_kms === null ? "" : ` Chosen: ${captionNumber(chosen_kms)} km/s.`),
  }),
  "light-centre": plotKind({
    panel: "light-centre",
    field: "light_centre",
    remedy: "millrace orbit says why the wings were not measured",
    aspect: 1,
    draw: lightCentrePanel,
    tell: ({ line }) =>
      "Light-centre diagram of the wings" +
      (line
        ? `, extrapolated to −K1 = ${captionNumber(line.intercept_kms)} ± ` +
          `${captionNumber(line.intercept_error_kms)} km/s.`
        : "."),
  }),
  periodogram: plotKind({
    panel: "periodogram",
    field: "periodogram",
    remedy: "millrace orbit says why no velocities were measured",
    draw: periodogramPanel,
    tell: (scan) => `Periodogram.${tellBest(scan, "cycles per day")}`,
  }),
  "systemic-scan": plotKind({
    panel: "systemic-scan",
    field: "systemic_scan",
    remedy: "exposures must cover the orbit, and map.half_width_kms on either side of γ",
    draw: (scan, place) => systemicScanPanel(scan, { ...place, y_label: scan.label }),
    tell: (scan) => `${scan.statistic} against the systemic velocity.${tellBest(scan, "km/s")}`,
  }),
  "period-scan": plotKind({
    panel: "period-scan",
    field: "period_scan",
    remedy: "exposures must span more than one orbit",
    draw: (scan, place) => periodScanPanel(scan, { ...place, y_label: scan.label }),
    tell: (scan) => `${scan.statistic} against the period.${tellBest(scan, "d")}`,
  }),
  "mass-plane": plotKind({
    panel: "mass-plane",
    field: "mass_plane",
    remedy: "K2 must be measured: see millrace orbit",
    aspect: 1,
    draw: massPlanePanel,
    tell: (plane) => `Constraints on the two masses (solar).${tellPlane(plane)}`,
  }),
  "inclination-plane": plotKind({
    panel: "inclination-plane",
    field: "inclination_plane",
    remedy: "K2 must be measured: see millrace orbit",
    aspect: 1,
    draw: inclinationPlanePanel,
    tell: (plane) => `Constraints on mass ratio and inclination (degrees).${tellPlane(plane)}`,
  }),
  "disc-in-space": plotKind({
    panel: "disc-in-space",
    field: "binary",
    remedy: "let [binary] fix K1 and K2, and the zero of phase mark the donor",
    weight: 3,
    aspect: 1.5,
    height_pt: 150,
    draw: (binary, place, subject) => discSpacePanel(subject.disc ?? { binary }, place),
    tell: (binary, subject) =>
      `The binary from above its orbit for q = ${
        captionNumber(binary.mass_ratio)
      }, in units of the ` +
      "separation: both lobes and the ballistic stream" +
      ((subject.disc?.circles ?? []).length === 0
        ? "."
        : `; circles of ${
          subject.disc!.circles!.map((c) => captionNumber(c.radius_over_a)).join(", ")
        }.`),
  }),
  coverage: plotKind({
    panel: "coverage",
    field: "coverage",
    remedy: "millrace trail makes it",
    height_pt: 46,
    draw: coveragePanel,
    tell: (rows) =>
      "Phases observed: " +
      rows.map((row) => `${row.name}, ${row.phase.length} exposures`).join("; ") + ".",
  }),
  "null-distribution": plotKind({
    panel: "null-distribution",
    field: "null_distribution",
    remedy: "millrace weigh draws it on a plate of its own",
    draw: nullDistributionPanel,
    tell: ({ null_name, against_name, gains, observed }) => {
      const trials = Array.from(gains).filter(Number.isFinite);
      const as_much = trials.filter((gain) => gain >= observed).length;
      return `Gain of χ² of ${against_name} over ${null_name}: in ${trials.length} trials of ` +
        `${null_name} (grey), ${as_much} of which gain as much as the data do, ` +
        `${captionNumber(observed)}.`;
    },
  }),
};
