import { donorMassFraction, donorSurface } from "../binary/mod.ts";
import { InputError } from "../errors.ts";

/**
 * Where a donor's line comes from: the whole surface ("photosphere"), the face that the accretor
 * irradiates ("irradiated": emission), or the surface but for that face ("quenched": absorption).
 */
export type DonorLight = "photosphere" | "irradiated" | "quenched";

/** Options of {@linkcode kCorrection}. */
export interface KCorrectionOptions {
  /** Where the line comes from. */
  readonly light: DonorLight;
  /** Angle above the orbital plane up to which the disc shadows the donor, degrees. @default {0} */
  readonly shadow_deg?: number;
  /** Inclination, degrees; it matters little. @default {60} */
  readonly inclination_deg?: number;
  /** Radius of the donor towards L1 over its lobe's. @default {1} */
  readonly filling?: number;
}

/** K-corrections for no shadow and for the widest that leaves any light. */
export interface KCorrectionRange {
  /** K of the line over K2 without a disc's shadow. */
  readonly unshadowed: number;
  /** The same when the shadow leaves only the last irradiated ring. */
  readonly shadowed: number;
  /** Shadow angle at which that is, degrees. */
  readonly shadow_limit_deg: number;
}

const PHASES = 36;
const RINGS = 40;

/** Light of each tile at equal aspect, and the height of each above the plane as the accretor sees it. */
function lightOf(mass_ratio: number, options: KCorrectionOptions) {
  const { light, shadow_deg = 0, filling = 1 } = options;
  const surface = donorSurface(mass_ratio, { rings: RINGS, filling });
  const { count, position, normal, area } = surface;
  const glow = new Float64Array(count);
  let highest = 0;
  for (let k = 0; k < count; k++) {
    const [x, y, z] = position.slice(3 * k, 3 * k + 3) as unknown as [number, number, number];
    const distance = Math.hypot(x, y, z);
    const facing = -(normal[3 * k]! * x + normal[3 * k + 1]! * y + normal[3 * k + 2]! * z) /
      distance;
    const height = Math.asin(Math.abs(z) / distance) * 180 / Math.PI;
    if (facing > 0) highest = Math.max(highest, height);
    const lit = facing > 0 && height >= shadow_deg;
    if (light === "irradiated") glow[k] = lit ? facing / distance ** 2 * area[k]! : 0;
    else glow[k] = light === "quenched" && lit ? 0 : area[k]!;
  }
  return { surface, glow, highest };
}

/**
 * K of a line from the donor over the K2 of its centre of mass, for light that is not spread evenly
 * over the star (Wade & Horne 1988, ApJ 324, 411; Muñoz-Darias, Casares & Martínez-Pais 2005, ApJ
 * 635, 502). Irradiated emission comes from the inner face, which moves more slowly: below 1;
 * absorption quenched there gives more than 1.
 *
 * The donor fills its lobe; tiles shine as opaque surfaces (Lambert's law), irradiated ones in
 * proportion to the light they receive from the accretor's place above the disc's shadow. The
 * centroid's velocity is followed around the orbit and a sinusoid fitted with the weights of the
 * line's strength squared. Occultation by the disc is left out.
 *
 * @param mass_ratio q = M2/M1.
 * @param options Where the light comes from, shadow, inclination.
 * @returns K observed over K2: divide by it.
 * @throws {InputError} When the mass ratio or an angle is out of range, or the shadow leaves no light.
 *
 * @example
 * ```ts
 * import { kCorrection } from "@millrace/millrace/orbit";
 * import { assert, assertAlmostEquals } from "@std/assert";
 *
 * assert(kCorrection(0.3, { light: "irradiated" }) < 0.75);
 * assert(kCorrection(0.3, { light: "quenched" }) > 1);
 * // The light of the whole surface hardly differs from the centre of mass.
 * assertAlmostEquals(kCorrection(0.3, { light: "photosphere" }), 1, 0.02);
 * ```
 */
export function kCorrection(mass_ratio: number, options: KCorrectionOptions): number {
  const { shadow_deg = 0, inclination_deg = 60 } = options;
  for (const [key, value] of Object.entries({ shadow_deg, inclination_deg })) {
    if (value >= 0 && value <= 90) continue;
    throw new InputError({
      action: "compute K-correction",
      rule: `${key} must be in [0, 90] deg`,
      value,
      unit: "deg",
      key,
    });
  }
  const { surface, glow, highest } = lightOf(mass_ratio, options);
  if (!glow.some((g) => g > 0)) {
    throw new InputError({
      action: "compute K-correction",
      rule: `the shadow must leave some of the donor lit: below ${highest.toFixed(1)} deg here`,
      value: shadow_deg,
      unit: "deg",
      key: "shadow_deg",
    });
  }
  const mu = donorMassFraction(mass_ratio);
  const tilt = inclination_deg * Math.PI / 180;
  const { count, position, normal } = surface;
  let top = 0, bottom = 0;
  for (let step = 0; step < PHASES; step++) {
    const angle = 2 * Math.PI * (step + 0.5) / PHASES;
    const c = Math.cos(angle), s = Math.sin(angle);
    const towards = [Math.sin(tilt) * c, -Math.sin(tilt) * s, Math.cos(tilt)] as const;
    let flux = 0, moment = 0;
    for (let k = 0; k < count; k++) {
      const seen = normal[3 * k]! * towards[0] + normal[3 * k + 1]! * towards[1] +
        normal[3 * k + 2]! * towards[2];
      if (seen <= 0 || glow[k] === 0) continue;
      // Vx = −y, Vy = x − μ of matter that turns with the binary.
      const v = position[3 * k + 1]! * c + (position[3 * k]! - mu) * s;
      flux += seen * glow[k]!;
      moment += seen * glow[k]! * v;
    }
    // Weights flux²: the velocity's error goes as one over the line's strength.
    top += flux * moment * s;
    bottom += flux * flux * s * s;
  }
  return top / bottom * (1 + mass_ratio);
}

/**
 * The range of the K-correction when the disc's shadow is not known.
 *
 * @param mass_ratio q = M2/M1.
 * @param options Where the light comes from, inclination.
 * @returns Both ends.
 * @throws {InputError} When the mass ratio or the inclination is out of range.
 *
 * @example
 * ```ts
 * import { kCorrectionRange } from "@millrace/millrace/orbit";
 * import { assert } from "@std/assert";
 *
 * const { unshadowed, shadowed } = kCorrectionRange(0.3, { light: "irradiated" });
 * assert(unshadowed < shadowed && shadowed < 1);
 * ```
 */
export function kCorrectionRange(
  mass_ratio: number,
  options: Omit<KCorrectionOptions, "shadow_deg">,
): KCorrectionRange {
  const { highest } = lightOf(mass_ratio, { ...options, light: "irradiated", shadow_deg: 0 });
  const shadow_limit_deg = 0.98 * highest;
  return {
    unshadowed: kCorrection(mass_ratio, options),
    shadowed: kCorrection(mass_ratio, { ...options, shadow_deg: shadow_limit_deg }),
    shadow_limit_deg,
  };
}
