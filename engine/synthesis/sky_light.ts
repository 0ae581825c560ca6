import { type ArmPixels, onArm, PLACES } from "./arm_pixels.ts";
import type { Arm, NightSky } from "./observation.ts";

const FWHM_PER_SIGMA = Math.sqrt(8 * Math.LN2);

/** What the sky adds and takes away, per pixel. */
export interface SkyLight {
  /** Sky over the target's continuum in the middle of the arm. */
  readonly emission: Float64Array;
  /** Share of the target's light that comes through the air. */
  readonly transmission: Float64Array;
}

/** The sky through an arm's optics; features are at rest at the observatory. */
export function skyLight(pixels: ArmPixels, arm: Arm, sky: NightSky): SkyLight {
  const { brightness = 0, lines = [], telluric = [] } = sky;
  const count = pixels.wavelength_angstrom.length;
  const emission = new Float64Array(count).fill(brightness);
  const transmission = new Float64Array(count).fill(1);
  const optics = pixels.optics_sigma_angstrom;
  for (const { air_angstrom, equivalent_width_angstrom } of lines) {
    const peak = equivalent_width_angstrom / (Math.sqrt(2 * Math.PI) * optics);
    const shape = gaussianMean(pixels, { centre: onArm(air_angstrom, arm), sigma: optics, arm });
    for (let n = 0; n < count; n++) emission[n]! += peak * shape[n]!;
  }
  for (const { air_angstrom, fwhm_angstrom, depth } of telluric) {
    const own = fwhm_angstrom / FWHM_PER_SIGMA;
    const sigma = Math.hypot(own, optics);
    const shape = gaussianMean(pixels, { centre: onArm(air_angstrom, arm), sigma, arm });
    for (let n = 0; n < count; n++) transmission[n]! *= 1 - depth * own / sigma * shape[n]!;
  }
  return { emission, transmission };
}

/** A Gaussian of unit height, averaged over each pixel. */
function gaussianMean(
  pixels: ArmPixels,
  { centre, sigma, arm }: { readonly centre: number; readonly sigma: number; readonly arm: Arm },
): Float64Array {
  const { wavelength_angstrom, weights, places } = pixels;
  return wavelength_angstrom.map((middle) => {
    if (Math.abs(middle - centre) > 8 * sigma + arm.step_angstrom) return 0;
    let mean = 0;
    for (let p = 0; p < PLACES; p++) {
      const z = (middle + places[p]! * arm.step_angstrom - centre) / sigma;
      mean += weights[p]! * Math.exp(-0.5 * z * z);
    }
    return mean;
  });
}
