import { z } from "zod";
import { nonNegative, positive, text } from "./common.ts";

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
  if (map.weight !== "chi-square" && map.method !== "total-variation") {
    wrong("weight", 'is for map.method = "total-variation" alone');
  }
});
