import type { Run } from "./display_list.ts";

const markup = /\*([^*]*)\*|\^\{([^}]*)\}|_\{([^}]*)\}/g;

/**
 * Runs of a label from a small markup: `*V*` is italic, `^{…}` raised, `_{…}` lowered. For labels of
 * our own; text from a user goes through {@linkcode plainRuns}, which leaves every character as it is.
 *
 * @param label The marked-up label.
 * @returns Its runs.
 *
 * @example
 * ```ts
 * import { labelRuns } from "@millrace/millrace/figures";
 * import { assertEquals } from "@std/assert";
 *
 * assertEquals(labelRuns("*V*_{x} (km s^{−1})"), [
 *   { text: "V", italic: true },
 *   { text: "x", script: "sub" },
 *   { text: " (km s" },
 *   { text: "−1", script: "super" },
 *   { text: ")" },
 * ]);
 * ```
 */
export function labelRuns(label: string): Run[] {
  const runs: Run[] = [];
  let from = 0;
  for (const match of label.matchAll(markup)) {
    if (match.index > from) runs.push({ text: label.slice(from, match.index) });
    const [whole, italic, raised, lowered] = match;
    if (italic !== undefined) runs.push({ text: italic, italic: true });
    if (raised !== undefined) runs.push({ text: raised, script: "super" });
    if (lowered !== undefined) runs.push({ text: lowered, script: "sub" });
    from = match.index + whole.length;
  }
  if (from < label.length) runs.push({ text: label.slice(from) });
  return runs;
}

/**
 * Text from a user as one run, every character as it is.
 *
 * @param text The text.
 * @returns One run, or none for empty text.
 *
 * @example
 * ```ts
 * import { plainRuns } from "@millrace/millrace/figures";
 * import { assertEquals } from "@std/assert";
 *
 * assertEquals(plainRuns("star *7*"), [{ text: "star *7*" }]);
 * ```
 */
export function plainRuns(text: string): Run[] {
  return text === "" ? [] : [{ text }];
}

/**
 * The characters of runs in one string: for captions, alt text and tests.
 *
 * @param runs Runs of a label.
 * @returns Their text.
 *
 * @example
 * ```ts
 * import { labelRuns, runsText } from "@millrace/millrace/figures";
 * import { assertEquals } from "@std/assert";
 *
 * assertEquals(runsText(labelRuns("km s^{−1}")), "km s−1");
 * ```
 */
export function runsText(runs: readonly Run[]): string {
  return runs.map((run) => run.text).join("");
}

/**
 * About how wide a line of text is, without looking into a font: half of its size a character. For choices
 * such as what fits where.
 *
 * @param runs Its runs.
 * @param size_pt Its size, pt.
 * @returns Width, pt.
 *
 * @example
 * ```ts
 * import { labelRuns, roughWidth } from "@millrace/millrace/figures";
 * import { assertEquals } from "@std/assert";
 *
 * assertEquals(roughWidth(labelRuns("−2000"), 8), 20);
 * ```
 */
export function roughWidth(runs: readonly Run[], size_pt: number): number {
  return runs.reduce((sum, run) => {
    return sum + 0.5 * [...run.text].length * runStyle(run, size_pt).size_pt;
  }, 0);
}

/** Scripts are this part of the text's size. */
const SCRIPT_SCALE = 0.7;
/** No letter is set smaller than this, pt: the least that journals print. */
export const SMALLEST_TEXT_PT = 6;

/** Size and shift of a run within its line. */
export interface RunStyle {
  /** Size, pt. */
  readonly size_pt: number;
  /** Shift of the baseline, pt, downwards. */
  readonly shift_pt: number;
}

/**
 * Size and shift of a run: scripts are 70 % of the text, but never below 6 pt, raised by 0.38 or lowered
 * by 0.20 of its size.
 *
 * @param run The run.
 * @param size_pt Size of the line of text, pt.
 * @returns Size and downward shift, pt.
 *
 * @example
 * ```ts
 * import { runStyle } from "@millrace/millrace/figures";
 * import { assertEquals } from "@std/assert";
 *
 * assertEquals(runStyle({ text: "x" }, 8), { size_pt: 8, shift_pt: 0 });
 * assertEquals(runStyle({ text: "x", script: "sub" }, 10), { size_pt: 7, shift_pt: 2 });
 * assertEquals(runStyle({ text: "x", script: "super" }, 8).size_pt, 6);
 * ```
 */
export function runStyle(run: Run, size_pt: number): RunStyle {
  if (run.script === undefined) return { size_pt, shift_pt: 0 };
  const shift_pt = size_pt * (run.script === "super" ? -0.38 : 0.2);
  return {
    size_pt: Math.max(SCRIPT_SCALE * size_pt, Math.min(SMALLEST_TEXT_PT, size_pt)),
    shift_pt,
  };
}
