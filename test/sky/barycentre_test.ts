import { assert, assertAlmostEquals, assertEquals, assertThrows } from "@std/assert";
import { InputError } from "@millrace/millrace/errors";
import {
  addDays,
  barycentricFactor,
  daysBetween,
  heliocentricToBjd,
  isoDate,
  midExposureBjd,
  parseIsoDate,
  publishedToBjd,
  type SplitDate,
  taiMinusUtc,
  tdbMinusTt,
  toTt,
  ttToTdb,
  utcToTt,
} from "@millrace/millrace/sky";
import barycentric from "../reference/barycentric.json" with { type: "json" };

// deno-lint-ignore no-explicit-any
const cases = barycentric.cases as any[];
const split = (date: number[]) => date as unknown as SplitDate;
const seconds = (later: SplitDate, earlier: SplitDate) => daysBetween(later, earlier) * 86_400;
const sightOf = (one: (typeof cases)[number]) => ({
  target: { ra_deg: one.ra_deg, dec_deg: one.dec_deg },
  site: { latitude_deg: one.lat_deg, longitude_east_deg: one.lon_deg, height_m: one.height_m },
});
const momentOf = (one: (typeof cases)[number]) =>
  midExposureBjd(
    { date: parseIsoDate(one.utc_start), exposure_s: one.exposure_s },
    sightOf(one),
  );

// reference/barycentric.json: astropy with ERFA epv00 (Eastman et al. 2010), 0.1 s required. Ours uses
// a shortened VSOP87, whose Earth is within 10 ms of that.
Deno.test("midExposureBjd() matches the reference to 10 ms when all its cases are tried", () => {
  assertEquals(cases.length, 21);
  for (const one of cases) {
    const { bjd, light_time_s } = momentOf(one);
    assertAlmostEquals(seconds(bjd, split(one.bjd_tdb)), 0, 0.01, one.id);
    assertAlmostEquals(light_time_s, one.roemer_s, 0.01, one.id);
  }
});

// reference/barycentric.json: Wright & Eastman 2014 by astropy, 1 m/s with a full ephemeris; the shortened VSOP87
// is wrong by up to 1.4 m/s in one coordinate of the velocity, so by 2 m/s along a line of sight.
Deno.test("observer_factor matches the reference to 2 m/s when all its cases are tried", () => {
  for (const one of cases) {
    const velocity = (momentOf(one).observer_factor - 1) * 299_792_458;
    assertAlmostEquals(velocity, one.v_full_m_s, 2, one.id);
    const utc = parseIsoDate(one.utc_mid);
    assertEquals(barycentricFactor(utc, sightOf(one)), momentOf(one).observer_factor, one.id);
  }
});

// reference/barycentric.json: IERS leap seconds, exact.
Deno.test("the middle in UTC is exact when the exposure crosses a leap second", () => {
  for (const one of cases) {
    const { utc } = momentOf(one);
    assertEquals(isoDate(utc, { digits: 6 }), one.utc_mid, one.id);
    assertEquals(taiMinusUtc(Math.floor(utc[0] + utc[1] + 0.5)), one.tai_minus_utc_s, one.id);
  }
});

// reference/barycentric.json: TDB − TT at the site within 0.03 ms.
Deno.test("ttToTdb() matches the reference when all its cases are tried", () => {
  for (const one of cases) {
    const tt = utcToTt(parseIsoDate(one.utc_mid));
    assertAlmostEquals(1000 * tdbMinusTt(tt), one.tdb_minus_tt_ms, 0.03, one.id);
    assertAlmostEquals(seconds(ttToTdb(tt), split(one.jd_tdb_mid)), 0, 3e-5, one.id);
  }
});

Deno.test("midExposureBjd() gives one answer when start, middle or end is recorded", () => {
  for (const one of cases) {
    const { bjd, utc } = momentOf(one);
    const half = one.exposure_s / 2 / 86_400;
    const end = toTt(addDays(utcToTt(utc), half), "tt");
    const fromEnd = midExposureBjd(
      { date: end, exposure_s: one.exposure_s, marks: "end", scale: "tt" },
      sightOf(one),
    );
    const fromMiddle = midExposureBjd(
      { date: utc, exposure_s: one.exposure_s, marks: "mid" },
      sightOf(one),
    );
    assertAlmostEquals(seconds(fromEnd.bjd, bjd), 0, 1e-8, one.id);
    assertAlmostEquals(seconds(fromMiddle.bjd, bjd), 0, 1e-8, one.id);
  }
});

