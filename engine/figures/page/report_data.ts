import type { MarkedFeature } from "../panels/map_overlay.ts";
import type { PackedArray } from "./packed_array.ts";

/** What the page's script reads: the data that a person can touch. */
export interface ReportData {
  /** Form of this block. */
  readonly schema: "report/1";
  /** Name of the object. */
  readonly title: string;
  /** The lines, each with its trail and its maps. */
  readonly lines: readonly ReportLine[];
  /** The binary at which the sliders start; null when nothing is known of it. */
  readonly binary: ReportBinary | null;
}

/** The binary of a report. */
export interface ReportBinary {
  /** q = M2/M1. */
  readonly mass_ratio: number;
  /** K1, km/s. */
  readonly k_accretor_kms: number;
  /** K2, km/s. */
  readonly k_donor_kms: number;
  /** Radius of the disc's outer rim, a. */
  readonly outer_radius_over_a: number;
  /** Radius of the disc's inner rim, a. */
  readonly inner_radius_over_a: number;
}

/** One line of a report. */
export interface ReportLine {
  /** Name, as in "H beta". */
  readonly name: string;
  /** Rest wavelength in air, Å. */
  readonly air_angstrom: number;
  /** Systemic velocity with which the maps were made, km/s. */
  readonly systemic_kms: number;
  /** Number of rows of the trail, R. */
  readonly rows: number;
  /** Number of velocity bins, C. */
  readonly columns: number;
  /** Centre of the first bin, km/s. */
  readonly first_kms: number;
  /** Bin width, km/s. */
  readonly step_kms: number;
  /** Phase of each row. */
  readonly phase: readonly number[];
  /** Width of each row, cycles. */
  readonly phase_width: readonly number[];
  /** Source of each row, for the reader; empty when rows are bins. */
  readonly sources: readonly string[];
  /** Flux over continuum less one, R × C. */
  readonly flux: PackedArray;
  /** One standard deviation, R × C. */
  readonly error: PackedArray;
  /** Maps by method, the one shown first in front. */
  readonly maps: readonly ReportMap[];
}

/** A map made by one method. */
export interface ReportMap {
  /** Method, as in "maximum entropy". */
  readonly method: string;
  /** Pixels along a side. */
  readonly pixels: number;
  /** Velocity of the outermost pixels' centres, km/s. */
  readonly half_width_kms: number;
  /** χ² per degree of freedom; null when not computed. */
  readonly reduced_chi_square: number | null;
  /** Intensity, pixels², rows of increasing Vy. */
  readonly intensity: PackedArray;
  /** The map projected again, R × C. */
  readonly model: PackedArray;
  /** Data less model, σ, R × C. */
  readonly residual: PackedArray;
  /** Features, the strongest first. */
  readonly features: readonly MarkedFeature[];
}
