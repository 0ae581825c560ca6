import { InputError } from "../errors.ts";
import type { SplitDate, TimeMark, TimePlace, TimeScale } from "../sky/mod.ts";
import type { OneDecision } from "./decision.ts";
import type { Fact, Facts } from "./facts.ts";
import { unreadError, type UnreadFact, unreadNote } from "./first_read.ts";
import { markOf, placeOf, scaleOf, type TimeKey } from "./time_meaning.ts";
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

function candidates(prefixes: readonly string[]): TimeKey[] {
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
const CANDIDATES: readonly TimeKey[] = [
  { key: "DATE-AVG", mark: "mid", defined: true },
  { key: "DATE-BEG", mark: "start", defined: true },
  { key: "DATE-OBS", mark: "start", defined: false },
  { key: "MJD-AVG", mark: "mid", defined: true },
  { key: "MJD-BEG", mark: "start", defined: true },
  { key: "MJD-OBS", mark: "start", defined: false },
  { key: "DATE-END", mark: "end", defined: true },
  { key: "MJD-END", mark: "end", defined: true },
  ...candidates(["BJD", "BMJD", "HJD", "HMJD"]),
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

const DATE_RULE =
  "it must be an ISO 8601 date such as 2024-03-01T02:03:04.5, or a Julian or modified Julian date";

// The date with the first time of day that can be read; a date alone says too little.
function wholeDate(date: SplitDate, facts: Facts, of: Fact) {
  const unread: UnreadFact[] = [];
  for (const key of TIME_OF_DAY) {
    const fact = facts.find(key);
    if (fact === undefined) continue;
    const whole = withTimeOfDay(date, fact.text);
    if (whole !== null) return { date: whole, key: `${of.key} + ${fact.key}`, unread };
    unread.push({ fact, rule: "it must be a time of day such as 02:03:04.5" });
  }
  if (unread.length === 0) {
    const rule = `it must hold a time of day, or one of ${TIME_OF_DAY.join(", ")} must stand by it`;
    unread.push({ fact: of, rule });
  }
  return { date: null, key: of.key, unread };
}

/** What a search for a time gives. */
export interface TimeSearch {
  /** The time; null when there is none. */
  readonly time: RecordedTime | null;
  /** What stands under keys of times, was preferred, and cannot be read. */
  readonly unread: readonly UnreadFact[];
}

/**
 * Finds the time of an exposure among its facts: the keys of FITS 4.0 first, then those in common
 * use, and decides apart what it marks, for which place it holds and in which scale it is told. A
 * key that the options name is not passed over for another: where it cannot be read there is no
 * time.
 *
 * @param facts The facts of the exposure.
 * @param options Names of keys, and what is known better.
 * @returns The time, and what could not be read on the way to it.
 * @throws {InputError} When TIMESYS names a scale that is not read.
 *
 * @example
 * ```ts
 * import { namedFacts, searchTime } from "@millrace/millrace/spectra";
 * import { assertEquals } from "@std/assert";
 *
 * const facts = namedFacts([["DATE-OBS", "yesterday"], ["MJD-OBS", "60311.5"]]);
 * const { time, unread } = searchTime(facts);
 * assertEquals([time?.key, unread[0]?.fact.text], ["MJD-OBS", "yesterday"]);
 * ```
 */
export function searchTime(facts: Facts, options: FindTimeOptions = {}): TimeSearch {
  const { keys = {}, time_scale = "auto", time_place = "auto", time_marks = "auto" } = options;
  const named = (["mid", "start", "end"] as const).flatMap((mark): TimeKey[] =>
    keys[mark] === undefined ? [] : [{ key: keys[mark], mark, defined: true }]
  );
  const given = named.filter(({ key }) => facts.find(key) !== undefined);
  const unread: UnreadFact[] = [];
  for (const candidate of given.length > 0 ? given : CANDIDATES) {
    const fact = facts.find(candidate.key);
    if (fact === undefined) continue;
    // A mark that the user states rules out keys that by definition mark something else.
    const other = time_marks !== "auto" && candidate.defined && candidate.mark !== time_marks;
    if (other && !named.includes(candidate)) continue;
    const written = writtenTime(fact.text, fact.key);
    if (written === null) {
      if (!unread.some((one) => one.fact.key === fact.key)) unread.push({ fact, rule: DATE_RULE });
      continue;
    }
    const whole = written.form === "date"
      ? wholeDate(written.date, facts, fact)
      : { date: written.date, key: fact.key, unread: [] };
    unread.push(...whole.unread);
    const { date, key } = whole;
    if (date === null) continue;
    const { mark, ...byMark } = named.includes(candidate)
      ? { mark: candidate.mark, from: `keys.${candidate.mark}`, assumed: false }
      : markOf(fact, candidate, time_marks);
    const { place, ...byPlace } = placeOf(fact, facts, time_place);
    const { scale, ...byScale } = scaleOf(fact, facts, { asked: time_scale, place });
    const form = written.form === "reduced-jd" ? "Julian date less 2400000" : written.form;
    const from = `${key}${unreadNote(unread)}`;
    const time = {
      date,
      scale,
      place,
      mark,
      key,
      decisions: [
        { what: "time", value: form, from, assumed: written.form === "reduced-jd" },
        { what: "time marks", value: mark, ...byMark },
        { what: "time place", value: place, ...byPlace },
        { what: "time scale", value: scale, ...byScale },
      ],
    };
    return { time, unread };
  }
  return { time: null, unread };
}

/**
 * The time that {@linkcode searchTime} finds.
 *
 * @param facts The facts of the exposure.
 * @param options Names of keys, and what is known better.
 * @returns The time; null when there is none.
 * @throws {InputError} When TIMESYS names a scale that is not read.
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
  return searchTime(facts, options).time;
}

/**
 * The time that {@linkcode searchTime} finds, or why there is none.
 *
 * @param facts The facts of the exposure.
 * @param options Names of keys, and what is known better.
 * @returns The time.
 * @throws {InputError} When there is no time: with the value and key that could not be read, or the
 * keys that were tried.
 *
 * @example
 * ```ts
 * import { namedFacts, requireTime } from "@millrace/millrace/spectra";
 * import { InputError } from "@millrace/millrace/errors";
 * import { assertThrows } from "@std/assert";
 *
 * const facts = namedFacts([["DATE-OBS", "2024-03-01"], ["UT", "abc"]]);
 * assertThrows(() => requireTime(facts), InputError, 'current value is "abc" (key UT)');
 * ```
 */
export function requireTime(facts: Facts, options: FindTimeOptions = {}): RecordedTime {
  const { time, unread } = searchTime(facts, options);
  if (time !== null) return time;
  const action = "read time of exposure";
  if (unread.length > 0) {
    const remedy = "mend the header or the log, or name another key by keys.mid or keys.start";
    throw unreadError(unread[0]!, { action, remedy });
  }
  const tried = TIME_KEYS.slice(0, 8).join(", ");
  throw new InputError({
    action,
    rule:
      `the file or its log must give one; ${tried}, BJD, HJD, JD, MJD and their variants were tried`,
    value: "none of them",
    remedy: "name the key by keys.mid or keys.start",
  });
}
