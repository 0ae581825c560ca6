import type { LinearOperator } from "./linear_operator.ts";
import { type MapShape, mapStep } from "./map_shape.ts";
import type { VelocityMap } from "./velocity_map.ts";

/** Four pixels of the other map that each pixel is interpolated from, with their weights. */
interface Turning {
  /** Pixel of the upper left of the four, one per pixel; −1 where there is none. */
  readonly corner: Int32Array;
  /** Weights of the four, four per pixel, the Jacobian in them. */
  readonly weight: Float64Array;
}

/**
 * From inside-out maps to ordinary ones: a pixel at speed v and angle θ takes its value at speed
 * v' = V − v and the same angle, V being the half-width, times v'/v, so that fluxes stay:
 * I v dv dθ = I' v' dv' dθ. The same rule leads back.
 */
function turning(shape: MapShape): Turning {
  const { pixels, half_width_kms } = shape;
  const step = mapStep(shape);
  const corner = new Int32Array(pixels * pixels).fill(-1);
  const weight = new Float64Array(4 * pixels * pixels);
  for (let k = 0; k < corner.length; k++) {
    const vx = (k % pixels) * step - half_width_kms;
    const vy = Math.floor(k / pixels) * step - half_width_kms;
    const speed = Math.hypot(vx, vy), other = half_width_kms - speed;
    if (other < 0) continue;
    // At the very centre all angles meet: the pixel takes what lies along +Vx, at half a step.
    const near = Math.max(speed, 0.5 * step);
    const far = half_width_kms - near;
    const x = speed > 0 ? vx / speed * far : far, y = speed > 0 ? vy / speed * far : 0;
    const at = (x + half_width_kms) / step, up = (y + half_width_kms) / step;
    const c = Math.min(pixels - 2, Math.floor(at)), r = Math.min(pixels - 2, Math.floor(up));
    const p = at - c, q = up - r, jacobian = far / near;
    corner[k] = r * pixels + c;
    weight[4 * k] = jacobian * (1 - p) * (1 - q);
    weight[4 * k + 1] = jacobian * p * (1 - q);
    weight[4 * k + 2] = jacobian * (1 - p) * q;
    weight[4 * k + 3] = jacobian * p * q;
  }
  return { corner, weight };
}

function turn(
  values: Float64Array,
  { corner, weight }: Turning,
  { pixels, into }: { readonly pixels: number; readonly into: Float64Array },
): Float64Array {
  for (let k = 0; k < into.length; k++) {
    const c = corner[k]!;
    into[k] = c < 0 ? 0 : weight[4 * k]! * values[c]! + weight[4 * k + 1]! * values[c + 1]! +
      weight[4 * k + 2]! * values[c + pixels]! + weight[4 * k + 3]! * values[c + pixels + 1]!;
  }
  return into;
}

function turnBack(
  values: Float64Array,
  { corner, weight }: Turning,
  { pixels, into }: { readonly pixels: number; readonly into: Float64Array },
): Float64Array {
  into.fill(0);
  for (let k = 0; k < values.length; k++) {
    const c = corner[k]!, v = values[k]!;
    if (c < 0) continue;
    into[c] = into[c]! + weight[4 * k]! * v;
    into[c + 1] = into[c + 1]! + weight[4 * k + 1]! * v;
    into[c + pixels] = into[c + pixels]! + weight[4 * k + 2]! * v;
    into[c + pixels + 1] = into[c + pixels + 1]! + weight[4 * k + 3]! * v;
  }
  return into;
}

/**
 * A map with its speeds turned inside out, for display: high speeds, from near the accretor, in the
 * middle; rest at the rim. Intensities carry the Jacobian, so fluxes of regions stay. What lies beyond
 * the circle of the half-width is left out. Applied twice it gives the map back, smoothed by the two
 * interpolations.
 *
 * @param map The map.
 * @returns The turned map: speed V − v at the same angle.
 *
 * @example A ring at 300 of 400 km/s lands at 100
 * ```ts
 * import { insideOutMap, mapPeak } from "@millrace/millrace/tomography";
 * import { assertAlmostEquals } from "@std/assert";
 *
 * const intensity = Float64Array.from({ length: 81 * 81 }, (_, k) => {
 *   const vx = (k % 81) * 10 - 400, vy = Math.floor(k / 81) * 10 - 400;
 *   return Math.exp(-0.5 * ((vx - 300) ** 2 + vy ** 2) / 20 ** 2);
 * });
 * const turned = insideOutMap({ pixels: 81, half_width_kms: 400, intensity });
 * assertAlmostEquals(mapPeak(turned).vx_kms, 96, 2); // a little inwards: the Jacobian rises there
 * ```
 */
export function insideOutMap(map: VelocityMap): VelocityMap {
  const { pixels, half_width_kms, intensity } = map;
  return {
    pixels,
    half_width_kms,
    intensity: turn(intensity, turning(map), {
      pixels,
      into: new Float64Array(pixels * pixels),
    }),
  };
}

/**
 * The operator whose image is an inside-out map: for solving with a default image that is smooth in
 * the turned coordinates, which favours structure at high speeds.
 *
 * @param operator Operator of the ordinary map.
 * @param shape The map's shape.
 * @returns The operator of the turned map, with its exact transpose.
 *
 * @example
 * ```ts
 * import { insideOutOperator } from "@millrace/millrace/tomography";
 * import { assertEquals } from "@std/assert";
 *
 * const identity = (x: Float64Array, into: Float64Array = new Float64Array(x.length)) => {
 *   into.set(x);
 *   return into;
 * };
 * const operator = { image_size: 25, sample_count: 25, forward: identity, adjoint: identity };
 * const turned = insideOutOperator(operator, { pixels: 5, half_width_kms: 20 });
 * assertEquals(turned.image_size, 25);
 * ```
 */
export function insideOutOperator(operator: LinearOperator, shape: MapShape): LinearOperator {
  const { pixels } = shape;
  const table = turning(shape);
  const ordinary = new Float64Array(pixels * pixels);
  const turned = (inner: LinearOperator): LinearOperator => ({
    image_size: inner.image_size,
    sample_count: inner.sample_count,
    forward: (image, into) => inner.forward(turn(image, table, { pixels, into: ordinary }), into),
    adjoint: (samples, into = new Float64Array(pixels * pixels)) =>
      turnBack(inner.adjoint(samples, ordinary), table, { pixels, into }),
  });
  return {
    ...turned(operator),
    sparing: (weight) => turned(operator.sparing?.(weight) ?? operator),
  };
}
