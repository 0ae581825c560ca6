import { join } from "@std/path";
import { InputError } from "../errors.ts";
import { readBytes } from "../files/mod.ts";
import { parseFits } from "../fits/mod.ts";
import type { PriorImage } from "../tomography/mod.ts";
import { hduName } from "./fits_head.ts";
import type { Target } from "./target.ts";

/** A blurred default image is smoothed by this many resolutions. */
const BLUR = 3;

/**
 * The default image that `map.prior_image` names: "uniform", "blurred", "axisymmetric", "mixed", or a
 * FITS file with a map of the same size.
 *
 * @param target The target.
 * @param options What the map is like.
 * @param options.line Name of the line: the HDU looked for first.
 * @param options.resolution_kms Full width at half maximum, km/s.
 * @param options.centre_kms Vy of the accretor, km/s.
 * @param options.pixels Pixels along each side.
 * @returns The default image.
 * @throws {InputError} When the file is no map of that size.
 */
export async function priorOf(
  target: Target,
  options: { line: string; resolution_kms: number; centre_kms: number; pixels: number },
): Promise<PriorImage> {
  const { line, resolution_kms, centre_kms, pixels } = options;
  const { prior_image, half_width_kms } = target.settings.map;
  const centre = { vx_kms: 0, vy_kms: centre_kms };
  const fwhm_kms = BLUR * resolution_kms;
  switch (prior_image) {
    case "uniform":
      return { kind: "uniform" };
    case "blurred":
      return { kind: "blurred", fwhm_kms };
    case "axisymmetric":
      return { kind: "axisymmetric", centre };
    case "mixed":
      return { kind: "mixed", fwhm_kms, centre };
  }
  const file = join(target.folder, prior_image);
  const action = "read default image";
  const fits = parseFits(await readBytes(file, { action }), { file });
  const images = fits.hdus.filter(({ kind, shape }) => kind === "image" && shape.length === 2);
  const hdu = images.find(({ name }) => name === hduName(line)) ?? images[0];
  if (hdu === undefined || hdu.shape[0] !== pixels || hdu.shape[1] !== pixels) {
    throw new InputError({
      action,
      rule: `it must be an image of ${pixels} × ${pixels} pixels, as the map is`,
      value: hdu === undefined ? "no image" : hdu.shape.join(" × "),
      file,
      key: "map.prior_image",
    });
  }
  const step = hdu.header.has("CDELT1") ? hdu.header.number("CDELT1")! : null;
  const expected = (2 * half_width_kms) / (pixels - 1);
  if (step !== null && Math.abs(step / expected - 1) > 1e-6) {
    throw new InputError({
      action,
      rule: `its pixels must be ${expected} km/s wide, as the map's are`,
      value: step,
      unit: "km/s",
      file,
      key: "CDELT1",
    });
  }
  return { kind: "image", map: { pixels, half_width_kms, intensity: hdu.image().data } };
}
