import type { Warning } from "../errors.ts";
import type { NormalisedStrip } from "./normalise.ts";
import type { GroupNoise, TrailNoise } from "./trail.ts";
import { measureNoise, type WindowResiduals } from "./trail_noise.ts";

function residuals({ strip, continuum, error }: NormalisedStrip): WindowResiduals {
  const { level, used } = continuum;
  return {
    velocity_kms: strip.velocity_kms,
    residual: strip.flux.map((f, i) =>
      used[i] === 1 && Number.isFinite(error[i]!) ? (f - level[i]!) / strip.error[i]! : NaN
    ),
    parameters: continuum.order + 1,
  };
}

/**
 * Measures the noise of every group of exposures in its continuum windows and says which scale to
 * apply.
 *
 * @param strips Normalised exposures with masks and cosmic rays set.
 * @param noise_scale A factor, or "measured".
 * @returns The noise and what there is to say about it.
 *
 * @example
 * ```ts
 * import { groupNoise } from "@millrace/millrace/trail";
 * import { assertEquals } from "@std/assert";
 *
 * assertEquals(groupNoise([], 1).noise.correlation_length_pixels, 1);
 * ```
 */
export function groupNoise(
  strips: readonly NormalisedStrip[],
  noise_scale: number | "measured",
): { readonly noise: TrailNoise; readonly warnings: readonly Warning[] } {
  const warnings: Warning[] = [];
  const numbers = [...new Set(strips.map((s) => s.strip.spectrum.group))].sort((a, b) => a - b);
  let samples = 0, lengths = 0;
  const groups = numbers.map((group): GroupNoise => {
    const members = strips.filter((s) => s.strip.spectrum.group === group);
    const errors_given = members.every((s) => s.strip.spectrum.errors_given);
    const measured = measureNoise(members.map((s) => residuals(s)));
    const where = numbers.length > 1 ? ` of group ${group + 1}` : "";
    if (!errors_given) {
      warnings.push({
        code: "errors-estimated",
        text:
          `the files${where} hold no errors: they were estimated from the scatter of the pixels`,
      });
    }
    if (measured === null) {
      if (noise_scale === "measured") {
        warnings.push({
          code: "noise-not-measured",
          text: `too few continuum pixels${where} to measure the noise: the errors stand as stated`,
        });
      }
      return {
        group,
        errors_given,
        measured_scale: NaN,
        measured_scale_error: NaN,
        applied_scale: noise_scale === "measured" ? 1 : noise_scale,
        lag_correlation: [],
        samples: 0,
      };
    }
    const { scale, scale_error, lag_correlation, correlation_length_pixels } = measured;
    samples += measured.samples;
    lengths += measured.samples * correlation_length_pixels;
    if (errors_given && (scale > 1.5 || scale < 0.67)) {
      warnings.push({
        code: "errors-implausible",
        text: `the continuum${where} scatters by ${scale.toFixed(2)} ± ${
          scale_error.toFixed(2)
        } of its stated errors${noise_scale === "measured" ? ": they were scaled by that" : ""}`,
      });
    }
    if (correlation_length_pixels > 1.2) {
      warnings.push({
        code: "noise-correlated",
        text: `the noise${where} is correlated from pixel to pixel (${
          lag_correlation.map((r) => r.toFixed(2)).join(", ")
        }), as resampling leaves it: ${
          correlation_length_pixels.toFixed(1)
        } pixels count as one, so errors of fitted quantities are ${
          Math.sqrt(correlation_length_pixels).toFixed(2)
        } times larger than for independent pixels`,
      });
    }
    return {
      group,
      errors_given,
      measured_scale: scale,
      measured_scale_error: scale_error,
      applied_scale: noise_scale === "measured" ? scale : noise_scale,
      lag_correlation,
      samples: measured.samples,
    };
  });
  return {
    noise: { groups, correlation_length_pixels: samples > 0 ? lengths / samples : 1 },
    warnings,
  };
}