// reference/barycentric.json heliocentric_s: light time to the Sun's centre, with the site's 21 ms.
Deno.test("publishedToBjd() undoes the heliocentric correction when dates are HJD in UTC or TT", () => {
  for (const one of cases) {
    const sight = sightOf(one);
    const utc = parseIsoDate(one.utc_mid);
    // HJD(UTC) as published is JD(UTC) plus the light time; on days with a leap second the day's length
    // makes a date in UTC itself ambiguous by up to 1 s.
    const leapDay = ["barycentric-06", "barycentric-15", "barycentric-18"].includes(one.id);
    const hjdUtc = addDays(utc, one.heliocentric_s / 86_400);
    const fromUtc = publishedToBjd({ date: hjdUtc, scale: "utc", place: "heliocentric" }, sight);
    assertAlmostEquals(seconds(fromUtc, split(one.bjd_tdb)), 0, leapDay ? 1.01 : 0.01, one.id);

    const hjdTt = addDays(utcToTt(utc), one.heliocentric_s / 86_400);
    const fromTt = publishedToBjd({ date: hjdTt, scale: "tt", place: "heliocentric" }, sight);
    assertAlmostEquals(seconds(fromTt, split(one.bjd_tdb)), 0, 0.02, one.id);
    const geocentric = heliocentricToBjd(hjdTt, { scale: "tt", target: sight.target });
    assertAlmostEquals(seconds(geocentric, fromTt), 0, 0.001, one.id);
  }
});

Deno.test("publishedToBjd() adds 69.184 s when a BJD was left in UTC", () => {
  const target = { ra_deg: 83, dec_deg: -12 };
  const date = [2460311, 0.25] as const;
  const bjd = publishedToBjd({ date, scale: "utc", place: "barycentric" }, { target });
  assertAlmostEquals(seconds(bjd, date), 69.184, 0.002);
  const same = publishedToBjd({ date, scale: "tdb", place: "barycentric" }, { target });
  assertAlmostEquals(seconds(same, date), 0, 1e-8);
});

Deno.test("heliocentric_factor differs by the Sun's 16 m/s at most when compared", () => {
  for (const one of cases) {
    const { observer_factor, heliocentric_factor } = momentOf(one);
    const apart = (observer_factor - heliocentric_factor) * 299_792_458;
    // Relativity adds 4.6 m/s to the barycentric one.
    assert(Math.abs(apart - 4.65) < 17, `${one.id}: ${apart}`);
  }
});

Deno.test("midExposureBjd() is within the Earth's radius when the site is not known", () => {
  for (const one of cases) {
    const known = momentOf(one);
    const unknown = midExposureBjd(
      { date: parseIsoDate(one.utc_start), exposure_s: one.exposure_s },
      { target: sightOf(one).target },
    );
    assert(Math.abs(seconds(known.bjd, unknown.bjd)) < 0.0214, one.id);
    const apart = (known.observer_factor - unknown.observer_factor) * 299_792_458;
    assert(Math.abs(apart) < 470, one.id);
  }
});

Deno.test("midExposureBjd() warns when leap seconds are not known and refuses far dates", () => {
  const { target } = sightOf(cases[0]);
  const at = (text: string) => midExposureBjd({ date: parseIsoDate(text) }, { target });
  assertEquals(at("2026-06-28T12:00:00").warnings, []);
  assertEquals(at("2026-06-29T12:00:00").warnings.map(({ code }) => code), [
    "leap-seconds-unknown",
  ]);
  const tdb = { date: parseIsoDate("2030-01-01"), scale: "tdb" as const };
  assertEquals(midExposureBjd(tdb, { target }).warnings, []);
  assertThrows(() => at("1971-12-31T23:00:00"), InputError, "from 1972 January 1");
  assertThrows(() => at("2100-01-02"), InputError, "to the end of 2099");
  assertThrows(
    () => midExposureBjd({ date: [60311, 0.5] }, { target }),
    InputError,
    "check that the date is a Julian date",
  );
});

Deno.test("midExposureBjd() names the rule when its input is wrong", () => {
  const { target, site } = sightOf(cases[0]);
  const date = [2460311, 0] as const;
  assertThrows(
    () => midExposureBjd({ date, exposure_s: -1 }, { target }),
    InputError,
    "exposure time",
  );
  assertThrows(() => midExposureBjd({ date: [NaN, 0] }, { target }), InputError, "finite");
  assertThrows(
    () => midExposureBjd({ date }, { target: { ra_deg: 0, dec_deg: 91 } }),
    InputError,
    "declination from -90 to 90",
  );
  assertThrows(
    () => midExposureBjd({ date }, { target, site: { ...site, latitude_deg: 91 } }),
    InputError,
    "its latitude must be from -90 to 90 deg",
  );
});
