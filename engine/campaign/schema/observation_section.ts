import { z } from "zod";
import { count, nonNegative, number, positive, text } from "./common.ts";

/** `[observation]`: exposures to be simulated by `synth --exposures`. */
export interface ObservationSettings {
  /** Start of the first exposure, UTC, ISO 8601. */
  readonly first_utc: string;
  /** Number of exposures. */
  readonly count: number;
  /** Exposure time, s. */
  readonly exposure_s: number;
  /** Time between the end of one exposure and the start of the next, s. */
  readonly overhead_s: number;
  /** Layout of the files. */
  readonly layout: "image" | "stack" | "table" | "text";
  /** The arms of the spectrograph. */
  readonly arms: readonly ArmSettings[];
  /** How the light varies. */
  readonly variability: Readonly<Record<string, number>>;
  /** What slit, spectrograph and detector do. */
  readonly instrument: Readonly<Record<string, number | boolean>>;
  /** The night sky. */
  readonly sky: {
    /** Brightness of the sky's continuum over the target's. */
    readonly brightness?: number;
    /** Share of the sky left after subtraction. */
    readonly residual?: number;
    /** Emission lines. */
    readonly lines?: readonly {
      /** Wavelength in air, Å. */
      readonly air_angstrom: number;
      /** Equivalent width over the target's continuum, Å. */
      readonly equivalent_width_angstrom: number;
    }[];
    /** Absorption features. */
    readonly telluric?: readonly {
      /** Wavelength in air, Å. */
      readonly air_angstrom: number;
      /** Full width at half maximum, Å. */
      readonly fwhm_angstrom: number;
      /** Share of the light taken away. */
      readonly depth: number;
    }[];
  };
}

/** One arm of a spectrograph. */
export interface ArmSettings {
  /** Folder of its files. */
  readonly name: string;
  /** Centre of the first pixel, Å. */
  readonly first_angstrom: number;
  /** Width of a pixel, Å. */
  readonly step_angstrom: number;
  /** Number of pixels. */
  readonly pixels: number;
  /** Medium of the wavelengths. */
  readonly medium: "air" | "vacuum";
  /** Full width at half maximum, pixel included, Å. */
  readonly resolution_angstrom: number;
  /** Signal to noise of the continuum per resolution element. */
  readonly signal_to_noise: number;
  /** Exponent of the continuum ∝ λ^s. */
  readonly continuum_slope: number;
}

const share = z.number().gte(0).lte(1);

const arm = z.strictObject({
  name: text,
  first_angstrom: positive,
  step_angstrom: positive,
  pixels: count,
  medium: z.enum(["air", "vacuum"]).default("air"),
  resolution_angstrom: positive,
  signal_to_noise: positive.default(50),
  continuum_slope: number.default(0),
});

/** Schema of ObservationSettings. */
export const observationSection: z.ZodType<ObservationSettings> = z.strictObject({
  first_utc: text,
  count,
  exposure_s: positive,
  overhead_s: nonNegative.default(0),
  layout: z.enum(["image", "stack", "table", "text"]).default("image"),
  arms: z.array(arm).min(1),
  variability: z.strictObject({
    modulation: number.optional(),
    modulation_phase: number.optional(),
    flickering: nonNegative.optional(),
    flickering_time_s: positive.optional(),
  }).prefault({}) as unknown as z.ZodType<Record<string, number>>,
  instrument: z.strictObject({
    slit_loss: nonNegative.optional(),
    slit_tilt: nonNegative.optional(),
    drift_kms_per_h: number.optional(),
    zero_error_kms: nonNegative.optional(),
    read_noise: nonNegative.optional(),
    cosmic_rays: nonNegative.optional(),
    cosmic_ray_electrons: positive.optional(),
    resampled: z.boolean().optional(),
    errors: z.boolean().optional(),
  }).prefault({}) as unknown as z.ZodType<Record<string, number | boolean>>,
  sky: z.strictObject({
    brightness: nonNegative.optional(),
    residual: share.optional(),
    lines: z.array(z.strictObject({
      air_angstrom: positive,
      equivalent_width_angstrom: nonNegative,
    })).optional(),
    telluric: z.array(z.strictObject({
      air_angstrom: positive,
      fwhm_angstrom: positive,
      depth: share,
    })).optional(),
  }).prefault({}),
});
