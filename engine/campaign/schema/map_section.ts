import { z } from "zod";
import { nonNegative, positive, text } from "./common.ts";

/** `[map]`: the velocity map and how it is made. */
export interface MapSettings {
  /** Inversion. */
  readonly method: "back-projection" | "entropy";
  /** Velocity of the outermost pixel's centre, km/s. */
  readonly half_width_kms: number;
  /** Pixels along each side, odd; chosen from the resolution when absent. */
  readonly pixels?: number;
  /** "uniform", "blurred", "axisymmetric", or a FITS file. */
  readonly prior_image: string;
  /** Goal of the fit: chi-square over the number of samples. */
  readonly reduced_chi_square: number;
  /** Number of resamples for the errors. */
  readonly resamples: number;
  /** "noise" of the stated errors put on once more, or a "bootstrap" of blocks of exposures. */
  readonly resampling: "noise" | "bootstrap";
}

/** Schema of MapSettings. */
export const mapSection: z.ZodType<MapSettings> = z.strictObject({
  method: z.enum(["back-projection", "entropy"]).default("back-projection"),
  half_width_kms: positive.lte(50_000).default(2000),
  pixels: positive.int().lte(2001).refine((n) => n % 2 === 1, {
    error: "must be odd, so that one pixel is at (0, 0)",
  })
    .optional(),
  prior_image: text.default("blurred"),
  reduced_chi_square: positive.default(1),
  resamples: nonNegative.int().default(50),
  resampling: z.enum(["noise", "bootstrap"]).default("noise"),
});
