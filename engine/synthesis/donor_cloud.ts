import { type Binary, corotationVelocity, type DonorSurface, donorSurface } from "../binary/mod.ts";
import { InputError } from "../errors.ts";
import type { CompleteModel } from "./model_parameters.ts";
import type { LocalProfile, PointCloud } from "./point_cloud.ts";
import { inclinationOf } from "./inclination.ts";

/** Phases over which the orbit's mean is taken: visibility is smooth, so few are enough. */
const MEAN_PHASES = 48;
const FEWEST_RINGS = 24;
const MOST_RINGS = 90;
const KEPT = 6;
const surfaces = new Map<string, DonorSurface>();

/** Tiles depend on the mass ratio alone and take milliseconds: those in use are kept. */
function tilesOf(mass_ratio: number, rings: number): DonorSurface {
  const key = `${mass_ratio} ${rings}`;
  let surface = surfaces.get(key);
  if (surface === undefined) {
    surface = donorSurface(mass_ratio, { rings });
    if (surfaces.size >= KEPT) surfaces.delete(surfaces.keys().next().value!);
    surfaces.set(key, surface);
  }
  return surface;
}

/**
 * The donor's surface as tiles. Irradiated: re-emission in proportion to the accretor's light that
 * falls on a tile, cos(incidence)/distance², none in the disc's shadow and none beyond the horizon
 * (Muñoz-Darias, Casares & Martínez-Pais 2005, ApJ 635, 502). Photospheric: absorption in proportion to the tile's
 * flux, ∝ g^4β (von Zeipel 1924, MNRAS 84, 665; Lucy 1967, Z. Astrophys. 65, 89), less the share
 * that heating quenches (Wade & Horne 1988, ApJ 324, 411). Either is seen as cos μ times the linear
 * law of limb darkening.
 */
export function donorCloud(
  model: CompleteModel,
  { binary, instrument_sigma_kms }: {
    readonly binary: Binary;
    readonly instrument_sigma_kms: number;
  },
): PointCloud {
  const { donor } = model;
  const sigma_kms = donor.template === null ? donor.sigma_kms : 0;
  const rings = ringsFor(binary, Math.hypot(sigma_kms, instrument_sigma_kms));
  const { count, position, normal, area, gravity } = tilesOf(binary.mass_ratio, rings);
  const heat = heatOf({ count, position, normal, area, gravity }, donor.disc_opening_deg, rings);
  const vx_kms = new Float64Array(count), vy_kms = new Float64Array(count);
  const light_kms = new Float64Array(count);
  for (let k = 0; k < count; k++) {
    const place = { x: position[3 * k]!, y: position[3 * k + 1]! };
    ({ vx_kms: vx_kms[k], vy_kms: vy_kms[k] } = corotationVelocity(place, binary));
    light_kms[k] = donor.light === "irradiated"
      ? area[k]! * heat.flux[k]!
      : -area[k]! * gravity[k]! ** (4 * donor.gravity_darkening) *
        (1 - donor.quenching * heat.lit[k]!);
  }

  const inclination = inclinationOf(binary) * Math.PI / 180;
  const sine = Math.sin(inclination), cosine = Math.cos(inclination);
  const limb = donor.limb_darkening;
  const brightness = (phase: number, share: Float64Array) => {
    const nx = sine * Math.cos(2 * Math.PI * phase), ny = -sine * Math.sin(2 * Math.PI * phase);
    for (let k = 0; k < count; k++) {
      const mu = nx * normal[3 * k]! + ny * normal[3 * k + 1]! + cosine * normal[3 * k + 2]!;
      share[k]! *= mu > 0 ? mu * (1 - limb + limb * mu) : 0;
    }
  };

  const mean = meanLight(light_kms, brightness);
  if (!(Math.abs(mean) > 0)) {
    throw new InputError({
      action: "build model",
      rule: "some of the donor's face must be lit and in sight",
      value: donor.disc_opening_deg,
      unit: "deg",
      key: "model.donor.disc_opening_deg",
      remedy: "use a smaller opening angle: this shadow covers the whole donor",
    });
  }
  for (let k = 0; k < count; k++) light_kms[k]! *= donor.equivalent_width_kms / Math.abs(mean);
  return {
    vx_kms,
    vy_kms,
    light_kms,
    sigma_kms,
    shift_kms: 0,
    place: null,
    brightness,
    profile: donor.template === null ? null : localProfile(donor.template, instrument_sigma_kms),
  };
}

