import { keplerMasses, massFunction } from "../binary/mod.ts";
import { InputError } from "../errors.ts";
import { normalTail, type RandomStream } from "../numerics/mod.ts";
import { type MassInput, type MeasuredValue, requireMassInput } from "./mass_input.ts";
import { eclipseTable, lobeTable, rotationTable } from "./mass_tables.ts";
import { massRatioFromSuperhumps } from "./rotation_ratio.ts";
import { type DrawSummary, summarise } from "./weighted_summary.ts";

/** Options of {@linkcode solveMasses}. */
export interface MassOptions {
  /** Source of chance. */
  readonly random: RandomStream;
  /** Number of draws. @default {20000} */
  readonly draws?: number;
  /** Draws kept for a plate. @default {2000} */
  readonly keep?: number;
}

/** Draws for the M1–M2 and q–i planes. */
export interface MassDraws {
  /** q, as many as kept. */
  readonly mass_ratio: Float64Array;
  /** Inclination, degrees. */
  readonly inclination_deg: Float64Array;
  /** Mass of the accretor, solar. */
  readonly accretor_msun: Float64Array;
  /** Mass of the donor, solar. */
  readonly donor_msun: Float64Array;
}

/** Masses and what comes with them; null where the input does not reach. */
export interface MassSolution {
  /** q = M2/M1. */
  readonly mass_ratio: DrawSummary | null;
  /** What gave q. */
  readonly mass_ratio_from: readonly ("velocities" | "rotation" | "superhumps")[];
  /** Least mass of the accretor, P·K2³/2πG, solar. */
  readonly accretor_mass_function_msun: DrawSummary | null;
  /** Least mass of the donor, P·K1³/2πG, solar. */
  readonly donor_mass_function_msun: DrawSummary | null;
  /** M1 sin³i, solar. */
  readonly accretor_m_sin3i_msun: DrawSummary | null;
  /** M2 sin³i, solar. */
  readonly donor_m_sin3i_msun: DrawSummary | null;
  /** Inclination, degrees. */
  readonly inclination_deg: DrawSummary | null;
  /** M1, solar. */
  readonly accretor_msun: DrawSummary | null;
  /** M2, solar. */
  readonly donor_msun: DrawSummary | null;
  /** Separation, nominal solar radii. */
  readonly separation_rsun: DrawSummary | null;
  /** Volume radius of the donor, nominal solar radii. */
  readonly donor_radius_rsun: DrawSummary | null;
  /** Chance that the sources of q differ by as much as they do, were they right; null with one. */
  readonly agreement: number | null;
  /** Share of draws that were possible (an inclination for the eclipse, a positive speed). */
  readonly possible: number;
  /** Draws for plates; null without inclination. */
  readonly draws: MassDraws | null;
}

const action = "derive masses";

/** Relative scatter of the superhump relation: common practice, no source. */
const SUPERHUMP_SCATTER = 0.1;

/**
 * Masses from velocities by drawing every measured number from its normal distribution: medians with
 * asymmetric errors, for the masses are far from linear in K and sin i.
 *
 * q comes from K1/K2, from the donor's rotation (exact lobe radius), from superhumps, or from all of
 * them: the first gives the draws and the others weigh them. Inclination is measured, ranged (orbits
 * evenly over directions), from the eclipse's width, or absent; then only M sin³i and the mass
 * functions follow. Draws above 90° are reflected.
 *
 * @param input What was measured.
 * @param options Chance and number of draws.
 * @returns Masses; null where the input does not reach.
 * @throws {InputError} When a number is out of range, or no draw is possible.
 *
 * @example
 * ```ts
 * import { randomStream } from "@millrace/millrace/numerics";
 * import { solveMasses } from "@millrace/millrace/orbit";
 * import { assertAlmostEquals } from "@std/assert";
 *
 * const { accretor_msun, mass_ratio } = solveMasses({
 *   period_d: { value: 0.25, error: 1e-6 },
 *   k_accretor_kms: { value: 120, error: 1 },
 *   k_donor_kms: { value: 150, error: 1 },
 *   inclination: { deg: { value: 75, error: 0.5 } },
 * }, { random: randomStream(1) });
 * assertAlmostEquals(mass_ratio!.median, 0.8, 0.005);
 * assertAlmostEquals(accretor_msun!.median, 0.314, 0.01);
 * ```
 */
