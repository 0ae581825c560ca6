import type { Warning } from "../errors.ts";

/**
 * Says that a goal for chi-square was raised because it was out of reach.
 *
 * @param used Goal in the end, chi-square per sample; null when there was none.
 * @param options The goal asked for.
 * @returns A warning with both goals, or none when they are the same.
 *
 * @example
 * ```ts
 * import { goalRaised } from "@millrace/millrace/tomography";
 * import { assertEquals } from "@std/assert";
 *
 * assertEquals(goalRaised(1.1, { reduced_chi_square: 1.1 }), []);
 * assertEquals(goalRaised(1.4, {}).map((w) => w.code), ["goal-raised"]);
 * ```
 */
export function goalRaised(
  used: number | null,
  options: {
    /** @default {1} */
    readonly reduced_chi_square?: number;
  },
): Warning[] {
  const { reduced_chi_square: asked = 1 } = options;
  if (used === null || used === asked) return [];
  return [{
    code: "goal-raised",
    text:
      `The reduced chi-square asked for, ${asked}, is out of reach: no map of this kind fits the ` +
      `data so closely. The map is that of a goal raised to ${used.toPrecision(4)}.`,
  }];
}
