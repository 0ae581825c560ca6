import type { Binary } from "../binary/mod.ts";
import type { CompleteModel } from "./model_parameters.ts";
import type { PointCloud } from "./point_cloud.ts";
import { legendre } from "./quadrature.ts";
import { rimVelocity, spotHead } from "./rim_gas.ts";

/** The tail is followed over this many of its lengths, and not farther than round the rim. */
const TAIL_LENGTHS = 8;
const TAIL_POINTS = 48;

/**
 * The bright spot. Its tail runs along the rim in the sense of rotation, fading by e over
 * `tail_deg`, while what is left of the stream's excess velocity fades with it.
 */
export function spotCloud(model: CompleteModel, binary: Binary): PointCloud {
  const { equivalent_width_kms, sigma_kms, tail_deg, beaming, beaming_phase } = model.spot;
  const head = spotHead(model, binary);
  const rim = rimVelocity(model, head, binary);
  const excess = { x: head.vx_kms - rim.vx_kms, y: head.vy_kms - rim.vy_kms };
  const tail = tail_deg * Math.PI / 180;
  const reach = Math.min(2 * Math.PI, TAIL_LENGTHS * tail);
  const { nodes, weights } = legendre(TAIL_POINTS);
  const count = tail === 0 ? 1 : TAIL_POINTS;
  const x = new Float64Array(count), y = new Float64Array(count);
  const vx_kms = new Float64Array(count), vy_kms = new Float64Array(count);
  const light_kms = new Float64Array(count);
  let total = 0;
  for (let k = 0; k < count; k++) {
    const along = tail === 0 ? 0 : reach * (1 + nodes[k]!) / 2;
    const fade = tail === 0 ? 1 : Math.exp(-along / tail);
    const cos = Math.cos(along), sin = Math.sin(along);
    x[k] = head.x * cos - head.y * sin;
    y[k] = head.x * sin + head.y * cos;
    const local = rimVelocity(model, { x: x[k]!, y: y[k]! }, binary);
    vx_kms[k] = local.vx_kms + fade * (excess.x * cos - excess.y * sin);
    vy_kms[k] = local.vy_kms + fade * (excess.x * sin + excess.y * cos);
    light_kms[k] = fade * (tail === 0 ? 1 : weights[k]!);
    total += light_kms[k]!;
  }
  for (let k = 0; k < count; k++) light_kms[k]! *= equivalent_width_kms / total;
  return {
    vx_kms,
    vy_kms,
    light_kms,
    sigma_kms,
    shift_kms: 0,
    place: { x, y, z: new Float64Array(count) },
    profile: null,
    brightness: beaming === 0 ? null : (phase, share) => {
      const factor = 1 + beaming * Math.cos(2 * Math.PI * (phase - beaming_phase));
      for (let k = 0; k < count; k++) share[k]! *= factor;
    },
  };
}
