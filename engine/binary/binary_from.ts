import { InputError } from "../errors.ts";
import { findRoot } from "../numerics/mod.ts";
import type { AccretorKind, Binary } from "./binary.ts";
import {
  type BinaryQuantity,
  completeQuantities,
  type KnownQuantities,
} from "./binary_relations.ts";

/** What is known of a binary; any sufficient set will do. Null and undefined both mean unknown. */
export interface BinaryOptions {
  /** Projected orbital speed of the donor, km/s. */
  readonly k_donor_kms?: number | null;
  /** Projected orbital speed of the accretor, km/s. */
  readonly k_accretor_kms?: number | null;
  /** q = M2/M1, donor over accretor. */
  readonly mass_ratio?: number | null;
  /** Orbital period, d. */
  readonly period_d?: number | null;
  /** Inclination, degrees, above 0 and at most 90. */
  readonly inclination_deg?: number | null;
  /** Mass of the accretor, solar. */
  readonly mass_accretor_msun?: number | null;
  /** Mass of the donor, solar. */
  readonly mass_donor_msun?: number | null;
  /** Separation, nominal solar radii. */
  readonly separation_rsun?: number | null;
  /** Kind of accretor. @default {"white-dwarf"} */
  readonly accretor?: AccretorKind;
  /**
   * Relative disagreement up to which a value is taken as the rounded form of what follows from
   * the others. @default {0.02}
   */
  readonly tolerance?: number;
}

// In order of precedence: where two agree only to rounding, the earlier one stands.
const QUANTITIES: readonly BinaryQuantity[] = [
  "k_donor_kms",
  "k_accretor_kms",
  "mass_ratio",
  "period_d",
  "inclination_deg",
  "mass_accretor_msun",
  "mass_donor_msun",
  "separation_rsun",
];

const UNITS: Readonly<Record<BinaryQuantity, string>> = {
  k_donor_kms: "km/s",
  k_accretor_kms: "km/s",
  mass_ratio: "",
  period_d: "d",
  inclination_deg: "deg",
  mass_accretor_msun: "Msun",
  mass_donor_msun: "Msun",
  separation_rsun: "Rsun",
};

type Given = { [key in BinaryQuantity]?: number };

const action = "build binary";

/** As in "k_donor_kms = 320 km/s and period_d = 0.08 d". */
function list(given: Given, keys: readonly BinaryQuantity[]): string {
  const parts = keys.map((key) => `${key} = ${given[key]} ${UNITS[key]}`.trim());
  const last = parts.pop() ?? "nothing";
  return parts.length === 0 ? last : `${parts.join(", ")} and ${last}`;
}

function keysOf(given: Given): BinaryQuantity[] {
  return QUANTITIES.filter((key) => given[key] !== undefined);
}

/** Those of the given quantities without which another would not follow. */
function needed(given: Given, key: BinaryQuantity): BinaryQuantity[] {
  let rest = given;
  for (const name of keysOf(given)) {
    const { [name]: _, ...fewer } = rest;
    if (completeQuantities(fewer)[key] !== undefined) rest = fewer;
  }
  return keysOf(rest);
}

function read(options: BinaryOptions): Given {
  const given: Given = {};
  for (const key of QUANTITIES) {
    const value = options[key] ?? undefined;
    if (value === undefined) continue;
    const limit = key === "inclination_deg" ? 90 : key === "mass_ratio" ? 100 : Infinity;
    if (!(value > 0 && value <= limit && Number.isFinite(value))) {
      const rule = `${key} must be above 0` + (limit < Infinity ? ` and at most ${limit}` : "");
      throw new InputError({ action, rule, value, unit: UNITS[key] || undefined, key });
    }
    given[key] = value;
  }
  return given;
}

/** How far two values of a quantity lie apart, relative; inclinations by their sines. */
function mismatch(key: BinaryQuantity, one: number, other: number): number {
  const size = (value: number) =>
    key === "inclination_deg" ? Math.sin(value * Math.PI / 180) : value;
  return Math.abs(size(one) / size(other) - 1);
}

function contradiction(
  accepted: Given,
  key: BinaryQuantity,
  value: number,
  derived: number,
): never {
  const cause = list(accepted, needed(accepted, key));
  const unit = UNITS[key] || undefined;
  const result = derived > 0
    ? `${key} = ${Number(derived.toPrecision(4))} ${UNITS[key]}`.trim()
    : `no possible ${key}`;
  const remedy = "correct one of them or leave one out";
  throw new InputError({ action, rule: `${cause} give ${result}`, value, unit, key, remedy });
}

/** Throws when something that was not given follows as an impossible value. */
function refuseImpossible(accepted: Given): void {
  const all = completeQuantities(accepted);
  for (const key of QUANTITIES) {
    const derived = all[key];
    if (derived === undefined || derived > 0) continue;
    const cause = list(accepted, needed(accepted, key));
    const why = key === "inclination_deg" ? " (its sine would exceed 1)" : "";
    throw new InputError({
      action,
      rule: `${cause} leave no possible ${key}${why}`,
      key,
      remedy: "correct one of them or leave one out",
    });
  }
}

/** Logarithm of derived over given for the first given quantity that a trial mass ratio yields. */
function surplus(given: Given, mass_ratio: number): number | undefined {
  for (const key of keysOf(given)) {
    const { [key]: value, ...rest } = given;
    const derived = completeQuantities({ ...rest, mass_ratio })[key];
    if (derived === undefined) continue;
    const size = (x: number) => key === "inclination_deg" ? Math.sin(x * Math.PI / 180) : x;
    return Math.log(size(derived) / size(value!));
  }
  return undefined;
}

