import type { CardSpec } from "../fits/mod.ts";
import { geocentricOfSite, isoDate } from "../sky/mod.ts";
import type { RawExposure } from "./raw_exposure.ts";

const card = (keyword: string, value: CardSpec["value"], comment: string): CardSpec => ({
  keyword,
  value,
  comment,
});

/** The card by which our own files are known. */
export const CREATOR: CardSpec = card("CREATOR", "Millrace", "program that wrote this file");

/** Cards of the time of one exposure. */
export function startCards(exposure: RawExposure): CardSpec[] {
  return [
    card("DATE-OBS", isoDate(exposure.start), "start of exposure"),
    card("XPOSURE", exposure.exposure_s, "[s] exposure time"),
  ];
}

/** Cards of target, place and frame. */
export function siteCards(exposure: RawExposure): CardSpec[] {
  const [x, y, z] = geocentricOfSite(exposure.site);
  return [
    CREATOR,
    card("OBJECT", exposure.object, "target"),
    card("RA", exposure.ra_deg, "[deg] right ascension, ICRS"),
    card("DEC", exposure.dec_deg, "[deg] declination, ICRS"),
    card("RADESYS", "ICRS", "frame of RA and DEC"),
    card("TIMESYS", "UTC", "scale of times"),
    card("OBSGEO-X", x, "[m] observatory, geocentric"),
    card("OBSGEO-Y", y, "[m] observatory, geocentric"),
    card("OBSGEO-Z", z, "[m] observatory, geocentric"),
    card("SPECSYS", "TOPOCENT", "wavelengths as observed"),
    ...(exposure.resolution_angstrom === null
      ? []
      : [card("SPEC_RES", exposure.resolution_angstrom, "[Angstrom] FWHM of the profile")]),
  ];
}

/** Whether pixels are all of one width. */
export function isLinear(wavelength: Float64Array): boolean {
  const step = (wavelength.at(-1)! - wavelength[0]!) / (wavelength.length - 1);
  return wavelength.every((w, i) => Math.abs(w - wavelength[0]! - i * step) < 1e-6 * step);
}

/** Cards of a linear wavelength axis. */
export function axisCards({ wavelength_angstrom: w, medium }: RawExposure): CardSpec[] {
  return [
    card("CTYPE1", medium === "air" ? "AWAV" : "WAVE", `wavelength in ${medium}`),
    card("CUNIT1", "Angstrom", "unit of the axis"),
    card("CRPIX1", 1, "reference pixel"),
    card("CRVAL1", w[0]!, "wavelength of the reference pixel"),
    card("CDELT1", (w.at(-1)! - w[0]!) / (w.length - 1), "wavelength step"),
  ];
}
