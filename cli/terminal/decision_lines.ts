import type { Decision } from "../../engine/spectra/mod.ts";
import { tableLines } from "./table.ts";

/** What a decision's value means, in words. */
const VALUES: Readonly<Record<string, Readonly<Record<string, string>>>> = {
  layout: {
    image: "one FITS image an exposure",
    stack: "a FITS image with a row for each exposure",
    table: "FITS tables",
    text: "text tables with a log",
  },
  errors: {
    error: "standard deviations",
    "inverse-variance": "inverse variances",
    variance: "variances",
  },
  time: {
    iso: "date and time",
    jd: "Julian date",
    mjd: "modified Julian date",
  },
  "exposure time": { seconds: "in seconds", minutes: "in minutes" },
  "time place": { observatory: "at the observatory" },
  "time scale": { utc: "UTC", tt: "TT", tdb: "TDB", tai: "TAI" },
  "time marks": {
    start: "start of the exposure",
    mid: "middle of the exposure",
    end: "end of the exposure",
  },
};

/** What follows from it. */
const DONE: Readonly<Record<string, Readonly<Record<string, string>>>> = {
  "wavelength medium": { air: "brought to vacuum" },
  "wavelength frame": {
    topocentric: "the observer's motion taken out",
    heliocentric: "brought from the Sun to the barycentre",
  },
  "time marks": { start: "half the exposure added", end: "half the exposure taken off" },
  "time place": {
    observatory: "light time to the barycentre added",
    heliocentric: "brought from the Sun to the barycentre",
  },
  "time scale": { utc: "brought to TDB", tt: "brought to TDB", tai: "brought to TDB" },
};

/**
 * Tells how files were understood: what was decided, what was done about it, and which key or custom
 * said so. What all groups of exposures share is told once.
 *
 * @param decisions The decisions.
 * @param options How many exposures there are, and in how many groups.
 * @returns Lines.
 */
export function decisionLines(
  decisions: readonly Decision[],
  options: { exposures: number; groups: number },
): string[] {
  const alike = Map.groupBy(
    decisions,
    ({ what, value, from }) => JSON.stringify([what, value, from]),
  );
  const rows = [...alike.values()].map((same) => {
    const { what, value, from, assumed } = same[0]!;
    const done = DONE[what]?.[value];
    const count = same.reduce((sum, { exposures }) => sum + exposures, 0);
    const groups = [...new Set(same.map(({ group }) => group + 1))];
    return [
      what,
      `${VALUES[what]?.[value] ?? value}${done === undefined ? "" : `: ${done}`}`,
      `${assumed ? "assumed, " : ""}${from}`,
      count === options.exposures
        ? ""
        : `${options.groups > 1 ? `group ${groups.join(", ")}: ` : ""}${count} exposures`,
    ];
  });
  const all = [["what", "as", "by", "for"], ...rows];
  const some = rows.some((row) => row[3] !== "");
  return tableLines(some ? all : all.map((row) => row.slice(0, 3)), { heading: true, indent: 4 });
}
