import type { OneDecision } from "./decision.ts";
import type { Facts } from "./facts.ts";
import { firstRead, unreadNote } from "./first_read.ts";
import { numberOf } from "./number_text.ts";

/** An exposure time, and where it stood. */
export interface RecordedDuration {
  /** Exposure time, s. */
  readonly exposure_s: number;
  /** What was decided. */
  readonly decision: OneDecision;
}

/** Keys that are looked up for an exposure time, in order. */
export const EXPOSURE_KEYS: readonly string[] = [
  "XPOSURE",
  "EXPTIME",
  "EXPOSURE",
  "exposure_s",
  "EXP_TIME",
  "EXPOTIME",
  "TEXPTIME",
  "ITIME",
  "TELAPSE",
  "DURATION",
];

/**
 * Finds the exposure time among the facts of an exposure.
 *
 * @param facts The facts.
 * @param keys Names of keys by what they hold: `exposure_s`.
 * @returns The exposure time, whatever its sign; null when there is none.
 * @throws {InputError} When one is there and cannot be read, with its value and key.
 *
 * @example
 * ```ts
 * import { findDuration, namedFacts } from "@millrace/millrace/spectra";
 * import { assertEquals } from "@std/assert";
 *
 * assertEquals(findDuration(namedFacts([["EXPTIME", "300.0"]]), {})?.exposure_s, 300);
 * ```
 */
export function findDuration(
  facts: Facts,
  keys: Readonly<Record<string, string>>,
): RecordedDuration | null {
  const found = firstRead(facts, {
    keys: keys["exposure_s"] === undefined ? EXPOSURE_KEYS : [keys["exposure_s"]],
    read: (fact) => numberOf(fact.text),
    action: "read exposure time",
    rule: "it must be a number",
  });
  if (found === null) return null;
  const { fact, value, unread } = found;
  const minutes = /\bmin(utes?)?\b/i.test(fact.comment);
  const unit = minutes ? `min (${fact.comment})` : "s";
  return {
    exposure_s: minutes ? 60 * value : value,
    decision: {
      what: "exposure time",
      value: minutes ? "minutes" : "seconds",
      from: `${fact.key}, ${unit}${unreadNote(unread)}`,
      assumed: false,
    },
  };
}
