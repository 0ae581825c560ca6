import type { Sampling } from "../trail/mod.ts";
import { mapStep } from "./map_shape.ts";
import type { Projector, ProjectorOptions } from "./projector.ts";
import { panelled, type SmearingRule } from "./smearing.ts";
import { shiftVelocities, systemFrame } from "./system_frame.ts";

/** Beyond this many σ a Gaussian is below 1e-17 of its peak. */
const REACH = 9;

/** Smear over σ per panel of 8 Gauss–Legendre points: 1e-9 of the peak. */
const FINE_PANEL = 1;

/**
 * The plain double loop: for every exposure, instant and map pixel, one Gaussian. Slow and obvious;
 * the fast projector is tested against it. Smearing by panels of 8 Gauss–Legendre points fine
 * enough to be exact to 1e-9.
 *
 * @param sampling The exposures.
 * @param options Map's size and the systemic velocity, already checked.
 * @returns The operator.
 *
 * @example
 * ```ts
 * import { referenceProjector } from "@millrace/millrace/tomography";
 * import { assertAlmostEquals } from "@std/assert";
 *
 * const sampling = {
 *   count: 1,
 *   phase: Float64Array.of(0),
 *   cycle: Float64Array.of(0),
 *   phase_width: Float64Array.of(0),
 *   start: Uint32Array.of(0, 1),
 *   velocity_kms: Float64Array.of(0),
 *   pixel_kms: Float64Array.of(20),
 *   profile_sigma_kms: Float64Array.of(10),
 * };
 * const projector = referenceProjector(sampling, { pixels: 3, half_width_kms: 100, systemic_kms: 0 });
 * const [peak = NaN] = projector.forward(Float64Array.of(0, 0, 0, 0, 1, 0, 0, 0, 0));
 * assertAlmostEquals(peak, 1e4 / (Math.sqrt(2 * Math.PI) * 10), 1e-9);
 * ```
 */
export function referenceProjector(sampling: Sampling, options: ProjectorOptions): Projector {
  const { pixels, half_width_kms, systemic_kms, rest_ratio = 1 } = options;
  const shift = systemFrame(systemic_kms, { rest_ratio });
  const velocity = shiftVelocities(sampling.velocity_kms, shift);
  const step = mapStep(options);
  const rules: SmearingRule[] = [];
  for (let i = 0; i < sampling.count; i++) {
    const width = sampling.phase_width[i] ?? 0;
    const smear = 2 * Math.PI * width * half_width_kms * Math.SQRT2;
    const panels = Math.ceil(smear / ((sampling.profile_sigma_kms[i] ?? 1) * FINE_PANEL));
    rules.push(panelled(width, panels === 0 ? { panels: 1, order: 1 } : { panels, order: 8 }));
  }

  /** Calls back for every pixel and sample within reach of one another, with the operator's entry. */
  function visit(entry: (pixel: number, sample: number, value: number) => void): void {
    for (let i = 0; i < sampling.count; i++) {
      const sigma = (sampling.profile_sigma_kms[i] ?? 1) * shift.factor;
      const norm = step * step / (Math.sqrt(2 * Math.PI) * sigma);
      const { offset, weight } = rules[i] as SmearingRule;
      const from = sampling.start[i] ?? 0, to = sampling.start[i + 1] ?? 0;
      for (let q = 0; q < offset.length; q++) {
        const angle = 2 * Math.PI * ((sampling.phase[i] ?? 0) + (offset[q] ?? 0));
        const cos = Math.cos(angle), sin = Math.sin(angle);
        for (let row = 0; row < pixels; row++) {
          const vy = row * step - half_width_kms;
          for (let column = 0; column < pixels; column++) {
            const vx = column * step - half_width_kms;
            const v = -vx * cos + vy * sin;
            let k = firstAtLeast(velocity, { from, to, value: v - REACH * sigma });
            for (; k < to && (velocity[k] ?? 0) <= v + REACH * sigma; k++) {
              const z = ((velocity[k] ?? 0) - v) / sigma;
              entry(row * pixels + column, k, (weight[q] ?? 0) * norm * Math.exp(-0.5 * z * z));
            }
          }
        }
      }
    }
  }

  return {
    pixels,
    half_width_kms,
    systemic_kms,
    sampling,
    image_size: pixels * pixels,
    sample_count: velocity.length,
    code: "reference",
    forward(map, into = new Float64Array(velocity.length)) {
      into.fill(0);
      visit((pixel, k, value) => into[k] = (into[k] ?? 0) + value * (map[pixel] ?? 0));
      return into;
    },
    adjoint(data, into = new Float64Array(pixels * pixels)) {
      into.fill(0);
      visit((pixel, k, value) => into[pixel] = (into[pixel] ?? 0) + value * (data[k] ?? 0));
      return into;
    },
  };
}

function firstAtLeast(
  sorted: Float64Array,
  { from, to, value }: { readonly from: number; readonly to: number; readonly value: number },
): number {
  let low = from, high = to;
  while (low < high) {
    const middle = (low + high) >> 1;
    if ((sorted[middle] ?? 0) < value) low = middle + 1;
    else high = middle;
  }
  return low;
}
