import type { Binary } from "../../binary/mod.ts";
import type { SpectralLine } from "../../sky/mod.ts";
import type { VelocityMap } from "../../tomography/mod.ts";
import type { Sampling } from "../../trail/mod.ts";
import type { CoverageRow } from "../panels/coverage_panel.ts";
import type { DiagnosticDiagram } from "../panels/diagnostic_panel.ts";
import type { DiscInSpace } from "../panels/disc_space_panel.ts";
import type { DisplayGrid } from "../panels/folded_grid.ts";
import type { LightCentre } from "../panels/light_centre_panel.ts";
import type { DiscRim, ResolutionEllipse } from "../panels/map_marks.ts";
import type { MarkedFeature } from "../panels/map_overlay.ts";
import type { NullDistribution } from "../panels/null_distribution_panel.ts";
import type { PhaseCurve } from "../panels/phase_curve_panel.ts";
import type { Plane } from "../panels/plane_panel.ts";
import type { Scan } from "../panels/scan_panel.ts";
import type { MeanSpectrum } from "../panels/spectrum_panel.ts";
import type { FittedCurve } from "../panels/velocity_curve_panel.ts";

/** What marks on a map need to know of a binary. */
export type MarkedBinary = Pick<Binary, "mass_ratio" | "k_accretor_kms" | "k_donor_kms">;

/** Least flux of a compact source that would have been found, place by place. */
export interface DetectionMap extends VelocityMap {
  /** Standard deviation of the source's own velocities, km/s. */
  readonly sigma_kms: number;
  /** Part of all cases in which it would have been found, 0 to 1. */
  readonly found_part: number;
  /** Rate at which data without a source would show one somewhere. */
  readonly false_alarm: number;
  /** Number of trials of noise. */
  readonly trials: number;
}

/** A map of another χ². */
export interface NearMap {
  /** The map. */
  readonly map: VelocityMap;
  /** χ² over the number of samples. */
  readonly reduced_chi_square: number;
  /** Whether the χ² that was aimed for could be reached. */
  readonly reached: boolean;
}

/**
 * All that plates may show of one object in one line. Each panel needs a few of the fields and says
 * which one is missing.
 */
export interface PlateSubject {
  /** Name of the object; empty for none. */
  readonly title: string;
  /** The line, with its rest wavelength. */
  readonly line: SpectralLine;
  /** Systemic velocity, km/s. */
  readonly systemic_kms: number;
  /** How the map was made, as in "back-projection". */
  readonly method: string;
  /** χ² per degree of freedom of the map; null when not computed. @default {null} */
  readonly reduced_chi_square?: number | null;
  /** The binary; null when it is not known. */
  readonly binary: MarkedBinary | null;
  /** Binaries a standard deviation to either side: the area between their streams is shaded. */
  readonly binary_range?: readonly [MarkedBinary, MarkedBinary];
  /** The velocity map. */
  readonly map?: VelocityMap;
  /** Largest gap in phase modulo half an orbit, cycles, where the map was made in spite of it. */
  readonly phase_gap?: number;
  /** The trail: its display grid and the sampling of the orbit. */
  readonly trail?: {
    /** Uniform grid for display. */
    readonly grid: DisplayGrid;
    /** Phases and widths of the exposures. */
    readonly sampling: Pick<Sampling, "count" | "phase" | "phase_width">;
  };
  /** The map projected again, or another model, R × C on the trail's grid. */
  readonly model?: Float64Array;
  /** What the model is, as in "disc + spot"; the map projected again when absent. */
  readonly model_name?: string;
  /** Data less model in standard deviations, R × C on the trail's grid. */
  readonly residual?: Float64Array;
  /** Features found in the map, the strongest first. @default {[]} */
  readonly features?: readonly MarkedFeature[];
  /** Rims of the disc to be drawn on the map. @default {[]} */
  readonly rims?: readonly DiscRim[];
  /** Levels of contours on the map, as parts of its peak. @default {[]} */
  readonly contour_parts?: readonly number[];
  /** Maps of two halves of the data, with their names: odd and even exposures, two nights. */
  readonly halves?: {
    /** The maps. */
    readonly maps: readonly [VelocityMap, VelocityMap];
    /** Their names, as in "odd exposures". */
    readonly names: readonly [string, string];
  };
  /** One standard deviation of each pixel of the map. */
  readonly spread?: VelocityMap;
  /** Significance of each pixel, σ; from map and spread when absent. */
  readonly significance?: VelocityMap;
  /** Local resolution of the map. */
  readonly resolution?: readonly ResolutionEllipse[];
  /** Least flux of a compact source that would have been found, in units of the continuum × km/s. */
  readonly detection_limit?: DetectionMap;
  /** Maps at χ² a little lower and higher. */
  readonly sensitivity?: {
    /** Fits the data more closely. */
    readonly closer: NearMap;
    /** Fits the data less closely. */
    readonly looser: NearMap;
    /** Half of closer less looser. */
    readonly half_difference: VelocityMap;
  };
  /** What the sampling alone makes of a round map. */
  readonly sampling_structures?: VelocityMap;
  /** Emission that goes as cosine and sine of the phase. */
  readonly modulation?: {
    /** Goes as cos 2πφ. */
    readonly cosine: VelocityMap;
    /** Goes as sin 2πφ. */
    readonly sine: VelocityMap;
  };
  /** The map of a blend that has its own. */
  readonly blend_map?: {
    /** Name of the blend. */
    readonly name: string;
    /** Its rest wavelength in air, Å. */
    readonly rest_air_angstrom: number;
    /** Its map. */
    readonly map: VelocityMap;
  };
  /** Mean spectrum and the lines to name in it. */
  readonly spectrum?: MeanSpectrum & {
    /** Lines to identify. */
    readonly lines?: readonly SpectralLine[];
  };
  /** Equivalent width against phase, Å. */
  readonly equivalent_width?: readonly PhaseCurve[];
  /** Ratio of the violet to the red peak against phase. */
  readonly violet_red?: readonly PhaseCurve[];
  /** Continuum against phase. */
  readonly continuum?: readonly PhaseCurve[];
  /** Velocity curves with their fits. */
  readonly velocities?: readonly FittedCurve[];
  /** Diagnostic diagram of the wings. */
  readonly diagnostic?: DiagnosticDiagram;
  /** Light-centre diagram of the wings. */
  readonly light_centre?: LightCentre;
  /** Periodogram: cycles per day and power. */
  readonly periodogram?: Scan;
  /** γ scan, with the label of its statistic. */
  readonly systemic_scan?: Scan & {
    /** What was computed (markup of `labelRuns`). */
    readonly label: string;
    /** The same in words for the caption, as in "χ² of the back-projected map". */
    readonly statistic: string;
  };
  /** The same of the period, d. */
  readonly period_scan?: NonNullable<PlateSubject["systemic_scan"]>;
  /** Plane of the two masses. */
  readonly mass_plane?: Plane;
  /** Plane of mass ratio and inclination. */
  readonly inclination_plane?: Plane;
  /** The binary in space; from the binary alone when absent. */
  readonly disc?: DiscInSpace;
  /** Which phases were observed in each night. */
  readonly coverage?: readonly CoverageRow[];
  /** Gains of χ² in trials of a null hypothesis, and in the data. */
  readonly null_distribution?: NullDistribution;
}
