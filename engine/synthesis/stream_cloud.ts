import type { Binary } from "../binary/mod.ts";
import { InputError } from "../errors.ts";
import type { CompleteModel } from "./model_parameters.ts";
import type { PointCloud } from "./point_cloud.ts";
import { legendre } from "./quadrature.ts";
import { streamPath } from "./stream_path.ts";

/** Points on each piece of the path, before and beyond the rim. */
const POINTS = 64;

/**
 * The stream (Lubow & Shu 1975, ApJ 198, 383) as light along its ballistic path: brightness per
 * unit length ∝ r^−n, and beyond the rim, where part of it may flow over the disc (Lubow & Shu 1976,
 * ApJ 207, L53), a stated share of the same law. The gas keeps its ballistic velocity.
 */
export function streamCloud(model: CompleteModel, binary: Binary): PointCloud {
  const { stream, disc } = model;
  const path = streamPath(binary.mass_ratio);
  const rim = disc.outer_radius_over_a;
  const from = stream.from_radius_over_a ?? path.start_over_a;
  const end = stream.overflow_radius_over_a ?? path.closest_over_a;
  const free = { from, to: Math.max(rim, path.closest_over_a), share: 1 };
  const over = { from: Math.min(from, rim), to: end, share: stream.overflow };
  const pieces = [free, over].filter(({ from, to, share }) => from > to && share > 0);
  if (pieces.length === 0) {
    throw new InputError({
      action: "build model",
      rule: "the stream must begin outside the disc's rim, unless it flows over it",
      value: from,
      unit: "a",
      key: "model.stream.from_radius_over_a",
      remedy: "begin it farther out, or state an overflow",
    });
  }
  const count = POINTS * pieces.length;
  const x = new Float64Array(count), y = new Float64Array(count);
  const vx_kms = new Float64Array(count), vy_kms = new Float64Array(count);
  const light_kms = new Float64Array(count);
  const sum = binary.k_accretor_kms + binary.k_donor_kms;
  const { nodes, weights } = legendre(POINTS);
  let total = 0;
  for (const [p, { from, to, share }] of pieces.entries()) {
    const [low, high] = [path.along(from), path.along(to)];
    for (let j = 0; j < POINTS; j++) {
      const k = p * POINTS + j;
      const { x: px, y: py, vx, vy, length } = path.point(low + (high - low) * (1 + nodes[j]!) / 2);
      x[k] = px;
      y[k] = py;
      vx_kms[k] = sum * vx;
      vy_kms[k] = sum * vy;
      const radius = Math.hypot(px, py);
      light_kms[k] = weights[j]! * (high - low) * length * share *
        radius ** -stream.brightness_index;
      total += light_kms[k]!;
    }
  }
  for (let k = 0; k < count; k++) light_kms[k]! *= stream.equivalent_width_kms / total;
  return {
    vx_kms,
    vy_kms,
    light_kms,
    sigma_kms: stream.sigma_kms,
    shift_kms: 0,
    place: { x, y, z: new Float64Array(count) },
    brightness: null,
    profile: null,
  };
}
