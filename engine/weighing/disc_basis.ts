import { type Binary, keplerianSpeed } from "../binary/mod.ts";
import { type CompleteModel, type Model, synthesizeParts } from "../synthesis/mod.ts";
import { panelled, systemFrame } from "../tomography/mod.ts";
import type { Sampling } from "../trail/mod.ts";
import { blurHalfAxis, wholeAxis } from "./blur_half_axis.ts";
import { discHarmonics } from "./disc_harmonics.ts";
import { type RingTable, ringTable } from "./ring_table.ts";

/** What a part's templates are made for. */
export interface TemplateContext {
  /** Exposures and pixels. */
  readonly sampling: Sampling;
  /** Geometry of the binary. */
  readonly binary: Binary;
  /** Systemic velocity, km/s. */
  readonly systemic_kms: number;
  /** Highest order m of the disc's asymmetry, 0 to 2. */
  readonly asymmetry: 0 | 1 | 2;
  /**
   * Tables of rings, kept from call to call by their grid: a fit uses the same ones over and over.
   *
   * @default None are kept
   */
  readonly rings?: Map<string, RingTable>;
}

/** Widths of instrumental profiles that differ by less than this are taken as one. */
const SAME_SIGMA = 2e-3;
/** Grids are made to these steps, so that a little change of geometry keeps a grid: in velocity, and relative. */
const REACH_STEP_KMS = 50;
const SIGMA_STEP = 0.01;
/** Grids that are kept. */
const KEPT = 3;

/**
 * Templates of a disc of unit equivalent width: the axisymmetric one, then those whose surface
 * brightness is cos θ, sin θ, cos 2θ, sin 2θ times as much, as far as wanted. Summed with
 * amplitudes they make any disc with straight one- and two-armed patterns.
 *
 * @param model The model, of which the disc counts.
 * @param context For what.
 * @returns 1, 3 or 5 trails, laid out as the sampling.
 */
export function discBasis(model: CompleteModel, context: TemplateContext): Float64Array[] {
  const { disc, eclipse } = model;
  const plain = disc.optical_depth === "thin" && disc.eccentricity === 0 &&
    disc.turbulence_index === 0 && disc.core_equivalent_width_kms === 0 && !eclipse.enabled;
  return plain ? thinDiscBasis(disc, context) : generalDiscBasis(model, context);
}

/** Any disc, by differences of whole syntheses: slow. */
export function generalDiscBasis(model: CompleteModel, context: TemplateContext): Float64Array[] {
  const { asymmetry } = context;
  const { disc } = model;
  const trail = (change: Model["disc"]) => {
    const changed = {
      ...disc,
      equivalent_width_kms: 1,
      one_armed_amplitude: 0,
      two_armed_amplitude: 0,
      two_armed_pitch_deg: 90,
      // The core is a share of the disc: it scales with it.
      core_equivalent_width_kms: disc.core_equivalent_width_kms / disc.equivalent_width_kms,
      ...change,
    };
    return synthesizeParts({ ...model, parts: ["disc"], disc: changed }, context).get("disc")!;
  };
  const even = trail({});
  const patterns: Model["disc"][] = [];
  if (asymmetry >= 1) {
    patterns.push({ one_armed_amplitude: 1, one_armed_deg: 0 });
    patterns.push({ one_armed_amplitude: 1, one_armed_deg: 90 });
  }
  if (asymmetry >= 2) {
    patterns.push({ two_armed_amplitude: 1, two_armed_deg: 0 });
    patterns.push({ two_armed_amplitude: 1, two_armed_deg: 45 });
  }
  return [even, ...patterns.map((pattern) => trail(pattern).map((value, n) => value - even[n]!))];
}

