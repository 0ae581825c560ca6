import { type Binary, lagrangePoints, lobeRadiusEggleton, tidalRadius } from "../binary/mod.ts";
import { InputError, type Warning } from "../errors.ts";
import { accretorRadius } from "./accretor_radius.ts";
import { completeModel } from "./complete_model.ts";
import { inclinationOf } from "./inclination.ts";
import type { Model } from "./model.ts";
import type { CompleteModel } from "./model_parameters.ts";
import { impactRadius } from "./rim_gas.ts";
import { streamPath } from "./stream_path.ts";

/** Rims and spots are taken to meet within this share of the radius. */
const TOUCHING = 0.01;

/**
 * Holds a model against physics before it is used: refuses what cannot be, warns of what is
 * doubtful.
 *
 * @param model The model.
 * @param binary The binary.
 * @returns Warnings; none for a model without doubts.
 * @throws {InputError} When the model cannot be: a disc beyond the accretor's Roche lobe or inside
 * out, a spot off the rim or out of the stream's reach, shares of the continuum above one, an
 * inclination that a part needs and that is not known.
 *
 * @example
 * ```ts
 * import { checkModel } from "@millrace/millrace/synthesis";
 * import { binaryFrom } from "@millrace/millrace/binary";
 * import { assertEquals, assertThrows } from "@std/assert";
 *
 * const binary = binaryFrom({ k_accretor_kms: 70, k_donor_kms: 320 });
 * assertEquals(checkModel({ parts: ["disc", "spot"] }, binary), []);
 * const disc = { outer_radius_over_a: 0.6 };
 * assertThrows(() => checkModel({ parts: ["disc"], disc }, binary), Error, "Roche lobe");
 * ```
 */
export function checkModel(model: Model, binary: Binary): Warning[] {
  const complete = completeModel(model);
  requirePossible(complete, binary);
  return doubts(complete, binary);
}

/** Throws when a model cannot be. */
export function requirePossible(model: CompleteModel, binary: Binary): void {
  const { parts, disc, spot, eclipse } = model;
  const shines = (part: typeof parts[number]) => parts.includes(part);
  if (disc.inner_radius_over_a >= disc.outer_radius_over_a) {
    refuse("model.disc.inner_radius_over_a", disc.inner_radius_over_a, {
      rule: `the inner radius must be below the outer one, ${disc.outer_radius_over_a} a`,
      unit: "a",
    });
  }
  // By Eggleton's formula, within one per cent of the exact radius.
  const lobe = lobeRadiusEggleton(1 / binary.mass_ratio);
  const edge = disc.outer_radius_over_a * (1 + disc.eccentricity);
  if ((shines("disc") || shines("spot")) && edge > lobe) {
    refuse("model.disc.outer_radius_over_a", disc.outer_radius_over_a, {
      rule: `the disc must lie within the accretor's Roche lobe, whose radius is ${
        lobe.toFixed(4)
      } a (at apastron it reaches ${edge.toFixed(4)} a)`,
      unit: "a",
    });
  }
  const patterns = disc.one_armed_amplitude + disc.two_armed_amplitude;
  if (patterns > 1) {
    refuse("model.disc.two_armed_amplitude", disc.two_armed_amplitude, {
      rule: `the amplitudes of both patterns must add up to 1 at most, and they are ${patterns}: ` +
        "brightness would be negative",
    });
  }
  if (disc.core_equivalent_width_kms > 0 && disc.core_radius_over_a > disc.outer_radius_over_a) {
    refuse("model.disc.core_radius_over_a", disc.core_radius_over_a, {
      rule: `the core's radius must not exceed the disc's, ${disc.outer_radius_over_a} a`,
      unit: "a",
    });
  }
  if (shines("spot")) {
    const radius = impactRadius(model);
    const key = spot.radius_over_a === null
      ? "model.disc.outer_radius_over_a"
      : "model.spot.radius_over_a";
    const { closest_over_a } = streamPath(binary.mass_ratio);
    const { l1_over_a } = lagrangePoints(binary.mass_ratio);
    if (radius < closest_over_a || radius > l1_over_a - 2e-4) {
      refuse(key, radius, {
        rule: `the spot must lie on the stream, which runs from L1 at ${l1_over_a.toFixed(4)} a ` +
          `to its closest approach at ${closest_over_a.toFixed(4)} a`,
        unit: "a",
      });
    }
    if (shines("disc") && radius > disc.outer_radius_over_a * (1 + TOUCHING)) {
      refuse(key, radius, {
        rule: `the spot must not lie off the disc's rim at ${disc.outer_radius_over_a} a`,
        unit: "a",
        remedy: "leave out the spot's radius to put it on the rim",
      });
    }
  }
  if (shines("donor")) inclinationOf(binary);
  if (!eclipse.enabled) return;
  inclinationOf(binary);
  const share = eclipse.continuum_accretor + eclipse.continuum_disc + eclipse.continuum_spot;
  if (share > 0.999) {
    refuse("model.eclipse.continuum_disc", share, {
      rule: "the shares of accretor, disc and spot in the continuum must add up to less than 1",
      remedy: "the rest is the donor's, and is all that is left at mid-eclipse",
    });
  }
}

