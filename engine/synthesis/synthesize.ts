import type { Binary } from "../binary/mod.ts";
import { InputError } from "../errors.ts";
import { shiftVelocities, systemFrame } from "../tomography/mod.ts";
import type { Sampling } from "../trail/mod.ts";
import { requirePossible } from "./check_model.ts";
import { completeModel } from "./complete_model.ts";
import { continuumLight } from "./continuum_light.ts";
import { donorOccultation } from "./eclipse.ts";
import { inclinationOf } from "./inclination.ts";
import type { Model, PartName } from "./model.ts";
import { prepareEmission } from "./prepare_emission.ts";

/** Options of {@linkcode synthesize}. */
export interface SynthesisOptions {
  /** The binary: mass ratio, orbital speeds and, where a part needs it, inclination. */
  readonly binary: Binary;
  /** Exposures: phases, durations, pixels and instrumental profiles. */
  readonly sampling: Sampling;
  /**
   * Systemic velocity γ, km/s; applied as a factor on the wavelength.
   *
   * @default {0}
   */
  readonly systemic_kms?: number;
}

/**
 * The trail that a model predicts: normalised flux minus one at the centre of every native pixel,
 * through each exposure's Gaussian profile (which includes the pixel) and averaged over its
 * duration. Good to 1e-4 of a part's peak.
 *
 * @param model The model.
 * @param options The binary and the exposures.
 * @returns One value per sample, laid out as `sampling.velocity_kms`.
 * @throws {InputError} When the model cannot be, or the sampling has no resolution.
 *
 * @example The area of a disc's profile is its equivalent width
 * ```ts
 * import { synthesize } from "@millrace/millrace/synthesis";
 * import { binaryFrom } from "@millrace/millrace/binary";
 * import { assertAlmostEquals } from "@std/assert";
 *
 * const velocity_kms = Float64Array.from({ length: 401 }, (_, k) => 20 * (k - 200));
 * const sampling = {
 *   count: 1,
 *   phase: Float64Array.of(0.1),
 *   cycle: Float64Array.of(0),
 *   phase_width: Float64Array.of(0.02),
 *   start: Uint32Array.of(0, 401),
 *   velocity_kms,
 *   pixel_kms: new Float64Array(401).fill(20),
 *   profile_sigma_kms: Float64Array.of(40),
 * };
 * const binary = binaryFrom({ k_accretor_kms: 70, k_donor_kms: 320 });
 * const model = { parts: ["disc"], disc: { equivalent_width_kms: 2500 } } as const;
 * const flux = synthesize(model, { binary, sampling });
 * assertAlmostEquals(flux.reduce((sum, f) => sum + 20 * f, 0), 2500, 0.01);
 * ```
 */
export function synthesize(model: Model, options: SynthesisOptions): Float64Array {
  const parts = synthesizeParts(model, options);
  const sum = new Float64Array(options.sampling.velocity_kms.length);
  for (const flux of parts.values()) {
    for (let n = 0; n < sum.length; n++) sum[n]! += flux[n]!;
  }
  return sum;
}

/**
 * The trail of each part of a model by itself; see {@linkcode synthesize}. Each is proportional to
 * its part's equivalent width.
 *
 * @param model The model.
 * @param options The binary and the exposures.
 * @returns One array of samples per part, in the order in which parts are summed.
 * @throws {InputError} As {@linkcode synthesize}.
 *
 * @example
 * ```ts
 * import { synthesizeParts } from "@millrace/millrace/synthesis";
 * import { binaryFrom } from "@millrace/millrace/binary";
 * import { assertEquals } from "@std/assert";
 *
 * const sampling = {
 *   count: 1,
 *   phase: Float64Array.of(0),
 *   cycle: Float64Array.of(0),
 *   phase_width: Float64Array.of(0),
 *   start: Uint32Array.of(0, 2),
 *   velocity_kms: Float64Array.of(-500, 500),
 *   pixel_kms: Float64Array.of(20, 20),
 *   profile_sigma_kms: Float64Array.of(40),
 * };
 * const binary = binaryFrom({ k_accretor_kms: 70, k_donor_kms: 320 });
 * const trails = synthesizeParts({ parts: ["spot", "disc"] }, { binary, sampling });
 * assertEquals([...trails.keys()], ["disc", "spot"]);
 * ```
 */
export function synthesizeParts(
  model: Model,
  options: SynthesisOptions,
): Map<PartName, Float64Array> {
  const { binary, sampling, systemic_kms = 0 } = options;
  const complete = completeModel(model);
  requirePossible(complete, binary);
  const frame = systemFrame(systemic_kms);
  const velocity = shiftVelocities(sampling.velocity_kms, frame);
  const sigma = sampling.profile_sigma_kms.map((value, i) => {
    if (value > 0 && value < Infinity) return value * frame.factor;
    throw new InputError({
      action: "synthesize trail",
      rule: `the resolution of exposure ${i + 1} must be known and positive`,
      value,
      unit: "km/s",
    });
  });
  const finest = sigma.reduce((a, b) => Math.min(a, b), Infinity);
  const occultation = complete.eclipse.enabled
    ? donorOccultation(binary.mass_ratio, inclinationOf(binary))
    : null;
  const context = { binary, instrument_sigma_kms: finest, occultation };
  const in_sight = occultation === null ? null : continuumLight(complete, { binary, occultation });
  const trails = new Map<PartName, Float64Array>();
  for (const part of complete.parts) {
    const emission = prepareEmission(part, complete, context);
    const into = new Float64Array(velocity.length);
    for (let i = 0; i < sampling.count; i++) {
      emission.addTo({
        phase: sampling.phase[i]!,
        phase_width: sampling.phase_width[i]!,
        sigma_kms: sigma[i]!,
        velocity,
        from: sampling.start[i]!,
        to: sampling.start[i + 1]!,
        into,
      });
      if (in_sight === null) continue;
      // The observer divides by the continuum that is left.
      const left = in_sight(sampling.phase[i]!, sampling.phase_width[i]!);
      for (let n = sampling.start[i]!; n < sampling.start[i + 1]!; n++) into[n]! /= left;
    }
    trails.set(part, into);
  }
  return trails;
}
