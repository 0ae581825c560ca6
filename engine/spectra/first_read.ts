import { InputError } from "../errors.ts";
import type { Fact, Facts } from "./facts.ts";

/** A fact that cannot be read, and the rule that it breaks. */
export interface UnreadFact {
  /** The fact. */
  readonly fact: Fact;
  /** What its value must be, as in "it must be a number of seconds". */
  readonly rule: string;
}

/** The first of some facts that can be read. */
export interface FactRead<T> {
  /** The fact. */
  readonly fact: Fact;
  /** Its value. */
  readonly value: T;
  /** Those before it that are there and cannot be read. */
  readonly unread: readonly UnreadFact[];
}

/**
 * Reads the first of some keys whose value can be read. One that is there and cannot be read is no
 * missing one: where no other can be read it is an error that shows it.
 *
 * @typeParam T What a value is read as.
 * @param facts Where to look.
 * @param options Keys, first choice first; how a value is read (null when it cannot be); what is
 * done and the rule, for the message.
 * @returns The value and its key; null when none of the keys is there.
 * @throws {InputError} When some are there and none can be read: with the first, its value and key.
 *
 * @example
 * ```ts
 * import { firstRead, namedFacts, numberOf } from "@millrace/millrace/spectra";
 * import { assertEquals } from "@std/assert";
 *
 * const facts = namedFacts([["XPOSURE", "abc"], ["EXPTIME", "60"]]);
 * const found = firstRead(facts, {
 *   keys: ["XPOSURE", "EXPTIME"],
 *   read: (fact) => numberOf(fact.text),
 *   action: "read exposure time",
 *   rule: "it must be a number",
 * });
 * assertEquals([found?.value, found?.unread[0]?.fact.text], [60, "abc"]);
 * ```
 */
export function firstRead<T>(facts: Facts, options: {
  readonly keys: readonly string[];
  readonly read: (fact: Fact) => T | null;
  readonly action: string;
  readonly rule: string;
}): FactRead<T> | null {
  const { keys, read, action, rule } = options;
  const unread: UnreadFact[] = [];
  for (const key of keys) {
    const fact = facts.find(key);
    if (fact === undefined) continue;
    const value = read(fact);
    if (value !== null) return { fact, value, unread };
    if (!unread.some((one) => one.fact.key === fact.key)) unread.push({ fact, rule });
  }
  if (unread.length === 0) return null;
  throw unreadError(unread[0]!, { action });
}

/**
 * The error for a fact that cannot be read.
 *
 * @param unread The fact and its rule.
 * @param options What is being done; what can be done about it.
 * @returns The error, with the fact's key, value and, where it is known, file and line.
 *
 * @example
 * ```ts
 * import { unreadError } from "@millrace/millrace/spectra";
 * import { assertEquals } from "@std/assert";
 *
 * const fact = { key: "EXPTIME", text: "abc", comment: "" };
 * const error = unreadError({ fact, rule: "it must be a number" }, { action: "read exposure time" });
 * assertEquals(
 *   error.message,
 *   'Cannot read exposure time as it must be a number: current value is "abc" (key EXPTIME); mend the header or the log',
 * );
 * ```
 */
export function unreadError(
  unread: UnreadFact,
  options: { readonly action: string; readonly remedy?: string },
): InputError {
  const { fact: { key, text, file, line }, rule } = unread;
  const { action, remedy = "mend the header or the log" } = options;
  return new InputError({ action, rule, value: text, key, remedy, file, line });
}

/**
 * Says in a decision which values were passed over.
 *
 * @param unread Facts that could not be read.
 * @returns Such as " (XPOSURE = 'abc' cannot be read)"; empty without any.
 *
 * @example
 * ```ts
 * import { unreadNote } from "@millrace/millrace/spectra";
 * import { assertEquals } from "@std/assert";
 *
 * const fact = { key: "XPOSURE", text: "abc", comment: "" };
 * assertEquals(unreadNote([{ fact, rule: "" }]), " (XPOSURE = 'abc' cannot be read)");
 * assertEquals(unreadNote([]), "");
 * ```
 */
export function unreadNote(unread: readonly UnreadFact[]): string {
  if (unread.length === 0) return "";
  return ` (${unread.map(({ fact }) => `${fact.key} = '${fact.text}'`).join(", ")} cannot be read)`;
}
