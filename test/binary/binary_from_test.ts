import { assertAlmostEquals, assertEquals, assertThrows } from "@std/assert";
import { InputError } from "@millrace/millrace/errors";
import { binaryFrom, type BinaryOptions } from "@millrace/millrace/binary";

const truth = binaryFrom({
  mass_accretor_msun: 0.82,
  mass_donor_msun: 0.17,
  period_d: 0.0823714,
  inclination_deg: 68,
});

const KEYS = [
  "mass_ratio",
  "k_accretor_kms",
  "k_donor_kms",
  "inclination_deg",
  "period_d",
  "mass_accretor_msun",
  "mass_donor_msun",
  "separation_rsun",
] as const;

/** All choices of n keys. */
function choices(n: number, from: readonly (typeof KEYS)[number][] = KEYS): string[][] {
  if (n === 0) return [[]];
  return from.flatMap((key, k) => choices(n - 1, from.slice(k + 1)).map((rest) => [key, ...rest]));
}

function pick(keys: readonly string[]): BinaryOptions {
  return Object.fromEntries(keys.map((key) => [key, truth[key as keyof typeof truth]]));
}

/** Number of independent statements in a set: rank of logarithms about the truth, by differences. */
function rank(keys: readonly string[]): number {
  // Logarithms of the eight quantities by those of M1, M2, P, sin i.
  const at = (m1: number, m2: number, p: number, s: number) => {
    const a = Math.cbrt((m1 + m2) * p * p), k = a * s / p / (m1 + m2);
    const all = {
      mass_ratio: m2 / m1,
      k_accretor_kms: k * m2,
      k_donor_kms: k * m1,
      inclination_deg: s,
      period_d: p,
      mass_accretor_msun: m1,
      mass_donor_msun: m2,
      separation_rsun: a,
    };
    return keys.map((key) => Math.log(all[key as keyof typeof all]));
  };
  const base = [0.82, 0.17, 0.08, 0.9] as const;
  const zero = at(...base);
  const rows = zero.map((_, k) =>
    base.map((value, j) => {
      const moved = [...base] as [number, number, number, number];
      moved[j] = value * (1 + 1e-6);
      return (at(...moved)[k]! - zero[k]!) / 1e-6;
    })
  );
  let found = 0;
  for (let column = 0; column < 4; column++) {
    const pivot = rows.slice(found).reduce(
      (best, row, k) => Math.abs(row[column]!) > Math.abs(rows[best]![column]!) ? k + found : best,
      found,
    );
    if (found >= rows.length || Math.abs(rows[pivot]![column]!) < 1e-4) continue;
    [rows[found], rows[pivot]] = [rows[pivot]!, rows[found]!];
    for (let k = found + 1; k < rows.length; k++) {
      const factor = rows[k]![column]! / rows[found]![column]!;
      rows[k] = rows[k]!.map((value, j) => value - factor * rows[found]![j]!);
    }
    found++;
  }
  return found;
}

Deno.test("binaryFrom() recovers the binary from every choice of four independent numbers", () => {
  let tried = 0;
  for (const keys of choices(4)) {
    if (rank(keys) < 4) continue;
    let binary;
    try {
      binary = binaryFrom(pick(keys));
    } catch (error) {
      // Two mass ratios can share a set such as K1, M1, a, i: then the message names both.
      if (error instanceof InputError && error.rule.includes("more than one mass ratio")) continue;
      throw error;
    }
    tried++;
    for (const key of KEYS) {
      assertAlmostEquals(binary[key]! / truth[key]!, 1, 1e-8, `${key} from ${keys}`);
    }
  }
  assertEquals(tried >= 50, true, `only ${tried}`);
});

Deno.test("binaryFrom() names contradicting keys and values", () => {
  const error = assertThrows(
    () => binaryFrom({ k_accretor_kms: 70, k_donor_kms: 320, mass_ratio: 0.5, period_d: 0.08 }),
    InputError,
  );
  assertEquals(
    error.message,
    "Cannot build binary as k_donor_kms = 320 km/s and k_accretor_kms = 70 km/s give " +
      "mass_ratio = 0.2188: current value is 0.5 (key mass_ratio); correct one of them or leave one out",
  );
  const heavy = assertThrows(
    () =>
      binaryFrom({
        k_accretor_kms: 70,
        k_donor_kms: 320,
        period_d: 0.0823714,
        inclination_deg: 68,
        mass_accretor_msun: 0.85,
      }),
    InputError,
    "give mass_accretor_msun = 0.52",
  );
  assertEquals(heavy.key, "mass_accretor_msun");
  assertEquals(heavy.value, 0.85);
});

Deno.test("binaryFrom() says when a sine would exceed one", () => {
  assertThrows(
    () =>
      binaryFrom({
        k_accretor_kms: 70,
        k_donor_kms: 320,
        period_d: 0.0823714,
        mass_accretor_msun: 0.2,
      }),
    InputError,
    "leave no possible inclination_deg (its sine would exceed 1)",
  );
});

Deno.test("binaryFrom() says what is missing and what would do", () => {
  assertThrows(
    () => binaryFrom({ mass_ratio: 0.2 }),
    InputError,
    "k_accretor_kms, k_donor_kms do not follow from mass_ratio = 0.2 (key k_accretor_kms); " +
      "add one of k_donor_kms, k_accretor_kms",
  );
  assertThrows(
    () => binaryFrom({ mass_accretor_msun: 0.8, mass_donor_msun: 0.2, inclination_deg: 60 }),
    InputError,
    "add one of k_donor_kms, k_accretor_kms, period_d, separation_rsun",
  );
  assertThrows(() => binaryFrom({}), InputError, "do not follow from nothing");
});

Deno.test("binaryFrom() takes a rounded surplus value and keeps itself consistent", () => {
  const binary = binaryFrom({ k_accretor_kms: 70, k_donor_kms: 320, mass_ratio: 0.22 });
  assertEquals(binary.mass_ratio, 70 / 320);
  assertEquals(binary.inclination_deg, null);
  assertEquals(binary.accretor, "white-dwarf");
  const strict = { k_accretor_kms: 70, k_donor_kms: 320, mass_ratio: 0.22, tolerance: 1e-3 };
  assertThrows(() => binaryFrom(strict), InputError, "current value is 0.22");
});

Deno.test("binaryFrom() refuses numbers out of range, by key", () => {
  for (
    const [key, value] of [
      ["mass_ratio", -0.2],
      ["mass_ratio", 500],
      ["inclination_deg", 95],
      ["inclination_deg", 0],
      ["period_d", NaN],
      ["k_donor_kms", Infinity],
    ] as const
  ) {
    const error = assertThrows(
      () => binaryFrom({ k_accretor_kms: 70, k_donor_kms: 320, [key]: value }),
      InputError,
    );
    assertEquals(error.key, key);
  }
});

Deno.test("binaryFrom() leaves its options as they were", () => {
  const options = Object.freeze({ mass_ratio: 0.2, k_donor_kms: 400, period_d: null });
  assertAlmostEquals(binaryFrom(options).k_accretor_kms, 80, 1e-12);
  assertEquals(options, { mass_ratio: 0.2, k_donor_kms: 400, period_d: null });
});
