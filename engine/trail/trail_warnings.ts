import type { Warning } from "../errors.ts";

/** Collects what there is to say while a trail is made. */
export interface WarningList {
  /** What was said so far. */
  readonly said: readonly Warning[];
  /**
   * Says something about some exposures; nothing when there are none.
   *
   * @param code Short stable name.
   * @param text What is said, before the colon.
   * @param sources The exposures; without them the text stands alone.
   */
  about(code: string, text: string, sources?: readonly string[]): void;
}

/**
 * Names, the first five of them in full.
 *
 * @param names The names.
 * @returns One phrase.
 *
 * @example
 * ```ts
 * import { listed } from "@millrace/millrace/trail";
 * import { assertEquals } from "@std/assert";
 *
 * assertEquals(listed(["a", "b", "c", "d", "e", "f", "g"]), "a, b, c, d, e and 2 more");
 * ```
 */
export function listed(names: readonly string[]): string {
  const shown = names.slice(0, 5).join(", ");
  return names.length > 5 ? `${shown} and ${names.length - 5} more` : shown;
}

/**
 * Starts a list of warnings about a line.
 *
 * @param line Name of the line.
 * @param said What was said before.
 * @returns The list.
 *
 * @example
 * ```ts
 * import { warningsOf } from "@millrace/millrace/trail";
 * import { assertEquals } from "@std/assert";
 *
 * const warnings = warningsOf("H beta");
 * warnings.about("blank", "dropped as blank", ["a.fits"]);
 * warnings.about("blank", "dropped as blank", []);
 * assertEquals(warnings.said, [{ code: "blank", text: "dropped as blank: a.fits", line: "H beta" }]);
 * ```
 */
export function warningsOf(line: string, said: readonly Warning[] = []): WarningList {
  const list: Warning[] = said.map((warning) => ({ ...warning, line }));
  return {
    said: list,
    about(code, text, sources) {
      if (sources === undefined) list.push({ code, text, line });
      else if (sources.length > 0) list.push({ code, text: `${text}: ${listed(sources)}`, line });
    },
  };
}
