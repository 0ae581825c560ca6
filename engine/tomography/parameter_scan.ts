import { InputError } from "../errors.ts";

/** A curve of an objective that behaves like chi-square, and its minimum. */
export interface ParameterScan {
  /** Values tried, increasing. */
  readonly values: Float64Array;
  /** Objective at each. */
  readonly objective: Float64Array;
  /** Where the objective is least, between the values by a parabola; null for a flat curve. */
  readonly best: number | null;
  /** Half the width in which the objective stays within 1 of its least; null for a flat curve. */
  readonly error: number | null;
  /** Least objective. */
  readonly least: number;
  /**
   * `minimum`: one clear minimum. `flat`: no value is worse than the best by 1. `edge`: the least is
   * at the end of the range. `several`: there is another minimum within 4 of the best.
   */
  readonly shape: "minimum" | "flat" | "edge" | "several";
}

/**
 * Scans a parameter: tries values, finds the minimum and its width, and says when the curve has none to
 * speak of. An objective that grows by 1 for one standard deviation is assumed, as chi-square does.
 *
 * @param objective The objective.
 * @param values Values to try, increasing, at least three.
 * @returns The curve and its minimum.
 * @throws {InputError} When there are fewer than three values or they do not increase.
 *
 * @example
 * ```ts
 * import { scanParameter } from "@millrace/millrace/tomography";
 * import { assertAlmostEquals } from "@std/assert";
 *
 * const scan = scanParameter((x) => 7 + ((x - 2) / 0.5) ** 2, [0, 1, 2, 3, 4]);
 * assertAlmostEquals(scan.best ?? NaN, 2, 1e-12);
 * assertAlmostEquals(scan.error ?? NaN, 0.5, 1e-12);
 * ```
 */
export function scanParameter(
  objective: (value: number) => number,
  values: ArrayLike<number>,
): ParameterScan {
  const tried = Float64Array.from(values);
  for (let i = 1; i < tried.length; i++) {
    if (tried[i]! > tried[i - 1]!) continue;
    throw new InputError({ action: "scan", rule: "values must increase", value: tried[i] });
  }
  if (tried.length < 3) {
    throw new InputError({
      action: "scan",
      rule: "there must be at least three values",
      value: tried.length,
    });
  }
  const curve = tried.map(objective);
  const at = curve.reduce((best, y, i) => y < curve[best]! ? i : best, 0);
  const most = curve.reduce((a, b) => Math.max(a, b), -Infinity);
  const none = { values: tried, objective: curve, best: null, error: null, least: curve[at]! };
  if (most - curve[at]! < 1) return { ...none, shape: "flat" };
  if (at === 0 || at === tried.length - 1) {
    return { ...none, best: tried[at]!, shape: "edge" };
  }
  const [x0, x1, x2] = [tried[at - 1]!, tried[at]!, tried[at + 1]!];
  const [y0, y1, y2] = [curve[at - 1]!, curve[at]!, curve[at + 1]!];
  // Divided differences: the values need not be evenly spaced.
  const first = (y1 - y0) / (x1 - x0), second = (y2 - y1) / (x2 - x1);
  const bend = (second - first) / (x2 - x0);
  const best = 0.5 * (x0 + x1 - first / bend);
  const least = y1 - bend * (x1 - best) ** 2;
  const again = curve.some((y, i) =>
    i !== at && i > 0 && i < tried.length - 1 && y < curve[at]! + 4 && y < curve[i - 1]! &&
    y < curve[i + 1]!
  );
  return {
    values: tried,
    objective: curve,
    best,
    error: 1 / Math.sqrt(bend),
    least,
    shape: again ? "several" : "minimum",
  };
}
