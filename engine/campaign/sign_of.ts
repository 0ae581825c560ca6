import { InputError } from "../errors.ts";
import type { Trail } from "../trail/mod.ts";
import type { LineSign } from "./inversion/inverted.ts";
import type { Target } from "./target.ts";

/**
 * The sign that a line is inverted with: as stated, or where that is left open the sign of its mean.
 *
 * @param trail The line's trail.
 * @param options Where its table stands.
 * @param options.target The target.
 * @returns The sign.
 * @throws {InputError} When both signs are asked of an inversion that keeps to one.
 */
export function signOf(trail: Trail, options: { target: Target }): LineSign {
  const { target } = options;
  const { lines, map } = target.settings;
  const index = lines.findIndex(({ name }) => name === trail.line.name);
  const stated = lines[index]?.sign ?? "auto";
  if (stated === "auto") {
    return trail.flux.reduce((sum, value) => sum + value, 0) < 0 ? "absorption" : "emission";
  }
  if (stated === "mixed" && map.method === "total-variation") {
    const key = `lines[${index}].sign`;
    throw new InputError({
      action: `map ${trail.line.name}`,
      rule: "total variation keeps to one sign",
      value: stated,
      file: target.file,
      line: target.places.get(key)?.line,
      key,
      remedy: 'use map.method = "entropy", whose maps may have either sign',
    });
  }
  return stated;
}

/** A trail with its sign turned, samples and display alike. */
export function turned(trail: Trail): Trail {
  const flip = (values: Float64Array) => values.map((value) => -value);
  return {
    ...trail,
    flux: flip(trail.flux),
    grid: { ...trail.grid, flux: flip(trail.grid.flux) },
  };
}

/** The trail of a map with the sign that the map has: that of absorption turned. */
export function uprightTrail(
  { trail, sign }: { readonly trail: Trail; readonly sign: LineSign },
): Trail {
  return sign === "absorption" ? turned(trail) : trail;
}
