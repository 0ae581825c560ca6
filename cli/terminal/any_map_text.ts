import type { LineTestsSummary } from "../../engine/campaign/mod.ts";
import { plainNumber, withError } from "./table.ts";

/**
 * What the tests before an inversion say, in one line.
 *
 * @param tests The tests in numbers.
 * @returns The text.
 */
export function anyMapText(tests: LineTestsSummary): string {
  const p = (name: string, value: number | null) =>
    `${name} ${value === null ? "not tested" : `p = ${value.toPrecision(2)}`}`;
  const { best_reduced_chi_square: best, systemic_kms, systemic_error_kms } = tests;
  return [
    p("moments", tests.moments_p),
    p("mirror", tests.mirror_p),
    `${p("core", tests.core_p)}${best === null ? "" : "; "}${
      best === null ? "" : `best positive map χ²/N = ${plainNumber(best, 3)}`
    }${
      systemic_kms === null
        ? ""
        : `; γ by parity ${withError(systemic_kms, systemic_error_kms)} km/s`
    }`,
  ].join(", ");
}
