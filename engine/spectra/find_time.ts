import type { SplitDate, TimeMark, TimePlace, TimeScale } from "../sky/mod.ts";
import type { OneDecision } from "./decision.ts";
import { type Fact, type Facts, firstFact } from "./facts.ts";
import { numberOf } from "./number_text.ts";
import { withTimeOfDay, writtenTime } from "./written_time.ts";

/** A time as recorded, and what it means. */
export interface RecordedTime {
  /** Julian date in its own scale. */
  readonly date: SplitDate;
  /** Time scale. */
  readonly scale: TimeScale;
  /** Place for which it holds. */
  readonly place: TimePlace;
  /** What it marks of the exposure. */
  readonly mark: TimeMark;
  /** The key it came from. */
  readonly key: string;
  /** What was decided. */
  readonly decisions: readonly OneDecision[];
}

/** Options of {@linkcode findTime}. */
export interface FindTimeOptions {
  /** Names of keys by what they hold: `mid`, `start`, `end`. */
  readonly keys?: Readonly<Record<string, string>>;
  /**
   * Time scale.
   * @default "auto"
   */
  readonly time_scale?: "auto" | TimeScale;
  /**
   * Place.
   * @default "auto"
   */
  readonly time_place?: "auto" | TimePlace;
  /**
   * What the time marks.
   * @default "auto"
   */
  readonly time_marks?: "auto" | TimeMark;
}

interface Candidate {
  readonly key: string;
  /** What it marks by definition or custom. */
  readonly mark: TimeMark;
  /** Whether the FITS standard defines the mark. */
  readonly defined: boolean;
}

function candidates(prefixes: readonly string[]): Candidate[] {
  const spell = (stem: string) => {
    const joined = ["TDB", "TT", "UTC"].flatMap((
      s,
    ) => [`${stem}_${s}`, `${stem}-${s}`, `${stem}${s}`]);
    const mid = [
      `MID${stem}`,
      `MID_${stem}`,
      `MID-${stem}`,
      `${stem}MID`,
      `${stem}_MID`,
      `${stem}-MID`,
    ];
    return [...mid, ...joined, stem];
  };
  return prefixes.flatMap(spell).map((key) => ({ key, mark: "mid" as const, defined: false }));
}

// FITS 4.0, table 30, then the custom of the trade.
const CANDIDATES: readonly Candidate[] = [
  { key: "DATE-AVG", mark: "mid", defined: true },
  { key: "DATE-BEG", mark: "start", defined: true },
  { key: "DATE-OBS", mark: "start", defined: false },
  { key: "MJD-AVG", mark: "mid", defined: true },
  { key: "MJD-BEG", mark: "start", defined: true },
  { key: "MJD-OBS", mark: "start", defined: false },
  { key: "DATE-END", mark: "end", defined: true },
  { key: "MJD-END", mark: "end", defined: true },
  ...candidates(["BJD", "HJD"]),
  { key: "mid", mark: "mid", defined: true },
  { key: "start", mark: "start", defined: true },
  { key: "end", mark: "end", defined: true },
  { key: "UTSTART", mark: "start", defined: true },
  { key: "UTMIDDLE", mark: "mid", defined: true },
  { key: "UTMID", mark: "mid", defined: true },
  ...candidates(["JD"]),
  { key: "MJDSTART", mark: "start", defined: true },
  { key: "MJD", mark: "start", defined: false },
];

const TIME_OF_DAY = [
  "TIME-OBS",
  "TIME-BEG",
  "UTSTART",
  "UT-START",
  "UTC-OBS",
  "UTC",
  "UT",
  "UTOBS",
  "EXPSTART",
  "TIME",
];

/** Keys that are looked up for a time, in order. */
export const TIME_KEYS: readonly string[] = CANDIDATES.map((c) => c.key);

