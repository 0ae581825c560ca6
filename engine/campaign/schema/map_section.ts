import { z } from "zod";
import { nonNegative, number, positive, text } from "./common.ts";

/** A circle on the map. */
export interface RegionSettings {
  /** Its name. */
  readonly name?: string;
  /** Its centre, km/s. */
  readonly vx_kms: number;
  /** The same along Vy. */
  readonly vy_kms: number;
  /** Its radius, km/s. */
  readonly radius_kms: number;
}

const region = z.strictObject({
  name: text.optional(),
  vx_kms: number,
  vy_kms: number,
  radius_kms: positive,
});

/** `[map]`: the velocity map and how it is made. */
export interface MapSettings {
  /** Inversion. */
  readonly method: "back-projection" | "entropy" | "total-variation";
  /** Velocity of the outermost pixel's centre, km/s. */
  readonly half_width_kms: number;
  /** Pixels along each side, odd; chosen from the resolution when absent. */
  readonly pixels?: number;
  /** "uniform", "blurred", "axisymmetric", "mixed", or a FITS file. */
  readonly prior_image: string;
  /** Goal of the fit: chi-square over the number of samples. */
  readonly reduced_chi_square: number;
  /** How total variation finds its weight: by the goal, by leaving out exposures, or from the noise. */
  readonly weight: "chi-square" | "cross-validation" | "noise";
  /** Whether each exposure's straight baseline is free. */
  readonly baseline: boolean;
  /** Whether maps at χ² 5 % lower and higher are made too. */
  readonly sensitivity: boolean;
  /** Whether emission that varies with the orbit is mapped too. */
  readonly modulation: boolean;
  /** Regions, beside the features, over which its amplitude is told. */
  readonly regions: readonly RegionSettings[];
  /** Whether γ is searched with maps. */
  readonly systemic_scan: boolean;
  /** Whether the period is searched with maps. */
  readonly period_scan: boolean;
  /** Whether map.json tells what sampling and inversion alone do to the features. */
  readonly structures: boolean;
  /** Whether speeds are turned inside out while the map is solved for. */
  readonly coordinates: "usual" | "inside-out";
  /** Number of resamples for the errors. */
  readonly resamples: number;
  /** "noise" of the stated errors put on once more, or a "bootstrap" of blocks of exposures. */
  readonly resampling: "noise" | "bootstrap";
}

/** Schema of MapSettings. */
export const mapSection: z.ZodType<MapSettings> = z.strictObject({
  method: z.enum(["back-projection", "entropy", "total-variation"]).default("back-projection"),
  half_width_kms: positive.lte(50_000).default(2000),
  pixels: positive.int().lte(2001).refine((n) => n % 2 === 1, {
    error: "must be odd, so that one pixel is at (0, 0)",
  })
    .optional(),
  prior_image: text.default("blurred"),
  reduced_chi_square: positive.default(1),
  weight: z.enum(["chi-square", "cross-validation", "noise"]).default("chi-square"),
  baseline: z.boolean().default(false),
  sensitivity: z.boolean().default(false),
  modulation: z.boolean().default(false),
  regions: z.array(region).default([]),
  systemic_scan: z.boolean().default(false),
  period_scan: z.boolean().default(false),
  structures: z.boolean().default(true),
  coordinates: z.enum(["usual", "inside-out"]).default("usual"),
  resamples: nonNegative.int().default(50),
  resampling: z.enum(["noise", "bootstrap"]).default("noise"),
}).superRefine((map, context) => {
  const wrong = (key: string, message: string) =>
    context.addIssue({ code: "custom", path: [key], message });
  const fitted = map.method !== "back-projection";
  if (map.baseline && !fitted) {
    wrong(
      "baseline",
      "must not be free in a back-projection, which is no fit: set map.method to entropy or total-variation",
    );
  }
  if (map.sensitivity && !fitted) {
    wrong(
      "sensitivity",
      "needs a map that is fitted to a χ²: set map.method to entropy or total-variation",
    );
  }
  if (map.coordinates !== "usual" && map.method !== "entropy") {
    wrong("coordinates", 'is for map.method = "entropy" alone');
  }
  if (map.weight !== "chi-square" && map.method !== "total-variation") {
    wrong("weight", 'is for map.method = "total-variation" alone');
  }
});