/** Rings of tiles whose velocities are close enough for a Gaussian to blend them. */
function ringsFor(binary: Binary, sigma_kms: number): number {
  const radius_kms = 0.35 * (binary.k_accretor_kms + binary.k_donor_kms);
  const needed = Math.PI * radius_kms / (0.7 * sigma_kms);
  // Steps of a quarter keep the number of surfaces that are kept small.
  const step = 2 ** (Math.ceil(Math.log2(needed / FEWEST_RINGS) * 4) / 4);
  return Math.min(MOST_RINGS, Math.max(FEWEST_RINGS, Math.round(FEWEST_RINGS * step)));
}

/** Light that falls on each tile from the accretor, and the share of the tile that is lit. */
function heatOf(
  { count, position, normal }: DonorSurface,
  opening_deg: number,
  rings: number,
): { flux: Float64Array; lit: Float64Array } {
  const flux = new Float64Array(count), lit = new Float64Array(count);
  const opening = opening_deg * Math.PI / 180;
  for (let k = 0; k < count; k++) {
    const x = position[3 * k]!, y = position[3 * k + 1]!, z = position[3 * k + 2]!;
    const distance = Math.hypot(x, y, z);
    const incidence = -(x * normal[3 * k]! + y * normal[3 * k + 1]! + z * normal[3 * k + 2]!) /
      distance;
    if (incidence <= 0) continue;
    // Seen from the accretor a tile spans this angle: the shadow's edge crosses it gradually.
    const span = Math.hypot(x - 1, y, z) * Math.PI / rings / distance;
    const above = (Math.asin(Math.abs(z) / distance) - opening) / span;
    lit[k] = opening === 0 ? 1 : Math.max(0, Math.min(1, 0.5 + above));
    flux[k] = lit[k]! * incidence / (distance * distance);
  }
  return { flux, lit };
}

function meanLight(
  light: Float64Array,
  brightness: (phase: number, share: Float64Array) => void,
): number {
  const share = new Float64Array(light.length);
  let sum = 0;
  for (let p = 0; p < MEAN_PHASES; p++) {
    brightness((p + 0.5) / MEAN_PHASES, share.fill(1));
    for (let k = 0; k < light.length; k++) sum += light[k]! * share[k]!;
  }
  return sum / MEAN_PHASES;
}

/** A template as shares of light at even velocities, close enough to blend. */
function localProfile(
  template: NonNullable<CompleteModel["donor"]["template"]>,
  sigma_kms: number,
): LocalProfile {
  const { velocity_kms, depth } = template;
  const count = velocity_kms.length;
  for (let k = 0; k < count; k++) {
    const rising = k === 0 || velocity_kms[k]! > velocity_kms[k - 1]!;
    if (Number.isFinite(velocity_kms[k]) && Number.isFinite(depth[k]) && rising) continue;
    refuseTemplate("velocities must increase and depths be numbers", [velocity_kms[k], depth[k]]);
  }
  if (count < 2 || depth.length !== count) {
    refuseTemplate("it must have as many depths as velocities, and at least two", count);
  }
  const first = velocity_kms[0]!, last = velocity_kms[count - 1]!;
  const samples = Math.max(2, Math.ceil((last - first) / sigma_kms) + 1);
  const offset_kms = new Float64Array(samples), share = new Float64Array(samples);
  let sum = 0;
  for (let j = 0, k = 0; j < samples; j++) {
    const v = first + (last - first) * j / (samples - 1);
    while (k < count - 2 && velocity_kms[k + 1]! < v) k++;
    const t = (v - velocity_kms[k]!) / (velocity_kms[k + 1]! - velocity_kms[k]!);
    offset_kms[j] = v;
    share[j] = depth[k]! + t * (depth[k + 1]! - depth[k]!);
    sum += share[j]!;
  }
  if (!(Math.abs(sum) > 0)) refuseTemplate("its depths must not add up to nothing", sum);
  for (let j = 0; j < samples; j++) share[j]! /= sum;
  return { offset_kms, share };
}

function refuseTemplate(rule: string, value: unknown): never {
  throw new InputError({ action: "use line template", rule, value, key: "model.donor.template" });
}
