import type { SplitDate, TimeMark, TimePlace, TimeScale } from "../sky/mod.ts";
import type { OneDecision } from "./decision.ts";
import { type Facts, firstFact } from "./facts.ts";
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

/**
 * Finds the time of an exposure among its facts: the keys of FITS 4.0 first, then those in common
 * use, and decides apart what it marks, for which place it holds and in which scale it is told.
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
  const { keys = {}, time_scale = "auto", time_place = "auto", time_marks = "auto" } = options;
  const named = (["mid", "start", "end"] as const).flatMap((mark): TimeKey[] =>
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
