import { mapStep, type VelocityMap } from "../tomography/mod.ts";

/** Narrowest Gaussian that a map can hold without its flux depending on where in a pixel it stands. */
const LEAST_SIGMA_PIXELS = 0.7;
const REACH = 5;

/** Adds a round Gaussian of given light, no narrower than 0.7 of a pixel. */
export function addSpotToMap(
  map: VelocityMap,
  { vx_kms, vy_kms, sigma_kms, light }: {
    readonly vx_kms: number;
    readonly vy_kms: number;
    readonly sigma_kms: number;
    readonly light: number;
  },
): void {
  const { pixels, half_width_kms, intensity } = map;
  const step = mapStep(map);
  const sigma = Math.max(sigma_kms, LEAST_SIGMA_PIXELS * step);
  const across = Math.ceil(REACH * sigma / step);
  const column = Math.round((vx_kms + half_width_kms) / step);
  const row = Math.round((vy_kms + half_width_kms) / step);
  const peak = light / (2 * Math.PI * sigma * sigma);
  for (let j = Math.max(0, row - across); j <= Math.min(pixels - 1, row + across); j++) {
    const dy = (j * step - half_width_kms - vy_kms) / sigma;
    for (let i = Math.max(0, column - across); i <= Math.min(pixels - 1, column + across); i++) {
      const dx = (i * step - half_width_kms - vx_kms) / sigma;
      intensity[j * pixels + i]! += peak * Math.exp(-0.5 * (dx * dx + dy * dy));
    }
  }
}

/** Adds a map convolved with a round Gaussian; one of no width adds it as it is. */
export function addBlurred(map: VelocityMap, source: Float64Array, sigma_kms: number): void {
  const { pixels, intensity } = map;
  const sigma = sigma_kms / mapStep(map);
  if (sigma < 1e-3) {
    for (let k = 0; k < source.length; k++) intensity[k]! += source[k]!;
    return;
  }
  const reach = Math.ceil(REACH * sigma);
  const weights = Float64Array.from(
    { length: 2 * reach + 1 },
    (_, k) => Math.exp(-0.5 * ((k - reach) / sigma) ** 2),
  );
  const sum = weights.reduce((a, b) => a + b, 0);
  const rows = new Float64Array(source.length);
  for (let j = 0; j < pixels; j++) {
    for (let i = 0; i < pixels; i++) {
      const value = source[j * pixels + i]! / sum;
      if (value === 0) continue;
      for (let k = Math.max(-reach, -i); k <= Math.min(reach, pixels - 1 - i); k++) {
        rows[j * pixels + i + k]! += value * weights[k + reach]!;
      }
    }
  }
  for (let j = 0; j < pixels; j++) {
    for (let k = Math.max(-reach, -j); k <= Math.min(reach, pixels - 1 - j); k++) {
      const weight = weights[k + reach]! / sum;
      for (let i = 0; i < pixels; i++) {
        intensity[(j + k) * pixels + i]! += weight * rows[j * pixels + i]!;
      }
    }
  }
}
