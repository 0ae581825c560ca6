/**
 * A value as JSON whose keys are sorted at every depth, so that its digest depends on what it says
 * and not on how it was put together.
 *
 * @param value Plain data.
 * @returns The text.
 *
 * @example
 * ```ts
 * import { canonicalJson } from "@millrace/millrace/campaign";
 * import { assertEquals } from "@std/assert";
 *
 * assertEquals(canonicalJson({ b: [{ d: 1, c: 2 }], a: 0 }), '{"a":0,"b":[{"c":2,"d":1}]}');
 * ```
 */
export function canonicalJson(value: unknown): string {
  return JSON.stringify(
    value,
    (_key, entry) =>
      entry !== null && typeof entry === "object" && !Array.isArray(entry)
        ? Object.fromEntries(
          Object.entries(entry).sort(([a], [b]) => (a < b ? -1 : a > b ? 1 : 0)),
        )
        : entry,
  );
}
