/** Something that was decided while exposures were read: what, as what, and from where. */
export interface Decision {
  /** Index of the `[[exposures]]` group, from 0. */
  readonly group: number;
  /** What was decided, as in "wavelength medium". */
  readonly what: string;
  /** As what, as in "air". */
  readonly value: string;
  /** From which key or rule, as in "CTYPE1 = 'AWAV'". */
  readonly from: string;
  /** True when nothing in the file says so and a custom of the trade was followed. */
  readonly assumed: boolean;
  /** Number of exposures for which it was decided so. */
  readonly exposures: number;
  /** The first of them. */
  readonly source: string;
}

/** A decision about one exposure. */
export type OneDecision = Pick<Decision, "what" | "value" | "from" | "assumed">;

/**
 * Adds up decisions about single exposures: equal ones become one with a count.
 *
 * @param decided For each exposure its group, source and decisions.
 * @returns Decisions in the order in which they first came.
 *
 * @example
 * ```ts
 * import { addUpDecisions } from "@millrace/millrace/spectra";
 * import { assertEquals } from "@std/assert";
 *
 * const air = { what: "wavelength medium", value: "air", from: "CTYPE1 = 'AWAV'", assumed: false };
 * const [all] = addUpDecisions([
 *   { group: 0, source: "a.fits", decisions: [air] },
 *   { group: 0, source: "b.fits", decisions: [air] },
 * ]);
 * assertEquals([all!.exposures, all!.source], [2, "a.fits"]);
 * ```
 */
export function addUpDecisions(
  decided: readonly {
    readonly group: number;
    readonly source: string;
    readonly decisions: readonly OneDecision[];
  }[],
): Decision[] {
  const found = new Map<string, Decision>();
  for (const { group, source, decisions } of decided) {
    for (const one of decisions) {
      const id = JSON.stringify([group, one.what, one.value, one.from]);
      const known = found.get(id);
      found.set(
        id,
        known === undefined
          ? { group, ...one, exposures: 1, source }
          : { ...known, exposures: known.exposures + 1 },
      );
    }
  }
  return [...found.values()];
}
