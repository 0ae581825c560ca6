import { assert, assertAlmostEquals, assertEquals, assertThrows } from "@std/assert";
import { InputError } from "@millrace/millrace/errors";
import {
  addDays,
  daysBetween,
  isoDate,
  julianDate,
  LEAP_SECONDS_KNOWN_UNTIL,
  modifiedJulianDate,
  parseIsoDate,
  type SplitDate,
  splitDate,
  taiMinusUtc,
  toTt,
  ttToTdb,
  ttToUtc,
  utcToTt,
} from "@millrace/millrace/sky";

const seconds = (later: SplitDate, earlier: SplitDate) => daysBetween(later, earlier) * 86_400;
const LIST = "/usr/share/zoneinfo/leap-seconds.list";
const hasList = (() => {
  try {
    return Deno.statSync(LIST).isFile;
  } catch {
    return false;
  }
})();

// The list of the IERS as Debian's tzdata carries it; seconds since 1900.
Deno.test({
  name: "taiMinusUtc() equals the list of the time-zone package when that is installed",
  ignore: !hasList,
  fn: () => {
    let rows = 0;
    for (const line of Deno.readTextFileSync(LIST).split("\n")) {
      const row = /^(\d+)\s+(\d+)\s/.exec(line);
      if (!row) continue;
      const day = Number(row[1]) / 86_400 + 2_415_021;
      assertEquals(taiMinusUtc(day), Number(row[2]), line);
      if (rows++ > 0) assertEquals(taiMinusUtc(day - 1), Number(row[2]) - 1, line);
    }
    assert(rows >= 28);
  },
});

Deno.test("LEAP_SECONDS_KNOWN_UNTIL is the day it says when written out", () => {
  assertEquals(isoDate([LEAP_SECONDS_KNOWN_UNTIL, 0]), "2026-06-28T12:00:00.000");
});

Deno.test("utcToTt() runs on evenly when a leap second passes", () => {
  const clock = ["23:59:58", "23:59:59", "23:59:60", "23:59:60.75"].map((t) => `2016-12-31T${t}`);
  const dates = [...clock, "2017-01-01T00:00:00", "2017-01-01T00:00:01"].map((t) =>
    parseIsoDate(t)
  );
  const since = dates.map((date) => seconds(utcToTt(date), utcToTt(dates[0]!)));
  [0, 1, 2, 2.75, 3, 4].forEach((s, i) => assertAlmostEquals(since[i]!, s, 1e-9));
  dates.forEach((date, i) => {
    assertEquals(isoDate(ttToUtc(utcToTt(date)), { digits: 2 }), isoDate(date, { digits: 2 }));
    assert(i === 0 || daysBetween(date, dates[i - 1]!) > 0);
  });
  assertEquals(isoDate(dates[3]!, { digits: 2 }), "2016-12-31T23:59:60.75");
});

Deno.test("ttToUtc() undoes utcToTt() when dates run over all leap seconds", () => {
  for (let day = 2441318; day < 2488069; day += 97) {
    for (const fraction of [0, 1e-9, 0.25, 0.4999999, 0.5, 0.999999999]) {
      const utc = [day, fraction] as const;
      assertAlmostEquals(seconds(ttToUtc(utcToTt(utc)), utc), 0, 1e-8);
    }
  }
  for (let s = -3; s < 4; s += 0.125) {
    const tt = addDays(utcToTt(parseIsoDate("2017-01-01")), s / 86_400);
    assertAlmostEquals(seconds(utcToTt(ttToUtc(tt)), tt), 0, 1e-8, `${s}`);
  }
});

Deno.test("toTt() inverts ttToTdb() and knows TAI when scales differ", () => {
  const tt = [2460311, 0.123456789] as const;
  assertAlmostEquals(seconds(toTt(ttToTdb(tt), "tdb"), tt), 0, 1e-9);
  assertAlmostEquals(seconds(toTt(tt, "tai"), tt), 32.184, 1e-9);
  assertEquals(toTt(tt, "tt"), tt);
  assertThrows(() => toTt([2400000, 0], "utc"), InputError, "from 1972 January 1");
});

