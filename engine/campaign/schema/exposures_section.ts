import { z } from "zod";
import { positive, text } from "./common.ts";

/** One `[[exposures]]` table: an instrument set-up or a night. */
export interface ExposuresSettings {
  /** Paths or globs, relative to the target file. */
  readonly files: readonly string[];
  /** Log of a text layout: a CSV with columns file, mid, exposure_s, or as named in `keys`. */
  readonly log?: string;
  /** How the files are laid out. */
  readonly layout: "auto" | "image" | "stack" | "table" | "text";
  /** Medium of the wavelengths. */
  readonly wavelength_medium: "auto" | "air" | "vacuum";
  /** Frame of the wavelengths as they are now. */
  readonly wavelength_frame: "auto" | "topocentric" | "heliocentric" | "barycentric";
  /** Time scale of the recorded times. */
  readonly time_scale: "auto" | "utc" | "tt" | "tdb";
  /** Place for which the recorded times hold. */
  readonly time_place: "auto" | "observatory" | "heliocentric" | "barycentric";
  /** What a recorded time marks. */
  readonly time_marks: "auto" | "start" | "mid" | "end";
  /** Instrumental full width at half maximum, Å. */
  readonly resolution_angstrom?: number;
  /** Instrumental full width at half maximum, km/s. */
  readonly resolution_kms?: number;
  /** Wavelength over full width at half maximum. */
  readonly resolving_power?: number;
  /** "none", "sky-lines", "telluric", or a CSV of shifts. */
  readonly wavelength_zero_kms: string;
  /** "none", or a CSV of times and fluxes that scales each exposure. */
  readonly photometry: string;
  /** Header keys or log columns by another name. */
  readonly keys: Readonly<Record<string, string>>;
}

/** What a header key or a column may hold, as the spectra room looks them up. */
const ROLES = [
  "mid",
  "start",
  "end",
  "exposure_s",
  "ra",
  "dec",
  "latitude",
  "longitude",
  "longitude_west",
  "height",
  "resolution",
  "wavelength",
  "flux",
  "error",
  "inverse_variance",
  "mask",
  "file",
  "aperture",
] as const;

const roles = z.strictObject(
  Object.fromEntries(ROLES.map((role) => [role, text.optional()])),
);

/** Schema of ExposuresSettings. */
export const exposuresSection: z.ZodType<ExposuresSettings> = z.strictObject({
  files: z.array(text).min(1),
  log: text.optional(),
  layout: z.enum(["auto", "image", "stack", "table", "text"]).default("auto"),
  wavelength_medium: z.enum(["auto", "air", "vacuum"]).default("auto"),
  wavelength_frame: z.enum(["auto", "topocentric", "heliocentric", "barycentric"]).default("auto"),
  time_scale: z.enum(["auto", "utc", "tt", "tdb"]).default("auto"),
  time_place: z.enum(["auto", "observatory", "heliocentric", "barycentric"]).default("auto"),
  time_marks: z.enum(["auto", "start", "mid", "end"]).default("auto"),
  resolution_angstrom: positive.optional(),
  resolution_kms: positive.optional(),
  resolving_power: positive.optional(),
  wavelength_zero_kms: text.default("none"),
  photometry: text.default("none"),
  keys: roles.prefault({}) as unknown as z.ZodType<Record<string, string>>,
}).superRefine((group, context) => {
  const given = (["resolution_angstrom", "resolution_kms", "resolving_power"] as const)
    .filter((key) => group[key] !== undefined);
  if (given.length > 1) {
    context.addIssue({
      code: "custom",
      path: [given[1]!],
      message: `must not stand beside ${given[0]}: give the resolution once`,
    });
  }
});
