import type {
  PairNoise,
  PhaseCoverage,
  ProfileMeasures,
  Spread,
  TrailNoise,
} from "../../trail/mod.ts";
import type { LineTestsSummary } from "../test_line.ts";
import type { CheckedContent } from "./check_contents.ts";

/** One line as an observer checks it before inverting. */
export interface LineCheck {
  /** Name of the line. */
  readonly line: string;
  /** Rest wavelength in air, Å. */
  readonly rest_air_angstrom: number;
  /** Exposures used. */
  readonly exposures: number;
  /** Time from the first to the last mid-exposure, orbits. */
  readonly span_orbits: number;
  /** Coverage of the orbit. */
  readonly coverage: PhaseCoverage;
  /** Signal to noise of the continuum per resolution element. */
  readonly signal_to_noise: Spread;
  /** Resolution element, km/s. */
  readonly resolution_kms: Spread;
  /** Velocity for which smear and exposures are told, km/s. */
  readonly velocity_kms: number;
  /** How far a feature of that velocity moves during an exposure, km/s. */
  readonly smear_kms: Spread;
  /** Steps of half an orbit in which such a feature moves by one resolution element. */
  readonly directions_needed: number;
  /** How many of them hold the middle of an exposure, all orbits folded. */
  readonly directions_observed: number;
  /** Standard deviation of the phase, cycles; null when the ephemeris has no errors. */
  readonly phase_error: number | null;
  /** How far that moves a feature of that velocity, km/s. */
  readonly phase_error_kms: number | null;
  /** What is measured on the mean profile. */
  readonly measures: ProfileMeasures;
  /** Star with which the line moves. */
  readonly traces: "accretor" | "donor";
  /** Equivalent width of the mean profile, Å, emission positive. */
  readonly equivalent_width_angstrom: number;
  /** Whether the line is in emission or absorption. */
  readonly net: string;
  /** Variation of the continuum: standard deviation over mean. */
  readonly continuum_variation: number;
  /** Part of it that goes with the orbit: semi-amplitude over mean. */
  readonly continuum_orbital_amplitude: number;
  /** Factor applied to the errors. */
  readonly noise_scale: number;
  /** What was measured of the noise. */
  readonly noise: TrailNoise;
  /** Noise within the line from repeats and mirrored pairs. */
  readonly pairs: { readonly repeat: PairNoise | null; readonly mirror: PairNoise | null };
  /** Whether any map can fit; null for lines that are not mapped and data that cannot be. */
  readonly any_map: LineTestsSummary | null;
  /** What else falls into the windows. */
  readonly contents: readonly CheckedContent[];
}
