import { InputError } from "../errors.ts";
import type { TimeMark, TimePlace, TimeScale } from "../sky/mod.ts";
import type { OneDecision } from "./decision.ts";
import type { Fact, Facts } from "./facts.ts";

/** A key under which a time may stand. */
export interface TimeKey {
  /** The key. */
  readonly key: string;
  /** What it marks by definition or custom. */
  readonly mark: TimeMark;
  /** Whether the FITS standard defines the mark. */
  readonly defined: boolean;
}

/** Where a decision came from, and whether it was a custom that decided. */
type Reason = Pick<OneDecision, "from" | "assumed">;

/** Decides what a time marks of its exposure: by what is asked, the key, or the words beside it. */
export function markOf(
  fact: Fact,
  candidate: TimeKey,
  asked: "auto" | TimeMark,
): Reason & { readonly mark: TimeMark } {
  if (asked !== "auto") return { mark: asked, from: "time_marks", assumed: false };
  if (candidate.defined) return { mark: candidate.mark, from: fact.key, assumed: false };
  const said: [RegExp, TimeMark][] = [
    [/\bmid|cent(re|er)|\bmean\b|average/i, "mid"],
    [/\bstart|\bbegin|\bshutter open/i, "start"],
    [/\bend\b|\bstop\b|\bshutter close/i, "end"],
  ];
  const found = said.find(([words]) =>
    words.test(`${fact.key.replace(/_/g, " ")} ${fact.comment}`)
  );
  if (found !== undefined) {
    return { mark: found[1], from: `${fact.key} / ${fact.comment}`, assumed: false };
  }
  return { mark: candidate.mark, from: `custom for ${fact.key}`, assumed: true };
}

/** Decides for which place a time holds: by what is asked, the key, the words beside it, or TREFPOS. */
export function placeOf(
  fact: Fact,
  facts: Facts,
  asked: "auto" | TimePlace,
): Reason & { readonly place: TimePlace } {
  if (asked !== "auto") return { place: asked, from: "time_place", assumed: false };
  const words = `${fact.key} ${fact.comment}`;
  if (/BM?JD|BARY/i.test(words)) {
    return { place: "barycentric" as const, from: fact.key, assumed: false };
  }
  if (/HM?JD|HELIO/i.test(words)) {
    return { place: "heliocentric" as const, from: fact.key, assumed: false };
  }
  const reference = facts.find("TREFPOS");
  if (reference !== undefined && /^(DATE|MJD)[-_]/i.test(fact.key)) {
    const text = reference.text.toUpperCase();
    const from = `TREFPOS = '${reference.text}'`;
    if (text.startsWith("BARY")) return { place: "barycentric" as const, from, assumed: false };
    if (text.startsWith("HELIO")) return { place: "heliocentric" as const, from, assumed: false };
    if (/^(TOPO|GEO)/.test(text)) return { place: "observatory" as const, from, assumed: false };
  }
  const unknown = reference !== undefined && /^(DATE|MJD)[-_]/i.test(fact.key)
    ? ` (TREFPOS = '${reference.text}' is not known)`
    : "";
  return {
    place: "observatory" as const,
    from: `custom for ${fact.key}${unknown}`,
    assumed: true,
  };
}

const SCALES: Readonly<Record<string, TimeScale>> = {
  UTC: "utc",
  GMT: "utc",
  UT: "utc",
  UT1: "utc",
  TT: "tt",
  TDT: "tt",
  ET: "tt",
  TDB: "tdb",
  TAI: "tai",
  IAT: "tai",
};

/** Decides in which scale a time is told: by what is asked, the key, the words beside it, or TIMESYS. */
export function scaleOf(
  fact: Fact,
  facts: Facts,
  parts: { readonly asked: "auto" | TimeScale; readonly place: TimePlace },
): Reason & { readonly scale: TimeScale } {
  const { asked, place } = parts;
  if (asked !== "auto") return { scale: asked, from: "time_scale", assumed: false };
  const named = /(TDB|TDT|TAI|UTC|TT|UT)/i.exec(fact.key.replace(/^(UTSTART|UTMID\w*)$/i, "UT"))
    ?.[1];
  if (named !== undefined) {
    return { scale: SCALES[named.toUpperCase()]!, from: fact.key, assumed: false };
  }
  const commented = /\b(TDB|TDT|TAI|UTC|TT|UT)\b/i.exec(fact.comment)?.[1];
  if (commented !== undefined) {
    return {
      scale: SCALES[commented.toUpperCase()]!,
      from: `${fact.key} / ${fact.comment}`,
      assumed: false,
    };
  }
  const system = facts.find("TIMESYS");
  const known = system === undefined
    ? undefined
    : SCALES[system.text.toUpperCase().replace(/\(.*/, "")];
  if (system !== undefined && known === undefined) {
    throw new InputError({
      action: "read time scale",
      rule: "TIMESYS must be UTC, UT, TAI, TT or TDB",
      value: system.text,
      key: "TIMESYS",
      remedy: "state time_scale",
    });
  }
  if (known !== undefined && place === "observatory") {
    return { scale: known, from: `TIMESYS = '${system!.text}'`, assumed: false };
  }
  if (place === "barycentric") {
    return { scale: "tdb" as const, from: "custom for barycentric dates", assumed: true };
  }
  const standard = /^(DATE|MJD)[-_]/i.test(fact.key);
  const from = place === "heliocentric"
    ? "custom for heliocentric dates"
    : standard
    ? "no TIMESYS: UTC by FITS 4.0"
    : `custom for ${fact.key}`;
  return { scale: "utc" as const, from, assumed: !standard };
}
