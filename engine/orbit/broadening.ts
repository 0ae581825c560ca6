import { rotationBinMean } from "../synthesis/mod.ts";
import type { DonorTemplate } from "./donor_template.ts";

/** A symmetric kernel of unit sum on a step, or null when it is narrower than one. */
function convolve(flux: Float64Array, kernel: Float64Array): Float64Array {
  const half = (kernel.length - 1) / 2;
  const out = new Float64Array(flux.length + 2 * half);
  for (let k = 0; k < flux.length; k++) {
    const f = flux[k]!;
    if (f === 0) continue;
    for (let j = 0; j < kernel.length; j++) out[k + j]! += f * kernel[j]!;
  }
  return out;
}

function unit(kernel: Float64Array): Float64Array {
  const sum = kernel.reduce((a, b) => a + b, 0);
  return kernel.map((value) => value / sum);
}

/** Kernel from its integral over bins of one step. */
function binned(reach: number, step: number, mean: (low: number, high: number) => number) {
  const half = Math.ceil(reach / step);
  return unit(
    Float64Array.from(
      { length: 2 * half + 1 },
      (_, k) => mean((k - half - 0.5) * step, (k - half + 0.5) * step),
    ),
  );
}

/** How a template is broadened before it is compared with an exposure. */
export interface Broadening {
  /** Standard deviation of a Gaussian, km/s. @default {0} */
  readonly sigma_kms?: number;
  /** Projected rotation speed, km/s. @default {0} */
  readonly v_sin_i_kms?: number;
  /** Linear limb darkening of the rotation kernel. @default {0.5} */
  readonly limb_darkening?: number;
  /** Full width of a box, km/s: the star's change of velocity during the exposure. @default {0} */
  readonly smear_kms?: number;
}

/**
 * A template broadened by a Gaussian, by rotation and by a box.
 *
 * @param template The template.
 * @param broadening What to broaden it by.
 * @returns A wider template of the same area.
 *
 * @example The area stays
 * ```ts
 * import { broadenTemplate } from "@millrace/millrace/orbit";
 * import { assertAlmostEquals } from "@std/assert";
 *
 * const flux = new Float64Array(41);
 * flux[20] = -1;
 * const template = { name: "line", first_kms: -200, step_kms: 10, flux, sigma_kms: 0 };
 * const wide = broadenTemplate(template, { sigma_kms: 30, v_sin_i_kms: 80, smear_kms: 20 });
 * assertAlmostEquals(wide.flux.reduce((a, b) => a + b, 0), -1, 1e-12);
 * ```
 */
export function broadenTemplate(template: DonorTemplate, broadening: Broadening): DonorTemplate {
  const { sigma_kms = 0, v_sin_i_kms = 0, limb_darkening = 0.5, smear_kms = 0 } = broadening;
  const step = template.step_kms;
  let { flux } = template;
  if (sigma_kms > 0.1 * step) {
    flux = convolve(
      flux,
      binned(5 * sigma_kms, step, (low, high) => {
        const at = (low + high) / 2;
        return Math.exp(-0.5 * (at / sigma_kms) ** 2);
      }),
    );
  }
  if (v_sin_i_kms > 0.1 * step) {
    flux = convolve(
      flux,
      binned(
        v_sin_i_kms,
        step,
        (low, high) => rotationBinMean([low / v_sin_i_kms, high / v_sin_i_kms], limb_darkening),
      ),
    );
  }
  if (smear_kms > 0.1 * step) {
    const half = smear_kms / 2;
    flux = convolve(
      flux,
      binned(half, step, (low, high) => Math.max(0, Math.min(high, half) - Math.max(low, -half))),
    );
  }
  const grown = (flux.length - template.flux.length) / 2;
  return {
    ...template,
    flux,
    first_kms: template.first_kms - grown * step,
    sigma_kms: Math.hypot(template.sigma_kms, sigma_kms),
  };
}
