import { findCosmicRays } from "./cosmic_rays.ts";
import type { NormalisedStrip } from "./normalise.ts";
import type { WarningList } from "./trail_warnings.ts";

function middlePixel({ strip }: NormalisedStrip): number {
  return strip.pixel_kms[strip.pixel_kms.length >> 1] ?? 1;
}

// Neighbours compare only when slit losses are divided out, however the trail is normalised.
function divided({ strip, continuum, flux, error }: NormalisedStrip) {
  const { at_line, at_line_error } = continuum;
  if (!(at_line > 3 * at_line_error)) return { flux, error };
  return {
    flux: strip.flux.map((f, i) =>
      Number.isFinite(error[i]!) ? (f - continuum.level[i]!) / at_line : 0
    ),
    error: strip.error.map((e, i) => Number.isFinite(error[i]!) ? e / at_line : Infinity),
  };
}

/**
 * Searches normalised exposures for cosmic rays, masks them and says how many.
 *
 * @param strips Normalised exposures in order of time.
 * @param options For each strip its orbits since the zero and the width of its instrumental profile; the largest
 * speed of real features; where to say things.
 * @returns New strips with the hits masked.
 *
 * @example
 * ```ts
 * import { maskCosmicRays, warningsOf } from "@millrace/millrace/trail";
 * import { assertEquals } from "@std/assert";
 *
 * const warnings = warningsOf("H beta");
 * assertEquals(maskCosmicRays([], { orbits: [], profile_kms: [], largest_speed_kms: 1000, warnings }), []);
 * ```
 */
export function maskCosmicRays(
  strips: readonly NormalisedStrip[],
  options: {
    readonly orbits: readonly number[];
    readonly profile_kms: readonly number[];
    readonly largest_speed_kms: number;
    readonly warnings: WarningList;
  },
): readonly NormalisedStrip[] {
  const { orbits, profile_kms, largest_speed_kms, warnings } = options;
  const rows = strips.map((normalised, i) => ({
    velocity_kms: normalised.strip.velocity_kms,
    ...divided(normalised),
    orbit: orbits[i]!,
    profile_pixels: profile_kms[i]! / middlePixel(normalised),
    group: normalised.strip.spectrum.group,
  }));
  const { hit, count, unsearched, unlike } = findCosmicRays(rows, { largest_speed_kms });
  const sources = (indices: readonly number[]) =>
    indices.map((i) => strips[i]!.strip.spectrum.source);
  if (count > 0) {
    const struck = hit.filter((row) => row.includes(1)).length;
    warnings.about(
      "cosmic-rays",
      `masked ${count} pixels hit by cosmic rays in ${struck} of ${strips.length} exposures`,
    );
  }
  warnings.about(
    "cosmic-rays-unsearched",
    "not searched for cosmic rays, as fewer than two exposures lie near in time or phase",
    sources(unsearched),
  );
  warnings.about(
    "exposures-unlike",
    "not searched for cosmic rays, as they differ from their neighbours too broadly (eclipse, flare, cloud?)",
    sources(unlike),
  );
  return strips.map((s, i) => ({
    ...s,
    flux: s.flux.map((f, k) => hit[i]![k] === 1 ? 0 : f),
    error: s.error.map((e, k) => hit[i]![k] === 1 ? Infinity : e),
  }));
}
