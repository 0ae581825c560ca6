import { assertGreater } from "@std/assert";
import profiles from "../reference/profiles.json" with { type: "json" };

/** A case of reference/profiles.json. */
export type ProfileCase = { readonly id: string; readonly kind: string } & Record<string, unknown>;

/** All cases of the named kinds, at least one of each. */
export function profileCases(...kinds: string[]): ProfileCase[] {
  const cases = profiles.cases as unknown as ProfileCase[];
  for (const kind of kinds) assertGreater(cases.filter((c) => c.kind === kind).length, 0, kind);
  return cases.filter((c) => kinds.includes(c.kind));
}

/** A column of a reference case. */
export function numbers(column: unknown): number[] {
  return column as number[];
}

/** Bins of a reference case. */
export function bins(column: unknown): [number, number][] {
  return column as [number, number][];
}
