import type { Model, PartName } from "./model.ts";

/** Sections of a model: its parts, and the eclipse. */
export type ModelSection = PartName | "eclipse";

/** One number of a model. */
export interface ModelParameter {
  /** Section it stands in. */
  readonly section: ModelSection;
  /** Key in the section. */
  readonly key: string;
  /** Symbol in print. */
  readonly symbol: string;
  /** Unit; empty when dimensionless. */
  readonly unit: string;
  /** Smallest value allowed. */
  readonly low: number;
  /** Largest value allowed. */
  readonly high: number;
  /** Value when not given; null: follows from something else. */
  readonly default: number | null;
  /** Whether the profile is proportional to it. */
  readonly linear: boolean;
}

type Row = readonly [
  key: string,
  symbol: string,
  unit: string,
  low: number,
  high: number,
  value: number | null,
];

const WIDEST = 1e6;

const TABLE: Readonly<Record<ModelSection, readonly Row[]>> = {
  disc: [
    ["equivalent_width_kms", "W", "km/s", -WIDEST, WIDEST, 3000],
    ["inner_radius_over_a", "r_in", "a", 1e-5, 1, 0.05],
    ["outer_radius_over_a", "r_out", "a", 1e-5, 1, 0.3],
    ["emissivity_index", "β", "", -5, 6, 1.5],
    ["shear_coefficient", "k", "", 0, 10, 2],
    ["turbulence_kms", "σ_t", "km/s", 0, 3000, 0],
    ["turbulence_index", "p", "", -2, 2, 0],
    ["keplerian_factor", "f", "", 0.3, 1.2, 1],
    ["eccentricity", "e", "", 0, 0.6, 0],
    ["periastron_deg", "ϖ", "deg", -360, 360, 0],
    ["one_armed_amplitude", "A_1", "", 0, 1, 0],
    ["one_armed_deg", "θ_1", "deg", -360, 360, 0],
    ["two_armed_amplitude", "A_2", "", 0, 1, 0],
    ["two_armed_deg", "θ_2", "deg", -360, 360, 0],
    ["two_armed_pitch_deg", "ζ", "deg", 3, 90, 90],
    ["core_equivalent_width_kms", "W_c", "km/s", 0, WIDEST, 0],
    ["core_radius_over_a", "r_c", "a", 1e-5, 1, 0.1],
  ],
  spot: [
    ["equivalent_width_kms", "W", "km/s", -WIDEST, WIDEST, 300],
    ["radius_over_a", "r_s", "a", 1e-5, 1, null],
    ["mixing", "m", "", 0, 1, 0],
    ["sigma_kms", "σ_s", "km/s", 0, 3000, 50],
    ["tail_deg", "τ", "deg", 0, 180, 0],
    ["beaming", "A", "", 0, 1, 0],
    ["beaming_phase", "φ_0", "cycles", -1, 1, 0.85],
  ],
  stream: [
    ["equivalent_width_kms", "W", "km/s", -WIDEST, WIDEST, 150],
    ["from_radius_over_a", "r_1", "a", 1e-5, 1, null],
    ["brightness_index", "n", "", -10, 10, 0],
    ["overflow", "f_o", "", 0, 10, 0],
    ["overflow_radius_over_a", "r_2", "a", 1e-5, 1, null],
    ["sigma_kms", "σ_s", "km/s", 0, 3000, 40],
  ],
  donor: [
    ["equivalent_width_kms", "W", "km/s", 0, WIDEST, 150],
    ["disc_opening_deg", "α", "deg", 0, 60, 5],
    ["quenching", "Q", "", 0, 1, 0],
    ["limb_darkening", "ε", "", 0, 1, 0.5],
    ["gravity_darkening", "β_g", "", 0, 0.5, 0.08],
    ["sigma_kms", "σ_d", "km/s", 0, 3000, 10],
  ],
  accretor: [
    ["equivalent_width_kms", "W", "km/s", -WIDEST, WIDEST, 100],
    ["sigma_kms", "σ_a", "km/s", 0, 10000, 50],
    ["redshift_kms", "v_g", "km/s", -1000, 1000, 0],
  ],
  outflow: [
    ["equivalent_width_kms", "W", "km/s", -WIDEST, WIDEST, 500],
    ["sigma_kms", "σ_w", "km/s", 1, 30000, 800],
    ["trough_equivalent_width_kms", "W_t", "km/s", 0, WIDEST, 0],
    ["trough_speed_kms", "v_t", "km/s", 0, 30000, 1500],
    ["trough_sigma_kms", "σ_tr", "km/s", 1, 30000, 400],
  ],
  eclipse: [
    ["continuum_accretor", "c_a", "", 0, 1, 0],
    ["continuum_disc", "c_d", "", 0, 1, 0],
    ["continuum_index", "β_c", "", -5, 6, 2],
    ["continuum_spot", "c_s", "", 0, 1, 0],
  ],
};

/**
 * Every number of a model, with symbol, unit, range and default: what a target file is checked
 * against and what a fit may vary.
 *
 * @example
 * ```ts
 * import { modelParameters } from "@millrace/millrace/synthesis";
 * import { assertEquals } from "@std/assert";
 *
 * const mixing = modelParameters.find(({ section, key }) => section === "spot" && key === "mixing");
 * assertEquals([mixing?.low, mixing?.high], [0, 1]);
 * ```
 */
export const modelParameters: readonly ModelParameter[] = Object.entries(TABLE).flatMap(
  ([section, rows]) =>
    rows.map(([key, symbol, unit, low, high, value]) => ({
      section: section as ModelSection,
      key,
      symbol,
      unit,
      low,
      high,
      default: value,
      linear: key === "equivalent_width_kms",
    })),
);

/** The parts in the order in which they are summed. */
export const partNames: readonly PartName[] = [
  "disc",
  "spot",
  "stream",
  "donor",
  "accretor",
  "outflow",
];

/** A model with every number present. */
export type CompleteModel =
  & { readonly parts: readonly PartName[] }
  & { readonly [section in ModelSection]: Required<NonNullable<Model[section]>> };
