import { type Binary, keplerianVelocity } from "../binary/mod.ts";
import type { CompleteModel } from "./model_parameters.ts";
import type { RimPlace } from "./rim_place.ts";
import { streamPath } from "./stream_path.ts";

/** Radius of the impact: the spot's own, or the disc's rim. */
export function impactRadius(model: CompleteModel): number {
  return model.spot.radius_over_a ?? model.disc.outer_radius_over_a;
}

/** The spot's brightest place, where the stream meets the rim. */
export function spotHead(model: CompleteModel, binary: Binary): RimPlace {
  const path = streamPath(binary.mass_ratio);
  const { x, y, vx, vy } = path.point(path.along(impactRadius(model)));
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
export function rimVelocity(
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
