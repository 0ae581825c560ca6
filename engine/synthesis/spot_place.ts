import type { Binary } from "../binary/mod.ts";
import { completeModel } from "./complete_model.ts";
import type { Model } from "./model.ts";
import { spotHead } from "./rim_gas.ts";
import type { RimPlace } from "./rim_place.ts";

/**
 * Where the stream meets the rim, and how fast the spot's gas moves there: (1 − m) times the
 * stream's own velocity plus m times the rim's own (Marsh et al. 1990, ApJ 364, 637, find spots
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
