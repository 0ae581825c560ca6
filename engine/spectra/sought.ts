import { InputError } from "../errors.ts";
import type { OneDecision } from "./decision.ts";

/**
 * Looks for something that an exposure may do without. A value that is there and cannot be read
 * then counts as not known, and a decision shows it; where it is needed, it is an error.
 *
 * @typeParam T What is looked for.
 * @param find Looks for it.
 * @param options What it is, for the decision, and whether it is needed.
 * @returns What was found, and what was decided.
 */
export function sought<T extends { readonly decision: OneDecision }>(
  find: () => T | null,
  options: { readonly what: string; readonly needed: boolean },
): { readonly found: T | null; readonly decisions: readonly OneDecision[] } {
  const { what, needed } = options;
  try {
    const found = find();
    return { found, decisions: found === null ? [] : [found.decision] };
  } catch (error) {
    if (needed || !(error instanceof InputError)) throw error;
    const from = `${error.key} = '${error.value}' cannot be read: ${error.rule}`;
    return { found: null, decisions: [{ what, value: "not known", from, assumed: true }] };
  }
}
