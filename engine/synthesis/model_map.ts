import type { Binary } from "../binary/mod.ts";
import type { Warning } from "../errors.ts";
import { checkMapShape, mapStep, type VelocityMap } from "../tomography/mod.ts";
import { requirePossible } from "./check_model.ts";
import { completeModel } from "./complete_model.ts";
import type { Model, PartName } from "./model.ts";
import { prepareEmission } from "./prepare_emission.ts";

/** Options of {@linkcode modelMap}. */
export interface ModelMapOptions {
  /** The binary. */
  readonly binary: Binary;
  /** Pixels along each side, odd. @default {201} */
  readonly pixels?: number;
  /** Velocity of the centre of the outermost pixel, km/s. @default {2000} */
  readonly half_width_kms?: number;
}

/** A model in velocity space. */
export interface ModelMap {
  /** Intensity of the parts that have a map. */
  readonly map: VelocityMap;
  /** Parts that are in it. */
  readonly parts: readonly PartName[];
  /** One warning for each part that no fixed map can stand for, with the reason. */
  readonly warnings: readonly Warning[];
}

/**
 * A model's intensity in velocity space: each part that keeps its brightness at all phases. Seen
 * through the projector it makes the trail of {@linkcode synthesize}, to the error of the map's
 * sampling: compact parts are no narrower than 0.7 of a pixel, and a disc is averaged over pixels.
 *
 * @param model The model.
 * @param options The binary and the map's size.
 * @returns The map, and what is not in it.
 * @throws {InputError} When the model or the map's shape cannot be.
 *
 * @example The light of the map is the equivalent width
 * ```ts
 * import { modelMap } from "@millrace/millrace/synthesis";
 * import { binaryFrom } from "@millrace/millrace/binary";
 * import { assertAlmostEquals } from "@std/assert";
 *
 * const binary = binaryFrom({ k_accretor_kms: 70, k_donor_kms: 320 });
 * const model = { parts: ["spot"], spot: { equivalent_width_kms: 300 } } as const;
 * const { map } = modelMap(model, { binary, pixels: 101, half_width_kms: 1500 });
 * assertAlmostEquals(map.intensity.reduce((a, b) => a + b) * 30 ** 2, 300, 1e-3);
 * ```
 */
export function modelMap(model: Model, options: ModelMapOptions): ModelMap {
  const { binary, pixels = 201, half_width_kms = 2000 } = options;
  checkMapShape({ pixels, half_width_kms });
  const complete = completeModel(model);
  requirePossible(complete, binary);
  const map: VelocityMap = {
    pixels,
    half_width_kms,
    intensity: new Float64Array(pixels * pixels),
  };
  const parts: PartName[] = [];
  const warnings: Warning[] = [];
  for (const part of complete.parts) {
    const emission = prepareEmission(part, complete, {
      binary,
      // Points of a disc on elliptical orbits are as close as the map's narrowest Gaussian asks.
      instrument_sigma_kms: 0.7 * mapStep(map),
      occultation: null,
    });
    if (emission.no_map === null) {
      emission.addToMap(map);
      parts.push(part);
    } else {
      warnings.push({
        code: "part-without-map",
        text: `No fixed map stands for the ${part}: ${emission.no_map}.`,
      });
    }
  }
  if (complete.eclipse.enabled && parts.length > 0) {
    warnings.push({
      code: "eclipse-not-in-map",
      text: "The map shows the light out of eclipse: no fixed map stands for an eclipse.",
    });
  }
  return { map, parts, warnings };
}
