import type { Binary, Ephemeris } from "../binary/mod.ts";
import type { Direction, Site, SpectralLine, SplitDate } from "../sky/mod.ts";
import type { WavelengthMedium } from "../spectra/mod.ts";
import type { Model } from "./model.ts";

/** A planned observation: what is needed beside a model to say what a telescope would record. */
export interface Observation {
  /** Name of the target, for the headers. */
  readonly object: string;
  /** Where the target is. */
  readonly target: Direction;
  /** Where the telescope stands. */
  readonly site: Site;
  /** The binary. */
  readonly binary: Binary;
  /** Its ephemeris, BJD(TDB). */
  readonly ephemeris: Ephemeris;
  /** Systemic velocity γ, km/s. @default {0} */
  readonly systemic_kms?: number;
  /** The exposures, in order of time; see {@linkcode planExposures}. */
  readonly exposures: readonly PlannedExposure[];
  /** The arms of the spectrograph, one or more. */
  readonly arms: readonly Arm[];
  /** The lines; each is recorded by the arms that cover it. */
  readonly lines: readonly ObservedLine[];
  /** How the light varies from exposure to exposure. @default {{}} */
  readonly variability?: Variability;
  /** What the slit, the spectrograph and the detector do. @default {{}} */
  readonly instrument?: InstrumentFaults;
  /** What stands between and beside. @default {{}} */
  readonly sky?: NightSky;
}

/** When one exposure is taken. */
export interface PlannedExposure {
  /** Its start, JD(UTC). */
  readonly start: SplitDate;
  /** Exposure time, s. */
  readonly exposure_s: number;
}

/** A line that is observed. */
export interface ObservedLine {
  /** The line. */
  readonly line: SpectralLine;
  /** Model of this line where it differs; null: the observation's. @default {null} */
  readonly model?: Model | null;
}

/** One arm: a grid of pixels, how sharp it is, how much light it gathers. */
export interface Arm {
  /** Centre of the first pixel, Å. */
  readonly first_angstrom: number;
  /** Width of a pixel, Å. */
  readonly step_angstrom: number;
  /** Number of pixels. */
  readonly pixels: number;
  /** Medium in which wavelengths are stated. @default {"air"} */
  readonly medium?: WavelengthMedium;
  /**
   * Full width at half maximum of the recorded profile, pixel included, Å. At least 1.2 pixels.
   */
  readonly resolution_angstrom: number;
  /**
   * The profile of the optics, pixel not included, where it is no Gaussian; the resolution is then
   * what the headers say. @default {null}
   */
  readonly profile?: TabulatedProfile | null;
  /**
   * Signal to noise of the continuum in the middle of the arm, per resolution element, in an
   * exposure of average light without slit losses. @default {50}
   */
  readonly signal_to_noise?: number;
  /** Exponent s of the continuum ∝ λ^s across the arm. @default {0} */
  readonly continuum_slope?: number;
}

/** An instrumental profile as a table: evenly spaced offsets and the light at each. */
export interface TabulatedProfile {
  /** Offsets in wavelength, evenly spaced and increasing, Å. */
  readonly offset_angstrom: ArrayLike<number>;
  /** Light at each, in any unit, not negative. */
  readonly weight: ArrayLike<number>;
}

/** How the light varies. */
export interface Variability {
  /** Amplitude A of the continuum's orbital modulation 1 + A cos 2π(φ − φ_0). @default {0} */
  readonly modulation?: number;
  /** Phase φ_0 at which the continuum is brightest, cycles. @default {0.85} */
  readonly modulation_phase?: number;
  /** Standard deviation of the continuum's flickering, in its logarithm. @default {0} */
  readonly flickering?: number;
  /** Time over which flickering forgets, s. @default {600} */
  readonly flickering_time_s?: number;
}

/** What slit, spectrograph and detector do to the light. */
export interface InstrumentFaults {
  /** Slit losses: transmission exp(−s|z|), z normal, one per exposure. @default {0} */
  readonly slit_loss?: number;
  /** Standard deviation of the slit losses' slope: change of transmission from the middle of an arm to its end. @default {0} */
  readonly slit_tilt?: number;
  /** Drift of the zero of wavelengths, km/s per hour since the first exposure. @default {0} */
  readonly drift_kms_per_h?: number;
  /** Standard deviation of the zero of wavelengths from exposure to exposure, km/s. @default {0} */
  readonly zero_error_kms?: number;
  /** Noise of reading out, per pixel of the spectrum, electrons. @default {5} */
  readonly read_noise?: number;
  /** Cosmic rays per pixel and hour. @default {0} */
  readonly cosmic_rays?: number;
  /** Mean charge of a cosmic ray, electrons (exponential). @default {3000} */
  readonly cosmic_ray_electrons?: number;
  /**
   * Whether a pipeline has resampled the pixels: linear interpolation from a detector grid that is
   * shifted in each exposure, which correlates the noise of neighbours. @default {false}
   */
  readonly resampled?: boolean;
  /** Whether errors are written. @default {true} */
  readonly errors?: boolean;
}

/** The sky above the telescope. */
export interface NightSky {
  /** Brightness of the sky's continuum over the target's in the middle of the arm. @default {0} */
  readonly brightness?: number;
  /** Emission lines of the sky. @default {[]} */
  readonly lines?: readonly SkyEmission[];
  /** Share of the sky that is left after subtraction. @default {0} */
  readonly residual?: number;
  /** Absorption by the air. @default {[]} */
  readonly telluric?: readonly TelluricFeature[];
}

/** An emission line of the sky, at rest at the observatory. */
export interface SkyEmission {
  /** Wavelength in air, Å. */
  readonly air_angstrom: number;
  /** Equivalent width over the target's continuum, Å. */
  readonly equivalent_width_angstrom: number;
}

/** An absorption feature of the air, a Gaussian at rest at the observatory. */
export interface TelluricFeature {
  /** Wavelength in air, Å. */
  readonly air_angstrom: number;
  /** Full width at half maximum before the spectrograph, Å. */
  readonly fwhm_angstrom: number;
  /** Share of the light taken away at the middle, before the spectrograph, 0 to 1. */
  readonly depth: number;
}
