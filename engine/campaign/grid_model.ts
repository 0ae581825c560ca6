import {
  type BlendMember,
  blendProjector,
  makeProjector,
  type VelocityMap,
} from "../tomography/mod.ts";
import type { Sampling, Trail } from "../trail/mod.ts";

/**
 * A map projected onto the display grid of a trail, for plates: one row a grid row, through the mean
 * instrumental profile.
 *
 * @param map The map.
 * @param options Where to project it.
 * @param options.trail The trail.
 * @param options.systemic_kms Systemic velocity, km/s.
 * @param options.scale Factor on the model.
 * @param options.blends Lines that share the map. @default none
 * @param options.own Maps of lines that have their own, with their rest wavelength ratios. @default none
 * @returns Model and residual in standard deviations, R × C row-major as `trail.grid.flux`.
 */
export function gridModel(
  map: VelocityMap,
  options: {
    trail: Trail;
    systemic_kms: number;
    scale: number;
    blends?: readonly BlendMember[];
    own?: readonly { readonly map: VelocityMap; readonly rest_ratio: number }[];
  },
): { model: Float64Array; residual: Float64Array } {
  const { trail, systemic_kms, scale, blends = [], own = [] } = options;
  const { grid } = trail;
  const { pixels, half_width_kms } = map;
  const shape = { pixels, half_width_kms, systemic_kms };
  const sampling = gridSampling(trail);
  const model = blendProjector(sampling, { ...shape, members: blends }).forward(map.intensity)
    .map((value) => value * scale);
  for (const { map: other, rest_ratio } of own) {
    makeProjector(sampling, { ...shape, rest_ratio }).forward(other.intensity)
      .forEach((value, k) => model[k] = model[k]! + scale * value);
  }
  const residual = model.map((value, k) =>
    Number.isFinite(grid.error[k]!) ? (grid.flux[k]! - value) / grid.error[k]! : NaN
  );
  return { model, residual };
}

function gridSampling(trail: Trail): Sampling {
  const { grid, sampling } = trail;
  const sigma = sampling.profile_sigma_kms.reduce((a, b) => a + b, 0) / sampling.count;
  const size = grid.rows * grid.columns;
  return {
    count: grid.rows,
    phase: grid.phase,
    cycle: new Float64Array(grid.rows),
    phase_width: grid.phase_width,
    start: Uint32Array.from({ length: grid.rows + 1 }, (_, row) => row * grid.columns),
    velocity_kms: Float64Array.from(
      { length: size },
      (_, k) => grid.first_kms + (k % grid.columns) * grid.step_kms,
    ),
    pixel_kms: new Float64Array(size).fill(grid.step_kms),
    profile_sigma_kms: new Float64Array(grid.rows).fill(sigma),
  };
}