/** A transparent circular disc, by tables of its harmonics in the accretor's frame: fast. */
export function thinDiscBasis(
  disc: CompleteModel["disc"],
  context: TemplateContext,
): Float64Array[] {
  const { sampling, binary, systemic_kms, asymmetry } = context;
  const frame = systemFrame(systemic_kms);
  const { start, count, phase, phase_width, velocity_kms: velocity } = sampling;
  const k1 = binary.k_accretor_kms;
  const shape = {
    rim_kms: disc.keplerian_factor * keplerianSpeed(disc.outer_radius_over_a, binary),
    inner_over_outer: disc.inner_radius_over_a / disc.outer_radius_over_a,
    emissivity_index: disc.emissivity_index,
  };
  const sigmas = sampling.profile_sigma_kms.map((sigma) =>
    Math.hypot(sigma * frame.factor, disc.turbulence_kms)
  );
  let fastest = 0;
  for (let n = 0; n < velocity.length; n++) {
    fastest = Math.max(fastest, Math.abs(frame.offset_kms + frame.factor * velocity[n]!));
  }
  const widest = sigmas.reduce((a, b) => Math.max(a, b));
  const table = ringsFor(context, { reach_kms: fastest + k1 + 6 * widest });
  const harmonics = discHarmonics(shape, table);
  const { step_kms } = table;

  const tables = new Map<number, ReturnType<typeof blurAll>>();
  const blurAll = (sigma: number) => {
    // Rings are blurred with somewhat less than the narrowest profile; the rest is here.
    const variance = Math.max(0, sigma ** 2 - table.sigma_kms ** 2) / step_kms ** 2;
    const blur = (values: Float64Array, odd: boolean) =>
      wholeAxis(blurHalfAxis(values, { variance, odd }), { odd });
    return {
      even0: blur(harmonics.even0, false),
      odd1: asymmetry >= 1 ? blur(harmonics.odd1, true) : null,
      even2: asymmetry >= 2 ? blur(harmonics.even2, false) : null,
    };
  };
  const tablesOf = (sigma: number) => {
    const level = Math.round(Math.log(sigma) / SAME_SIGMA);
    const known = tables.get(level);
    if (known !== undefined) return known;
    const made = blurAll(sigma);
    tables.set(level, made);
    return made;
  };

  const known = new Map<number, ReturnType<typeof instants>>();
  const instantsOf = (width: number) => {
    const made = known.get(width) ?? instants(width);
    known.set(width, made);
    return made;
  };
  const trails = Array.from({ length: 1 + 2 * asymmetry }, () => new Float64Array(velocity.length));
  for (let i = 0; i < count; i++) {
    const { offset, weight } = instantsOf(phase_width[i]!);
    const table = tablesOf(sigmas[i]!);
    for (let q = 0; q < offset.length; q++) {
      const angle = 2 * Math.PI * (phase[i]! + offset[q]!);
      const share = weight[q]!;
      const exposure = {
        velocity,
        from: start[i]!,
        to: start[i + 1]!,
        // x = slope · velocity + offset is the place in bins from the table's middle.
        slope: frame.factor / step_kms,
        offset: (frame.offset_kms + k1 * Math.sin(angle)) / step_kms,
      };
      addLookUp(table.even0, exposure, [[trails[0]!, share]]);
      if (table.odd1 !== null) {
        addLookUp(table.odd1, exposure, [
          [trails[1]!, share * Math.sin(angle)],
          [trails[2]!, share * Math.cos(angle)],
        ]);
      }
      if (table.even2 !== null) {
        addLookUp(table.even2, exposure, [
          [trails[3]!, share * Math.cos(2 * angle)],
          [trails[4]!, -share * Math.sin(2 * angle)],
        ]);
      }
    }
  }
  return trails;
}

/** The rings of some exposures, from those that are kept where they are among them. */
function ringsFor(
  { sampling, asymmetry, rings = new Map() }: TemplateContext,
  { reach_kms }: { readonly reach_kms: number },
): RingTable {
  const narrowest = sampling.profile_sigma_kms.reduce((a, b) => Math.min(a, b));
  // A step less, so that whatever the frame does to a profile is still to be added.
  const level = Math.floor(Math.log(narrowest) / SIGMA_STEP) - 1;
  const reach = Math.ceil(reach_kms / REACH_STEP_KMS);
  const key = `${level}/${reach}/${asymmetry}`;
  const known = rings.get(key);
  if (known !== undefined) return known;
  if (rings.size >= KEPT) rings.clear();
  const made = ringTable({
    sigma_kms: Math.exp(level * SIGMA_STEP),
    reach_kms: reach * REACH_STEP_KMS,
    orders: asymmetry,
  });
  rings.set(key, made);
  return made;
}

const UNIT = {
  1: panelled(1, { panels: 1, order: 1 }),
  2: panelled(1, { panels: 1, order: 2 }),
  4: panelled(1, { panels: 1, order: 4 }),
};

/** One instant for an exposure during which patterns hardly turn, several for a longer one. */
function instants(phase_width: number): { offset: Float64Array; weight: Float64Array } {
  const order = phase_width < 0.004 ? 1 : phase_width < 0.1 ? 2 : 4;
  const { offset, weight } = UNIT[order];
  return { offset: offset.map((value) => value * phase_width), weight };
}

/** Adds a table's cubic interpolation, times a factor, to each target. */
function addLookUp(
  table: { readonly half: number; readonly values: Float64Array },
  { velocity, from, to, slope, offset }: {
    readonly velocity: Float64Array;
    readonly from: number;
    readonly to: number;
    readonly slope: number;
    readonly offset: number;
  },
  targets: readonly (readonly [into: Float64Array, factor: number])[],
): void {
  const { half, values } = table;
  const middle = half + offset;
  const last = 2 * half - 2;
  const [first, firstFactor] = targets[0]!;
  const [second, secondFactor] = targets[1] ?? [first, 0];
  for (let n = from; n < to; n++) {
    const x = velocity[n]! * slope + middle;
    const k = Math.floor(x);
    if (k < 1 || k > last) continue;
    const t = x - k, s = 1 - t;
    const outer = t * s / 6;
    const inner = (1 + t) * (1 + s) / 2;
    const value = inner * (s * values[k]! + t * values[k + 1]!) -
      outer * ((1 + s) * values[k - 1]! + (1 + t) * values[k + 2]!);
    first[n]! += firstFactor * value;
    second[n]! += secondFactor * value;
  }
}