Deno.test("parseIsoDate() reads the calendar when dates are old, leap or late", () => {
  // Julian day numbers from the astronomical almanac's usual examples, from memory.
  assertEquals(parseIsoDate("2000-01-01T12:00:00.000Z"), [2451545, 0]);
  assertEquals(parseIsoDate("1999-12-31"), [2451543, 0.5]);
  assertEquals(parseIsoDate("1987-01-27"), [2446822, 0.5]);
  assertEquals(parseIsoDate("1858-11-17"), [2400000, 0.5]);
  assertEquals(parseIsoDate("2024-02-29 06:00"), [2460369, 0.75]);
  for (let day = 2440000; day < 2480000; day += 37) {
    assertEquals(parseIsoDate(isoDate([day, 0.5]).slice(0, 10)), [day, 0.5]);
  }
  assertEquals(parseIsoDate("2016-12-31T12:00:00", "tt"), [2457754, 0]);
});

Deno.test("isoDate() carries over when rounding fills the day", () => {
  const late = splitDate(2460311, 0.5 - 1e-7);
  assertEquals(isoDate(late, { digits: 0, scale: "tt" }), "2024-01-02T00:00:00");
  assertEquals(isoDate(late, { digits: 3, scale: "tt" }), "2024-01-01T23:59:59.991");
  const leap = addDays(utcToTt(parseIsoDate("2016-12-31T23:59:60")), 0.9999 / 86_400);
  assertEquals(isoDate(ttToUtc(leap), { digits: 0 }), "2017-01-01T00:00:00");
  assertEquals(isoDate(ttToUtc(leap), { digits: 4 }), "2016-12-31T23:59:60.9999");
  assertThrows(() => isoDate([NaN, 0]), InputError, "finite");
  assertThrows(() => isoDate([2451545, 0], { digits: 10 }), InputError, "0 to 9 digits");
});

Deno.test("parseIsoDate() says why when a date cannot be", () => {
  const wrong: [string, string][] = [
    ["01/02/24", "must be an ISO 8601 date"],
    ["", "must be an ISO 8601 date"],
    ["2024-13-01", "there must be such a day"],
    ["2023-02-29", "there must be such a day"],
    ["2024-00-10", "there must be such a day"],
    ["2024-04-31", "there must be such a day"],
    ["2024-04-30T24:00:00", "there must be such a time of day"],
    ["2024-04-30T12:60:00", "there must be such a time of day"],
    ["2024-04-30T23:59:60", "there must be such a time of day"],
    ["2016-12-31T12:00:60", "there must be such a time of day"],
    ["2016-12-31T23:59:61", "there must be such a time of day"],
    ["2024-04-30T12:00:00+02:00", "must be an ISO 8601 date"],
  ];
  for (const [text, rule] of wrong) {
    const error = assertThrows(() => parseIsoDate(text), InputError, rule);
    assert(error.message.includes(JSON.stringify(text)));
  }
  assertThrows(() => parseIsoDate("2016-12-31T23:59:60", "tt"), InputError, "such a time of day");
});

Deno.test("julianDate() loses no digit when given as text", () => {
  assertEquals(julianDate("2460311.621073450123456"), [2460311, 0.621073450123456]);
  assertEquals(julianDate(2460311.5), [2460311, 0.5]);
  const [whole, fraction] = modifiedJulianDate("60310.62107345012");
  assertEquals(whole, 2460311);
  assertAlmostEquals(fraction, 0.12107345012, 1e-15);
  assertEquals(julianDate(" +2460311 "), [2460311, 0]);
  assertEquals(julianDate("2.4603115e6"), [2460311, 0.5]);
  for (const bad of ["60311.5", -2460311, "", "abc", NaN, Infinity, 2460311000]) {
    assertThrows(() => julianDate(bad), InputError);
  }
  assertThrows(() => modifiedJulianDate(2460311.5), InputError, "from 0 to 100000");
});

Deno.test("splitDate() and addDays() keep 0 ≤ fraction < 1 when parts are negative", () => {
  assertEquals(splitDate(2460311.25, -0.5), [2460310, 0.75]);
  assertEquals(addDays([2460311, 0.75], 0.5), [2460312, 0.25]);
  const tiny = addDays([2460311, 0], -1e-20);
  assert(tiny[1] >= 0 && tiny[1] < 1, `${tiny}`);
});
