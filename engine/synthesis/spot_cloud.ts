import { type Binary, keplerianVelocity } from "../binary/mod.ts";
import { completeModel } from "./complete_model.ts";
import type { Model } from "./model.ts";
import type { CompleteModel } from "./model_parameters.ts";
import type { PointCloud } from "./point_cloud.ts";
import { legendre } from "./quadrature.ts";
import { streamPath } from "./stream_path.ts";

/** The tail is followed over this many of its lengths, and not farther than round the rim. */
const TAIL_LENGTHS = 8;
const TAIL_POINTS = 48;

/** Radius of the impact: the spot's own, or the disc's rim. */
export function impactRadius(model: CompleteModel): number {
  return model.spot.radius_over_a ?? model.disc.outer_radius_over_a;
}

/** A place on the rim and the velocity of its gas in map coordinates. */
export interface RimPlace {
  /** From the accretor towards the donor, a. */
  readonly x: number;
  /** Along the donor's orbital motion, a. */
  readonly y: number;
  /** Map coordinate, km/s. */
  readonly vx_kms: number;
  /** Map coordinate, km/s. */
  readonly vy_kms: number;
}

/**
 * Where the stream meets the rim, and how fast the spot's gas moves there: (1 − m) times the
 * stream's own velocity plus m times the rim's Keplerian one (Marsh 1990 and others place spots
 * between the two).
 *
 * @param model The model: rim, or the spot's own radius, and mixing.
 * @param binary The binary.
 * @returns The place, in units of the separation, and its velocity.
 * @throws {InputError} When the stream does not reach the rim.
 *
 * @example A spot with the stream's velocity is on the stream's path in the map
 * ```ts
 * import { spotPlace } from "@millrace/millrace/synthesis";
 * import { binaryFrom } from "@millrace/millrace/binary";
 * import { assertAlmostEquals } from "@std/assert";
 *
 * const binary = binaryFrom({ k_accretor_kms: 80, k_donor_kms: 320 });
 * const spot = spotPlace({ parts: ["spot"], disc: { outer_radius_over_a: 0.3 } }, binary);
 * assertAlmostEquals(Math.hypot(spot.x, spot.y), 0.3, 1e-9);
 * ```
 */
export function spotPlace(model: Model, binary: Binary): RimPlace {
  return spotHead(completeModel(model), binary);
}

function spotHead(model: CompleteModel, binary: Binary): RimPlace {
  const { x, y, vx, vy } = streamPath(binary.mass_ratio).at(impactRadius(model));
  const sum = binary.k_accretor_kms + binary.k_donor_kms;
  const { mixing } = model.spot;
  const rim = rimVelocity(model, { x, y }, binary);
  return {
    x,
    y,
    vx_kms: (1 - mixing) * sum * vx + mixing * rim.vx_kms,
    vy_kms: (1 - mixing) * sum * vy + mixing * rim.vy_kms,
  };
}

/** Velocity of the disc's own gas at a place, sub-Keplerian where the disc is. */
function rimVelocity(
  model: CompleteModel,
  place: { readonly x: number; readonly y: number },
  binary: Binary,
): { vx_kms: number; vy_kms: number } {
  const kepler = keplerianVelocity(place, binary);
  const f = model.disc.keplerian_factor;
  return {
    vx_kms: f * kepler.vx_kms,
    vy_kms: f * (kepler.vy_kms + binary.k_accretor_kms) - binary.k_accretor_kms,
  };
}

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
    brightness: beaming === 0 ? null : (phase, share) => {
      const factor = 1 + beaming * Math.cos(2 * Math.PI * (phase - beaming_phase));
      for (let k = 0; k < count; k++) share[k]! *= factor;
    },
  };
}
