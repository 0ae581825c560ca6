import { z } from "zod";
import { number } from "./common.ts";

/** `[sky]`: target and site, only where the headers lack them. */
export interface SkySettings {
  /** Right ascension, ICRS, degrees. */
  readonly ra_deg?: number;
  /** Declination, ICRS, degrees. */
  readonly dec_deg?: number;
  /** The observatory's place. */
  readonly site?: {
    /** Geodetic latitude, degrees, north positive. */
    readonly latitude_deg: number;
    /** Geodetic longitude, degrees, east positive. */
    readonly longitude_east_deg: number;
    /** Height, m. */
    readonly height_m: number;
  };
}

/** Schema of SkySettings. */
export const skySection: z.ZodType<SkySettings> = z.strictObject({
  ra_deg: number.gte(0).lt(360).optional(),
  dec_deg: number.gte(-90).lte(90).optional(),
  site: z.strictObject({
    latitude_deg: number.gte(-90).lte(90),
    longitude_east_deg: number.gte(-180).lte(360),
    height_m: number.default(0),
  }).optional(),
});