/** Mass ratio that makes the rest agree, when no rule yields it directly; undefined if none can. */
function searchMassRatio(given: Given): number | undefined {
  const low = Math.log(1e-3), high = Math.log(100), steps = 240;
  const at = (k: number) => low + (high - low) * k / steps;
  const off = (ln_q: number) => surplus(given, Math.exp(ln_q)) ?? NaN;
  if (surplus(given, 1) === undefined && surplus(given, 1e-3) === undefined) return undefined;
  const found: number[] = [];
  for (let k = 0; k < steps; k++) {
    if (off(at(k)) * off(at(k + 1)) <= 0) {
      found.push(Math.exp(findRoot(off, [at(k), at(k + 1)], { tolerance: 1e-14 })));
    }
  }
  if (found.length === 1) return found[0];
  const named = list(given, keysOf(given));
  throw new InputError({
    action,
    rule: found.length === 0
      ? `no mass ratio between 0.001 and 100 fits ${named}`
      : `${named} fit more than one mass ratio: ${found.map((q) => q.toPrecision(4)).join(", ")}`,
    key: "mass_ratio",
    remedy: found.length === 0 ? "correct one of them or leave one out" : "give the mass ratio too",
  });
}

function insufficient(given: Given, all: KnownQuantities): never {
  const enough = QUANTITIES.filter((key) => {
    if (all[key] !== undefined) return false;
    const more = completeQuantities({ ...given, [key]: key === "inclination_deg" ? 60 : 1 });
    return more.k_accretor_kms !== undefined && more.k_donor_kms !== undefined;
  });
  const missing = (["mass_ratio", "k_accretor_kms", "k_donor_kms"] as const)
    .filter((key) => all[key] === undefined);
  throw new InputError({
    action,
    rule: `${missing.join(", ")} do not follow from ${list(given, keysOf(given))}`,
    key: missing[0],
    remedy: enough.length > 0
      ? `add one of ${enough.join(", ")}`
      : "give k_accretor_kms and k_donor_kms, or one of them and mass_ratio, or masses, period_d and inclination_deg",
  });
}

/**
 * The binary that follows from any sufficient set of numbers, by q = K1/K2 = M2/M1 and Kepler's
 * third law for a circular orbit. What cannot be derived beyond mass ratio and orbital speeds
 * stays null.
 *
 * More numbers than needed must agree, each to `tolerance` (values come rounded). The first ones in
 * the order of {@linkcode BinaryOptions} then stand, so that what is returned agrees with itself.
 *
 * @param options The known numbers.
 * @returns The binary.
 * @throws {InputError} When a number is out of range, numbers contradict each other, or they do
 * not suffice; the message names keys and values.
 *
 * @example From masses, period and inclination
 * ```ts
 * import { binaryFrom } from "@millrace/millrace/binary";
 * import { assertAlmostEquals } from "@std/assert";
 *
 * const binary = binaryFrom({
 *   mass_accretor_msun: 0.8, mass_donor_msun: 0.16, period_d: 0.08, inclination_deg: 70,
 * });
 * assertAlmostEquals(binary.mass_ratio, 0.2, 1e-12);
 * assertAlmostEquals(binary.k_accretor_kms / binary.k_donor_kms, 0.2, 1e-12);
 * ```
 *
 * @example A contradiction
 * ```ts
 * import { binaryFrom } from "@millrace/millrace/binary";
 * import { assertThrows } from "@std/assert";
 *
 * assertThrows(
 *   () => binaryFrom({ k_accretor_kms: 80, k_donor_kms: 320, mass_ratio: 0.4 }),
 *   Error,
 *   "k_donor_kms = 320 km/s and k_accretor_kms = 80 km/s give mass_ratio = 0.25",
 * );
 * ```
 */
export function binaryFrom(options: BinaryOptions): Binary {
  const { accretor = "white-dwarf", tolerance = 0.02 } = options;
  const given = read(options);
  let accepted: Given = {};
  for (const key of keysOf(given)) {
    const derived = completeQuantities(accepted)[key];
    const value = given[key]!;
    if (derived === undefined) {
      accepted = { ...accepted, [key]: value };
      refuseImpossible(accepted);
    } else if (!(mismatch(key, derived, value) <= tolerance)) {
      contradiction(accepted, key, value, derived);
    }
  }
  if (completeQuantities(accepted).mass_ratio === undefined) {
    const mass_ratio = searchMassRatio(accepted);
    if (mass_ratio !== undefined) accepted = { ...accepted, mass_ratio };
  }
  const all = completeQuantities(accepted);
  const { mass_ratio, k_accretor_kms, k_donor_kms } = all;
  if (mass_ratio === undefined || k_accretor_kms === undefined || k_donor_kms === undefined) {
    insufficient(accepted, all);
  }
  return {
    mass_ratio,
    k_accretor_kms,
    k_donor_kms,
    inclination_deg: all.inclination_deg ?? null,
    period_d: all.period_d ?? null,
    mass_accretor_msun: all.mass_accretor_msun ?? null,
    mass_donor_msun: all.mass_donor_msun ?? null,
    separation_rsun: all.separation_rsun ?? null,
    accretor,
  };
}
