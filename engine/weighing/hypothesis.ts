import { InputError } from "../errors.ts";
import { type PartName, partNames } from "../synthesis/mod.ts";

/** A hypothesis: the parts that shine, each once, in the order in which models sum them. */
export type Hypothesis = readonly PartName[];

/**
 * Checks a list of parts and puts it into its one order.
 *
 * @param parts Names of parts, in any order.
 * @returns The hypothesis.
 * @throws {InputError} When the list is empty, a name is unknown, or one is given twice.
 *
 * @example
 * ```ts
 * import { hypothesisOf } from "@millrace/millrace/weighing";
 * import { assertEquals } from "@std/assert";
 *
 * assertEquals(hypothesisOf(["spot", "disc"]), ["disc", "spot"]);
 * ```
 */
export function hypothesisOf(parts: readonly string[]): Hypothesis {
  const refuse = (rule: string, value: unknown) => {
    throw new InputError({ action: "weigh hypotheses", rule, value, key: "weigh.sets" });
  };
  if (parts.length === 0) refuse("a set must name at least one part", "[]");
  for (const part of parts) {
    if (!(partNames as readonly string[]).includes(part)) {
      refuse(`a part must be one of ${partNames.join(", ")}`, part);
    }
  }
  const chosen = partNames.filter((part) => parts.includes(part));
  if (chosen.length !== parts.length) {
    refuse("a part must stand only once in a set", parts.join(", "));
  }
  return chosen;
}

/**
 * A hypothesis in words, as in "disc + spot".
 *
 * @param hypothesis The parts.
 * @returns Its name.
 *
 * @example
 * ```ts
 * import { hypothesisName } from "@millrace/millrace/weighing";
 * import { assertEquals } from "@std/assert";
 *
 * assertEquals(hypothesisName(["disc", "spot"]), "disc + spot");
 * ```
 */
export function hypothesisName(hypothesis: Hypothesis): string {
  return hypothesis.join(" + ");
}

/**
 * Whether one hypothesis is another with parts left out.
 *
 * @param simple The one that may be nested.
 * @param rich The one with more parts.
 * @returns True when every part of `simple` is in `rich`, and `rich` has more.
 *
 * @example
 * ```ts
 * import { isNested } from "@millrace/millrace/weighing";
 * import { assertEquals } from "@std/assert";
 *
 * assertEquals(isNested(["disc"], ["disc", "spot"]), true);
 * assertEquals(isNested(["disc", "stream"], ["disc", "spot"]), false);
 * ```
 */
export function isNested(simple: Hypothesis, rich: Hypothesis): boolean {
  return simple.length < rich.length && simple.every((part) => rich.includes(part));
}

/**
 * The sets that are weighed when none are stated: a disc alone, with a spot, with the stream, with
 * both, and each of these with the donor.
 *
 * @example
 * ```ts
 * import { defaultSets } from "@millrace/millrace/weighing";
 * import { assertEquals } from "@std/assert";
 *
 * assertEquals(defaultSets.length, 8);
 * ```
 */
export const defaultSets: readonly Hypothesis[] = ([[], ["donor"]] as const).flatMap((donor) =>
  ([[], ["spot"], ["stream"], ["spot", "stream"]] as const).map((more) =>
    hypothesisOf(["disc", ...more, ...donor])
  )
);

/**
 * The sets to weigh, each in its order and only once.
 *
 * @param sets Lists of parts, as `[weigh] sets` of a target file has them.
 * @returns The hypotheses, simplest first.
 * @throws {InputError} When there are none, or one is not a hypothesis.
 *
 * @example
 * ```ts
 * import { hypothesesOf } from "@millrace/millrace/weighing";
 * import { assertEquals } from "@std/assert";
 *
 * assertEquals(hypothesesOf([["spot", "disc"], ["disc"], ["disc", "spot"]]), [
 *   ["disc"],
 *   ["disc", "spot"],
 * ]);
 * ```
 */
export function hypothesesOf(sets: readonly (readonly string[])[]): readonly Hypothesis[] {
  if (sets.length === 0) {
    throw new InputError({
      action: "weigh hypotheses",
      rule: "there must be at least one set of parts",
      value: "[]",
      key: "weigh.sets",
    });
  }
  const found = new Map<string, Hypothesis>();
  for (const set of sets) {
    const hypothesis = hypothesisOf(set);
    found.set(hypothesisName(hypothesis), hypothesis);
  }
  return [...found.values()].sort((a, b) => a.length - b.length);
}