function doubts(model: CompleteModel, binary: Binary): Warning[] {
  const { parts, disc, spot, outflow } = model;
  const warnings: Warning[] = [];
  const warn = (code: string, text: string) => warnings.push({ code, text });
  if (parts.includes("disc")) {
    const edge = disc.outer_radius_over_a * (1 + disc.eccentricity);
    const tidal = tidalRadius(binary.mass_ratio);
    if (tidal !== null && edge > tidal) {
      warn(
        "disc-beyond-tidal-radius",
        `The disc reaches ${edge.toFixed(3)} a, beyond the tidal radius of ${tidal.toFixed(3)} a.`,
      );
    }
    const surface = accretorRadius(binary);
    if (surface !== null && disc.inner_radius_over_a * (1 - disc.eccentricity) < surface.over_a) {
      warn(
        "inner-radius-below-accretor",
        `The disc's inner radius of ${disc.inner_radius_over_a} a is below ${surface.what}, ` +
          `${surface.over_a.toPrecision(3)} a.`,
      );
    }
    if (disc.keplerian_factor < 0.8 || disc.keplerian_factor > 1.02) {
      warn(
        "rotation-far-from-keplerian",
        `Rotation at ${disc.keplerian_factor} of the Keplerian speed is outside 0.8 to 1.02.`,
      );
    }
    if (disc.emissivity_index < 0 || disc.emissivity_index > 3) {
      warn(
        "emissivity-index-unusual",
        `An emissivity r^-${disc.emissivity_index} is outside the observed range of indices, 0 to 3.`,
      );
    }
    const { inclination_deg } = binary;
    if (disc.optical_depth === "thick" && inclination_deg !== null && inclination_deg > 85) {
      warn(
        "thick-disc-edge-on",
        `Shear broadening diverges towards 90 deg: at ${inclination_deg} deg the disc's height counts.`,
      );
    }
  }
  if (
    parts.includes("spot") && parts.includes("disc") && spot.radius_over_a !== null &&
    spot.radius_over_a < disc.outer_radius_over_a * (1 - TOUCHING)
  ) {
    warn(
      "spot-inside-rim",
      `The spot at ${spot.radius_over_a} a is inside the rim at ${disc.outer_radius_over_a} a: the stream would flow over the disc.`,
    );
  }
  const depth = outflow.trough_equivalent_width_kms /
    (Math.sqrt(2 * Math.PI) * outflow.trough_sigma_kms);
  if (parts.includes("outflow") && depth > 1) {
    warn(
      "trough-below-zero",
      `The outflow's trough takes ${depth.toFixed(2)} of the continuum at its deepest.`,
    );
  }
  return warnings;
}

function refuse(
  key: string,
  value: number,
  { rule, unit, remedy }: { rule: string; unit?: string; remedy?: string },
): never {
  throw new InputError({
    action: "build model",
    rule,
    value,
    key,
    ...(unit === undefined ? {} : { unit }),
    ...(remedy === undefined ? {} : { remedy }),
  });
}
