import type { FitsHeader } from "../fits/mod.ts";

/** A fact that a header or a log states: text under a key. */
export interface Fact {
  /** The key or column name, as it is written. */
  readonly key: string;
  /** The value as text, without quotes. */
  readonly text: string;
  /** What the file says of it; empty when nothing. */
  readonly comment: string;
  /** File in which it stands, where that is not the spectrum's own. */
  readonly file?: string;
  /** Line in that file, from 1. */
  readonly line?: number;
}

/** Where facts about one exposure are looked up. */
export interface Facts {
  /**
   * Finds a fact.
   *
   * @param key Key or column name, without regard to case.
   */
  find(key: string): Fact | undefined;
  /**
   * Names what can be asked for, without values too.
   *
   * @returns Keys or column names, as they are written.
   */
  names(): readonly string[];
}

/**
 * The facts of a FITS header.
 *
 * @param header The header.
 * @returns Its facts.
 *
 * @example
 * ```ts
 * import { headerFacts } from "@millrace/millrace/spectra";
 * import { encodeFits, parseFits } from "@millrace/millrace/fits";
 * import { assertEquals } from "@std/assert";
 *
 * const bytes = encodeFits([{ kind: "image", shape: [], data: null, cards: [{ keyword: "EXPTIME", value: 60, comment: "s" }] }]);
 * assertEquals(headerFacts(parseFits(bytes).hdus[0]!.header).find("exptime")?.comment, "s");
 * ```
 */
export function headerFacts(header: FitsHeader): Facts {
  return {
    find(key) {
      const card = header.card(key);
      if (card === undefined || card.commentary) return undefined;
      const text = header.string(key)?.trim() ?? "";
      return text === "" ? undefined : { key: card.keyword, text, comment: card.comment };
    },
    names: () => header.cards.filter((card) => !card.commentary).map((card) => card.keyword),
  };
}

/**
 * A key or column name without regard to case and to hyphens, which column names cannot have.
 *
 * @param key The name.
 * @returns The same for names that mean the same.
 *
 * @example
 * ```ts
 * import { plainKey } from "@millrace/millrace/spectra";
 * import { assertEquals } from "@std/assert";
 *
 * assertEquals(plainKey("date_obs"), plainKey("DATE-OBS"));
 * ```
 */
export function plainKey(key: string): string {
  return key.trim().toUpperCase().replaceAll("-", "_");
}

/**
 * Facts given by name, such as the row of a log.
 *
 * @param entries Names and values.
 * @param place File and line in which they stand, where that is not the spectrum's own file.
 * @returns The facts; an empty value is none.
 *
 * @example
 * ```ts
 * import { namedFacts } from "@millrace/millrace/spectra";
 * import { assertEquals } from "@std/assert";
 *
 * const facts = namedFacts([["mid", "2460311.5"], ["note", ""]]);
 * assertEquals([facts.find("MID")?.text, facts.find("note")], ["2460311.5", undefined]);
 * ```
 */
export function namedFacts(
  entries: Iterable<readonly [string, string]>,
  place: Pick<Fact, "file" | "line"> = {},
): Facts {
  const known = new Map<string, Fact>();
  const names: string[] = [];
  for (const [key, text] of entries) {
    const id = plainKey(key);
    names.push(key.trim());
    if (text.trim() !== "" && !known.has(id)) {
      known.set(id, { key: key.trim(), text: text.trim(), comment: "", ...place });
    }
  }
  return { find: (key) => known.get(plainKey(key)), names: () => names };
}

/**
 * Facts from several places: the first place that knows a key is believed.
 *
 * @param places The places, most trusted first.
 * @returns All their facts.
 *
 * @example
 * ```ts
 * import { joinFacts, namedFacts } from "@millrace/millrace/spectra";
 * import { assertEquals } from "@std/assert";
 *
 * const facts = joinFacts([namedFacts([["a", "1"]]), namedFacts([["a", "2"], ["b", "3"]])]);
 * assertEquals([facts.find("a")?.text, facts.find("b")?.text], ["1", "3"]);
 * ```
 */
export function joinFacts(places: readonly Facts[]): Facts {
  return {
    find(key) {
      for (const place of places) {
        const fact = place.find(key);
        if (fact !== undefined) return fact;
      }
      return undefined;
    },
    names: () => places.flatMap((place) => place.names()),
  };
}

/**
 * The first of some keys that is known.
 *
 * @param facts Where to look.
 * @param keys Keys, first choice first.
 * @returns The fact.
 *
 * @example
 * ```ts
 * import { firstFact, namedFacts } from "@millrace/millrace/spectra";
 * import { assertEquals } from "@std/assert";
 *
 * assertEquals(firstFact(namedFacts([["EXPTIME", "60"]]), ["XPOSURE", "EXPTIME"])?.key, "EXPTIME");
 * ```
 */
export function firstFact(facts: Facts, keys: readonly string[]): Fact | undefined {
  for (const key of keys) {
    const fact = facts.find(key);
    if (fact !== undefined) return fact;
  }
  return undefined;
}
