import { type Binary, closestApproach, lagrangePoints, lobeRadiusEggleton } from "../binary/mod.ts";
import { InputError } from "../errors.ts";
import { completeModel, modelParameters, type PartName } from "../synthesis/mod.ts";
import type { FitSetup } from "./fit_setup.ts";
import type { Hypothesis } from "./hypothesis.ts";

/** Section of a parameter: a part of the model, or the geometry that all share. */
export type ParameterSection = PartName | "geometry";

/** A number that a fit varies and that the model does not depend on linearly. */
export interface FreeParameter {
  /** Section and key, as in "spot.mixing" or "geometry.phase". */
  readonly path: string;
  /** Section. */
  readonly section: ParameterSection;
  /** Key in the section. */
  readonly key: string;
  /** Unit; empty when dimensionless. */
  readonly unit: string;
  /** Smallest value tried. */
  readonly low: number;
  /** Largest value tried. */
  readonly high: number;
  /** Where the fit starts. */
  readonly start: number;
  /** A change that is felt, for the steps of differences. */
  readonly typical: number;
  /** One standard deviation of the prior, centred on `start`; null without one. */
  readonly prior: number | null;
}

/** Range and start of the numbers that are fitted whenever their part is in the hypothesis. */
const ALWAYS: readonly (readonly [
  section: PartName,
  key: string,
  low: number,
  high: number,
  typical: number,
])[] = [
  ["disc", "inner_radius_over_a", 0.004, 0.3, 0.02],
  ["disc", "outer_radius_over_a", 0.08, 0.9, 0.1],
  ["disc", "emissivity_index", -1, 4, 0.5],
  ["spot", "radius_over_a", 0.1, 0.9, 0.1],
  ["spot", "mixing", 0, 1, 0.3],
  ["spot", "sigma_kms", 10, 400, 30],
  ["stream", "brightness_index", -4, 8, 1],
  ["stream", "sigma_kms", 10, 300, 30],
  ["accretor", "sigma_kms", 10, 600, 50],
  ["outflow", "sigma_kms", 200, 3000, 300],
];

/** Free only where the model gives them a value: a fit that starts from zero cannot leave it. */
const WHERE_GIVEN: readonly (readonly [PartName, string, number, number, number])[] = [
  ["disc", "turbulence_kms", 0, 500, 30],
  ["spot", "tail_deg", 0, 120, 10],
];

/** Paths of the geometry that a prior makes free, with unit. */
const GEOMETRY = [
  ["k_accretor_kms", "km/s"],
  ["k_donor_kms", "km/s"],
  ["mass_ratio", ""],
  ["systemic_kms", "km/s"],
  ["phase", "cycles"],
] as const;

/**
 * The numbers that are fitted for a hypothesis, besides the parts' brightnesses.
 *
 * @param hypothesis The parts.
 * @param setup What is known.
 * @returns The parameters, parts first, geometry last.
 * @throws {InputError} When a path of `free` is not a number of the model.
 *
 * @example
 * ```ts
 * import { freeParameters } from "@millrace/millrace/weighing";
 * import { binaryFrom } from "@millrace/millrace/binary";
 * import { assertEquals } from "@std/assert";
 *
 * const binary = binaryFrom({ k_accretor_kms: 70, k_donor_kms: 320 });
 * const free = freeParameters(["disc"], { binary, errors: { phase: 0.003 } });
 * assertEquals(free.map(({ key }) => key), [
 *   "inner_radius_over_a",
 *   "outer_radius_over_a",
 *   "emissivity_index",
 *   "phase",
 * ]);
 * ```
 */
export function freeParameters(hypothesis: Hypothesis, setup: FitSetup): readonly FreeParameter[] {
  const { errors = {}, free = [], fixed = [] } = setup;
  const model = completeModel({ ...setup.model, parts: hypothesis });
  // The stream is followed from just inside L1 to its closest approach.
  const l1 = lagrangePoints(setup.binary.mass_ratio).l1_over_a;
  // By Eggleton's formula, as models are checked, and a little less for rounding.
  const lobe = 0.999 * lobeRadiusEggleton(1 / setup.binary.mass_ratio) /
    (1 + model.disc.eccentricity);
  const closest = hypothesis.includes("spot") ? approachOf(setup.binary) : 0;
  const found: FreeParameter[] = [];
  const add = (
    section: PartName,
    key: string,
    [low, high, typical]: readonly [number, number, number],
  ) => {
    const path = `${section}.${key}`;
    if (!hypothesis.includes(section) || fixed.includes(path)) return;
    const known = modelParameters.find((p) => p.section === section && p.key === key)!;
    const top = key === "outer_radius_over_a"
      ? Math.min(high, lobe)
      : key === "radius_over_a"
      ? Math.min(high, 0.95 * l1)
      : high;
    const bottom = path === "spot.radius_over_a" ? Math.max(low, 1.02 * closest) : low;
    const given = (model[section] as unknown as Record<string, number | null>)[key] ??
      model.disc.outer_radius_over_a;
    found.push({
      path,
      section,
      key,
      unit: known.unit,
      low: bottom,
      high: top,
      start: Math.min(top, Math.max(bottom, given)),
      typical,
      prior: null,
    });
  };
  for (const [section, key, ...range] of ALWAYS) add(section, key, range);
  for (const [section, key, ...range] of WHERE_GIVEN) {
    const value = (model[section] as unknown as Record<string, number>)[key]!;
    if (value > 0) add(section, key, range);
  }
  for (const path of free) {
    if (found.some((parameter) => parameter.path === path)) continue;
    const known = modelParameters.find((p) => `${p.section}.${p.key}` === path && !p.linear);
    if (known === undefined || known.section === "eclipse") {
      throw new InputError({
        action: "weigh hypotheses",
        rule: "a free parameter must be a section and key of the model, as in spot.tail_deg",
        value: path,
        key: "weigh.free",
      });
    }
    const width = known.high - known.low;
    add(known.section, known.key, [known.low, known.high, Math.min(1, 0.1 * width)]);
  }
  const centre = {
    k_accretor_kms: setup.binary.k_accretor_kms,
    k_donor_kms: setup.binary.k_donor_kms,
    mass_ratio: setup.binary.mass_ratio,
    systemic_kms: setup.systemic_kms ?? 0,
    phase: 0,
  };
  for (const [key, unit] of GEOMETRY) {
    const prior = errors[key] ?? 0;
    if (!(prior > 0)) continue;
    const start = centre[key];
    const positive = key.startsWith("k_") || key === "mass_ratio";
    found.push({
      path: `geometry.${key}`,
      section: "geometry",
      key,
      unit,
      low: positive ? Math.max(0.02 * start, start - 6 * prior) : start - 6 * prior,
      high: start + 6 * prior,
      start,
      typical: prior,
      prior,
    });
  }
  return found;
}

/** A stream is followed for this: the answer is kept with the binary. */
const approaches = new WeakMap<Binary, number>();

function approachOf(binary: Binary): number {
  const known = approaches.get(binary) ?? closestApproach(binary.mass_ratio);
  approaches.set(binary, known);
  return known;
}