export function solveMasses(input: MassInput, options: MassOptions): MassSolution {
  const { random, draws: count = 20000, keep = 2000 } = options;
  const { period_d, k_accretor_kms: k1, k_donor_kms: k2, v_sin_i_kms = null } = input;
  const { superhump_excess = null, inclination = null, eccentricity = 0 } = input;
  requireMassInput(input);
  const from: ("velocities" | "rotation" | "superhumps")[] = [];
  if (k1 && k2) from.push("velocities");
  if (v_sin_i_kms && k2) from.push("rotation");
  if (superhump_excess && (k1 || k2)) from.push("superhumps");

  const rotation = from.includes("rotation") ? rotationTable() : null;
  const size = lobeTable();
  const superhump_q = superhump_excess ? massRatioFromSuperhumps(superhump_excess.value) : NaN;
  const superhump_error = superhump_excess
    ? Math.hypot(
      SUPERHUMP_SCATTER * superhump_q,
      superhump_excess.error / (0.18 + 0.58 * superhump_q),
    )
    : NaN;
  const normal = ({ value, error }: MeasuredValue) => value + error * random.normal();

  const all = {
    period: new Float64Array(count),
    k1: new Float64Array(count),
    k2: new Float64Array(count),
    weight: new Float64Array(count),
  };
  let possible = 0;
  // Mean and square of what the other sources of q are off by, in their own errors.
  const offs = from.slice(1).map(() => ({ sum: 0, square: 0 }));
  for (let n = 0; n < count; n++) {
    const period = normal(period_d);
    let a = k1 ? normal(k1) : NaN, b = k2 ? normal(k2) : NaN;
    let weight = 1;
    const [first, ...others] = from;
    if (first === "rotation") a = b * rotation!.inverse(normal(v_sin_i_kms!) / b);
    if (first === "superhumps") {
      const q = superhump_q + superhump_error * random.normal();
      if (k1) b = a / q;
      else a = b * q;
    }
    const q = a / b;
    others.forEach((other, k) => {
      const off = other === "rotation"
        ? (b * rotation!.value(q) - v_sin_i_kms!.value) / (v_sin_i_kms!.error || 1e-9)
        : (q - superhump_q) / superhump_error;
      weight *= Math.exp(-0.5 * off * off);
      offs[k]!.sum += off / count;
      offs[k]!.square += off * off / count;
    });
    const fine = period > 0 && (!k1 && !first || a > 0) && (!k2 && !first || b > 0);
    all.period[n] = period;
    all.k1[n] = a;
    all.k2[n] = b;
    all.weight[n] = fine ? weight : 0;
    if (fine) possible++;
  }
  const kept = Uint32Array.from(all.weight.keys()).filter((n) => all.weight[n]! > 0);
  if (kept.length < 10) {
    throw new InputError({
      action,
      rule: "the measured numbers must be possible together",
      value: `${kept.length} of ${count} draws`,
    });
  }
  const take = (f: (n: number) => number) => Float64Array.from(kept, f);
  const weight = take((n) => all.weight[n]!);
  const sum = (values: Float64Array) => summarise(values, weight);
  const one = (f: (n: number) => number) => sum(take(f));
  const least = (k: Float64Array, n: number) =>
    massFunction(k[n]!, all.period[n]!, { eccentricity });
  const nothing = {
    mass_ratio_from: from,
    accretor_mass_function_msun: k2 ? one((n) => least(all.k2, n)) : null,
    donor_mass_function_msun: k1 ? one((n) => least(all.k1, n)) : null,
    mass_ratio: null,
    accretor_m_sin3i_msun: null,
    donor_m_sin3i_msun: null,
    inclination_deg: null,
    accretor_msun: null,
    donor_msun: null,
    separation_rsun: null,
    donor_radius_rsun: null,
    agreement: null,
    possible: possible / count,
    draws: null,
  };
  if (from.length === 0) return nothing;

  const q = take((n) => all.k1[n]! / all.k2[n]!);
  const orbitOf = (n: number) => ({
    period_d: all.period[n]!,
    k_accretor_kms: all.k1[n]!,
    k_donor_kms: all.k2[n]!,
    eccentricity,
  });
  const edge_on = Array.from(kept, (n) => keplerMasses(orbitOf(n)));
  const ratio = sum(q);
  const known = {
    ...nothing,
    mass_ratio: ratio,
    accretor_m_sin3i_msun: sum(Float64Array.from(edge_on, (m) => m.accretor_msun)),
    donor_m_sin3i_msun: sum(Float64Array.from(edge_on, (m) => m.donor_msun)),
    agreement: agreementOf(offs),
  };
  if (!inclination) return known;

  const width = "eclipse_width_cycles" in inclination ? inclination.eclipse_width_cycles : null;
  const spread = Math.max(ratio.deviation, 0.01 * ratio.median);
  const lookup = width &&
    eclipseTable([
      Math.max(0.3 * ratio.median, ratio.median - 5 * spread),
      ratio.median + 5 * spread,
    ], width);
  const degrees = take(() => 0).map((_, k) => {
    if (lookup) return lookup(q[k]!, normal(width!));
    if ("range_deg" in inclination) {
      const [low, high] = inclination.range_deg.map((deg) => Math.cos(deg * Math.PI / 180)) as [
        number,
        number,
      ];
      return Math.acos(low + (high - low) * random.uniform()) * 180 / Math.PI;
    }
    if (!("deg" in inclination)) return NaN;
    const deg = Math.abs(normal(inclination.deg));
    return deg > 90 ? 180 - deg : deg;
  });
  const good = Uint32Array.from(degrees.keys()).filter((k) => degrees[k]! > 0);
  if (good.length < 10) {
    throw new InputError({
      action,
      rule: "the eclipse must be possible at this mass ratio",
      value: width!.value,
      unit: "cycles",
      key: "eclipse_width_cycles",
    });
  }
  const subset = (values: ArrayLike<number>) => Float64Array.from(good, (k) => values[k]!);
  const end_weight = subset(weight);
  const tilted = Array.from(
    good,
    (k) => keplerMasses({ ...orbitOf(kept[k]!), inclination_deg: degrees[k]! }),
  );
  const end = (f: (k: number) => number) =>
    summarise(Float64Array.from(good.keys(), f), end_weight);
  const shown = pick(end_weight, Math.min(keep, good.length), random);
  const draw = (f: (k: number) => number) => Float64Array.from(shown, f);
  return {
    ...known,
    inclination_deg: summarise(subset(degrees), end_weight),
    accretor_msun: end((k) => tilted[k]!.accretor_msun),
    donor_msun: end((k) => tilted[k]!.donor_msun),
    separation_rsun: end((k) => tilted[k]!.separation_rsun),
    donor_radius_rsun: end((k) => tilted[k]!.separation_rsun * size.value(q[good[k]!]!)),
    possible: possible / count * good.length / kept.length,
    draws: {
      mass_ratio: draw((k) => q[good[k]!]!),
      inclination_deg: draw((k) => degrees[good[k]!]!),
      accretor_msun: draw((k) => tilted[k]!.accretor_msun),
      donor_msun: draw((k) => tilted[k]!.donor_msun),
    },
  };
}

/** Least chance of the differences between sources of q; null without a second one. */
function agreementOf(offs: readonly { sum: number; square: number }[]): number | null {
  if (offs.length === 0) return null;
  return Math.min(...offs.map(({ sum, square }) => {
    const z = Math.abs(sum) / Math.sqrt(1 + Math.max(0, square - sum * sum));
    return 2 * normalTail(z);
  }));
}

/** Indices drawn in proportion to their weights. */
function pick(weight: Float64Array, count: number, random: RandomStream): Uint32Array {
  if (weight.every((w) => w === weight[0])) return Uint32Array.from({ length: count }, (_, k) => k);
  const sums = new Float64Array(weight.length);
  let total = 0;
  weight.forEach((w, k) => sums[k] = total += w);
  return Uint32Array.from({ length: count }, () => {
    const goal = total * random.uniform();
    let low = 0, high = sums.length - 1;
    while (low < high) {
      const middle = (low + high) >> 1;
      if (sums[middle]! <= goal) low = middle + 1;
      else high = middle;
    }
    return low;
  });
}
