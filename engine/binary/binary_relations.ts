import {
  keplerPeriod,
  keplerSeparation,
  keplerTotalMass,
  orbitalSpeed,
} from "./kepler_third_law.ts";

/** The quantities that fix a binary, by the key a user gives them under. */
export type BinaryQuantity =
  | "k_donor_kms"
  | "k_accretor_kms"
  | "mass_ratio"
  | "period_d"
  | "inclination_deg"
  | "mass_accretor_msun"
  | "mass_donor_msun"
  | "separation_rsun";

type Name = BinaryQuantity | "speed_sum_kms" | "mass_sum_msun";

/** Some of the quantities, with values. */
export type KnownQuantities = { readonly [name in Name]?: number };

interface Rule {
  readonly gives: Name;
  readonly from: readonly Name[];
  readonly by: (a: number, b: number, c: number) => number;
}

const sine = (deg: number) => Math.sin(deg * Math.PI / 180);
const degrees = (rad: number) => rad * 180 / Math.PI;

function rule(gives: Name, from: readonly Name[], by: Rule["by"]): Rule {
  return { gives, from, by };
}

/** Two parts with a ratio (first over second) and a sum: every way round. */
function ratioAndSum(first: Name, second: Name, sum: Name): Rule[] {
  return [
    rule("mass_ratio", [first, second], (a, b) => a / b),
    rule(first, ["mass_ratio", second], (q, b) => q * b),
    rule(second, ["mass_ratio", first], (q, a) => a / q),
    rule(sum, [first, second], (a, b) => a + b),
    rule(first, ["mass_ratio", sum], (q, s) => s * q / (1 + q)),
    rule(second, ["mass_ratio", sum], (q, s) => s / (1 + q)),
    rule(second, [sum, first], (s, a) => s - a),
    rule(first, [sum, second], (s, b) => s - b),
  ];
}

const rules: readonly Rule[] = [
  ...ratioAndSum("k_accretor_kms", "k_donor_kms", "speed_sum_kms"),
  ...ratioAndSum("mass_donor_msun", "mass_accretor_msun", "mass_sum_msun"),
  rule("separation_rsun", ["mass_sum_msun", "period_d"], keplerSeparation),
  rule("mass_sum_msun", ["separation_rsun", "period_d"], keplerTotalMass),
  rule("period_d", ["mass_sum_msun", "separation_rsun"], keplerPeriod),
  rule(
    "speed_sum_kms",
    ["separation_rsun", "period_d", "inclination_deg"],
    (a, p, i) => orbitalSpeed(a, p) * sine(i),
  ),
  rule(
    "separation_rsun",
    ["speed_sum_kms", "period_d", "inclination_deg"],
    (s, p, i) => s / sine(i) / orbitalSpeed(1, p),
  ),
  rule(
    "period_d",
    ["separation_rsun", "speed_sum_kms", "inclination_deg"],
    (a, s, i) => orbitalSpeed(a, 1) * sine(i) / s,
  ),
  rule(
    "inclination_deg",
    ["separation_rsun", "speed_sum_kms", "period_d"],
    (a, s, p) => degrees(Math.asin(s / orbitalSpeed(a, p))),
  ),
  // M = a³/P² in Kepler's units and S = a sin i/P: separation eliminated.
  rule(
    "period_d",
    ["mass_sum_msun", "speed_sum_kms", "inclination_deg"],
    (m, s, i) => m * (orbitalSpeed(keplerSeparation(1, 1), 1) * sine(i) / s) ** 3,
  ),
];

/**
 * Everything that follows from some quantities by the definition of the mass ratio and Kepler's
 * third law, one rule after another. A value that cannot be (a sine above 1, a negative rest of a
 * sum) comes out as NaN or below zero, and nothing is derived from it.
 *
 * @param known What is given.
 * @returns What is given and what follows.
 */
export function completeQuantities(known: KnownQuantities): KnownQuantities {
  const all: { [name in Name]?: number } = { ...known };
  let grown = true;
  while (grown) {
    grown = false;
    for (const { gives, from, by } of rules) {
      if (all[gives] !== undefined) continue;
      const values = from.map((name) => all[name] ?? NaN);
      if (!values.every((value) => value > 0)) continue;
      const [a, b, c = NaN] = values as [number, number, number?];
      all[gives] = by(a, b, c);
      grown = true;
    }
  }
  return all;
}