function markOf(fact: Fact, candidate: Candidate, asked: "auto" | TimeMark) {
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

function placeOf(fact: Fact, facts: Facts, asked: "auto" | TimePlace) {
  if (asked !== "auto") return { place: asked, from: "time_place", assumed: false };
  const words = `${fact.key} ${fact.comment}`;
  if (/BJD|barycent/i.test(words)) {
    return { place: "barycentric" as const, from: fact.key, assumed: false };
  }
  if (/HJD|heliocent/i.test(words)) {
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
  return { place: "observatory" as const, from: `custom for ${fact.key}`, assumed: true };
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
  TCB: "tdb",
  TAI: "tai",
  IAT: "tai",
};

function scaleOf(fact: Fact, facts: Facts, parts: { asked: "auto" | TimeScale; place: TimePlace }) {
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

/**
 * Finds the time of an exposure among its facts: the keys of FITS 4.0 first, then those in common
 * use, and decides apart what it marks, for which place it holds and in which scale it is told.
 *
 * @param facts The facts of the exposure.
 * @param options Names of keys, and what is known better.
 * @returns The time; null when there is none.
 *
 * @example
 * ```ts
 * import { findTime, namedFacts } from "@millrace/millrace/spectra";
 * import { assertEquals } from "@std/assert";
 *
 * const time = findTime(namedFacts([["HJD", "2460311.75"]]))!;
 * assertEquals([time.mark, time.place, time.scale], ["mid", "heliocentric", "utc"]);
 * ```
 */
export function findTime(facts: Facts, options: FindTimeOptions = {}): RecordedTime | null {
  const { keys = {}, time_scale = "auto", time_place = "auto", time_marks = "auto" } = options;
  const named = (["mid", "start", "end"] as const).flatMap((mark): Candidate[] =>
    keys[mark] === undefined ? [] : [{ key: keys[mark], mark, defined: true }]
  );
  for (const candidate of [...named, ...CANDIDATES]) {
    const fact = facts.find(candidate.key);
    if (fact === undefined) continue;
    // A mark that the user states rules out keys that by definition mark something else.
    const other = time_marks !== "auto" && candidate.defined && candidate.mark !== time_marks;
    if (other && !named.includes(candidate)) continue;
    const written = writtenTime(fact.text, fact.key);
    if (written === null) continue;
    let { date } = written;
    let key = fact.key;
    if (written.form === "date") {
      const time = firstFact(facts, TIME_OF_DAY);
      const whole = time === undefined ? null : withTimeOfDay(date, time.text);
      if (whole === null) continue;
      date = whole;
      key = `${key} + ${time!.key}`;
    }
    const { mark, ...byMark } = named.includes(candidate)
      ? { mark: candidate.mark, from: `keys.${candidate.mark}`, assumed: false }
      : markOf(fact, candidate, time_marks);
    const { place, ...byPlace } = placeOf(fact, facts, time_place);
    const { scale, ...byScale } = scaleOf(fact, facts, { asked: time_scale, place });
    const form = written.form === "reduced-jd" ? "Julian date less 2400000" : written.form;
    return {
      date,
      scale,
      place,
      mark,
      key,
      decisions: [
        { what: "time", value: form, from: key, assumed: written.form === "reduced-jd" },
        { what: "time marks", value: mark, ...byMark },
        { what: "time place", value: place, ...byPlace },
        { what: "time scale", value: scale, ...byScale },
      ],
    };
  }
  return null;
}

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
  const wanted = keys["exposure_s"] === undefined ? EXPOSURE_KEYS : [keys["exposure_s"]];
  for (const key of wanted) {
    const fact = facts.find(key);
    const value = fact === undefined ? null : numberOf(fact.text);
    if (fact === undefined || value === null) continue;
    const minutes = /\bmin(utes?)?\b/i.test(fact.comment);
    const unit = minutes ? `min (${fact.comment})` : "s";
    return {
      exposure_s: minutes ? 60 * value : value,
      decision: {
        what: "exposure time",
        value: minutes ? "minutes" : "seconds",
        from: `${fact.key}, ${unit}`,
        assumed: false,
      },
    };
  }
  return null;
}
