import { assertAlmostEquals, assertEquals, assertThrows } from "@std/assert";
import { InputError } from "../../engine/errors.ts";
import {
  type Facts,
  findDirection,
  findDuration,
  findFrame,
  findMedium,
  findResolution,
  findSite,
  findTime,
  namedFacts,
  numberOf,
  requireTime,
  sexagesimalOf,
  splitDateOf,
  writtenTime,
} from "../../engine/spectra/mod.ts";
import { geocentricOfSite } from "../../engine/sky/mod.ts";

function facts(entries: Record<string, string | [string, string]>): Facts {
  const plain = namedFacts(
    Object.entries(entries).map(([key, v]) => [key, typeof v === "string" ? v : v[0]]),
  );
  return {
    find(key) {
      const fact = plain.find(key);
      const entry = fact === undefined ? undefined : entries[fact.key];
      return fact === undefined || typeof entry === "string" || entry === undefined
        ? fact
        : { ...fact, comment: entry[1] };
    },
    names: plain.names,
  };
}

Deno.test("writtenTime() reads dates as headers write them, and nothing else", () => {
  // 2024-01-02 12 h is JD 2460312: Julian day numbers count from noon.
  const dates: [string, string, number, string][] = [
    ["2024-01-02T12:00:00.000", "DATE-OBS", 2460312, "iso"],
    ["2024-01-02 18:00", "DATE-OBS", 2460312.25, "iso"],
    ["2024-01-02", "DATE-OBS", 2460311.5, "date"],
    ["31/12/99", "DATE-OBS", 2451543.5, "date"],
    ["60311.75", "MJD-OBS", 2460312.25, "mjd"],
    ["2460312.25", "JD", 2460312.25, "jd"],
    ["60312.25", "HJD", 2460312.25, "reduced-jd"],
    ["60311.75", "mid", 2460312.25, "mjd"],
    ["2000-02-29T00:00:00", "DATE-OBS", 2451603.5, "iso"],
  ];
  for (const [text, key, jd, form] of dates) {
    const written = writtenTime(text, key)!;
    assertAlmostEquals(written.date[0] + written.date[1], jd, 1e-9, text);
    assertEquals(written.form, form, text);
  }
  for (const bad of ["", "yesterday", "2024-13-02", "2024-01-02T25:00:00", "12", "1e9", "NaN"]) {
    assertEquals(writtenTime(bad, "DATE-OBS"), null, bad);
  }
});

Deno.test("splitDateOf() keeps every digit of a Julian date", () => {
  assertEquals(splitDateOf("2460311.6210712345678"), [2460311, 0.6210712345678]);
  assertEquals(splitDateOf("60311"), [60311, 0]);
  assertEquals(splitDateOf("six"), null);
});

Deno.test("sexagesimalOf() and numberOf() do not take one another's text", () => {
  assertAlmostEquals(sexagesimalOf("-00 30 36")!, -0.51, 1e-12);
  assertAlmostEquals(sexagesimalOf("+12:30.5")!, 12 + 30.5 / 60, 1e-12);
  assertEquals(["12.5", "12:75:00", "ab", ""].map(sexagesimalOf), [null, null, null, null]);
  assertEquals(["1.5E3", ".5", "-", "1.2.3"].map(numberOf), [1500, 0.5, null, null]);
});

Deno.test("findTime() prefers the keys of FITS 4.0 and decides mark, place and scale apart", () => {
  const of = (entries: Record<string, string | [string, string]>, options = {}) => {
    const time = findTime(facts(entries), options);
    return time === null ? null : [time.key, time.mark, time.place, time.scale];
  };
  const day = "2024-01-02T12:00:00";
  assertEquals(of({ "DATE-OBS": day }), ["DATE-OBS", "start", "observatory", "utc"]);
  assertEquals(of({ "DATE-OBS": day, "DATE-AVG": day }), ["DATE-AVG", "mid", "observatory", "utc"]);
  assertEquals(of({ "DATE-END": day }), ["DATE-END", "end", "observatory", "utc"]);
  assertEquals(of({ "DATE-OBS": day, TIMESYS: "TT" }), ["DATE-OBS", "start", "observatory", "tt"]);
  assertEquals(of({ "MJD-BEG": "60311.5", TIMESYS: "TAI" }), [
    "MJD-BEG",
    "start",
    "observatory",
    "tai",
  ]);
  assertEquals(of({ "DATE-AVG": day, TREFPOS: "BARYCENTER", TIMESYS: "TDB" }), [
    "DATE-AVG",
    "mid",
    "barycentric",
    "tdb",
  ]);
  assertEquals(of({ HJD: "2460312.1" }), ["HJD", "mid", "heliocentric", "utc"]);
  assertEquals(of({ HJD: ["2460312.1", "TT at mid-exposure"] }), [
    "HJD",
    "mid",
    "heliocentric",
    "tt",
  ]);
  assertEquals(of({ BJD_TDB: "2460312.1" }), ["BJD_TDB", "mid", "barycentric", "tdb"]);
  assertEquals(of({ BJD: ["2460312.1", "start of exposure, UTC"] }), [
    "BJD",
    "start",
    "barycentric",
    "utc",
  ]);
  assertEquals(of({ JD: ["2460312.1", "middle of exposure"] }), [
    "JD",
    "mid",
    "observatory",
    "utc",
  ]);
  assertEquals(of({ MJD: ["60311.6", "heliocentric MJD, end"] }), [
    "MJD",
    "end",
    "heliocentric",
    "utc",
  ]);
  assertEquals(of({ "DATE-OBS": "2024-01-02", "TIME-OBS": "12:00:00" }), [
    "DATE-OBS + TIME-OBS",
    "start",
    "observatory",
    "utc",
  ]);
  assertEquals(of({ "DATE-OBS": "2024-01-02" }), null);
  assertEquals(of({}), null);
  // What the user states wins.
  assertEquals(of({ EPOCHE: "2460312.1", HJD: "1" }, { keys: { mid: "EPOCHE" } }), [
    "EPOCHE",
    "mid",
    "observatory",
    "utc",
  ]);
  assertEquals(
    of({ "DATE-OBS": day }, { time_marks: "mid", time_scale: "tdb", time_place: "barycentric" }),
    ["DATE-OBS", "mid", "barycentric", "tdb"],
  );
  assertEquals(of({ "DATE-AVG": day, "DATE-OBS": day }, { time_marks: "start" }), [
    "DATE-OBS",
    "start",
    "observatory",
    "utc",
  ]);
});

Deno.test("findTime() says what it assumed", () => {
  const assumed = (entries: Record<string, string>) =>
    findTime(facts(entries))!.decisions.filter((d) => d.assumed).map((d) => d.what);
  assertEquals(assumed({ HJD: "2460312.1" }), ["time marks", "time scale"]);
  assertEquals(
    assumed({ "DATE-AVG": "2024-01-02T12:00:00", TIMESYS: "UTC", TREFPOS: "TOPOCENTER" }),
    [],
  );
  assertEquals(assumed({ HJD: "60312.1" }).includes("time"), true);
});

Deno.test("findDuration() reads seconds, and minutes when the comment says so", () => {
  assertEquals(findDuration(facts({ EXPTIME: "300" }), {})?.exposure_s, 300);
  assertEquals(findDuration(facts({ EXPTIME: "300", XPOSURE: "299.5" }), {})?.exposure_s, 299.5);
  assertEquals(
    findDuration(facts({ EXPOSURE: ["5", "exposure in minutes"] }), {})?.exposure_s,
    300,
  );
  assertEquals(findDuration(facts({ BELICHT: "60" }), { exposure_s: "BELICHT" })?.exposure_s, 60);
  assertEquals(findDuration(facts({ OBJECT: "x" }), {}), null);
});

Deno.test("findSite() reads OBSGEO first, then custom, and west only where it is said", () => {
  const site = { latitude_deg: -30.2, longitude_east_deg: -70.7, height_m: 2700 };
  const [x, y, z] = geocentricOfSite(site);
  const of = (entries: Record<string, string | [string, string]>, options = {}) =>
    findSite(facts(entries), options)?.site ?? null;
  const geo = of({
    "OBSGEO-X": String(x),
    "OBSGEO-Y": String(y),
    "OBSGEO-Z": String(z),
    LATITUDE: "50",
  })!;
  assertAlmostEquals(geo.latitude_deg, -30.2, 1e-9);
  assertAlmostEquals(geo.height_m, 2700, 1e-5);
  assertEquals(of({ "OBSGEO-L": "-70.7", "OBSGEO-B": "-30.2", "OBSGEO-H": "2700" }), site);
  assertEquals(
    of({ LATITUDE: "-30.2", LONGITUD: "289.3", HEIGHT: "2700" })!.longitude_east_deg.toFixed(6),
    "-70.700000",
  );
  const west = {
    SITELAT: "-30.2",
    SITELONG: ["70.7", "[deg] west of Greenwich"] as [string, string],
    SITEALT: "2700",
  };
  assertEquals(of(west), site);
  assertEquals(of({ ...west, SITELONG: "70.7" })!.longitude_east_deg, 70.7);
  assertEquals(of({ ...west, SITELONG: "70.7" }, { keys: { longitude_west: "SITELONG" } }), site);
  assertEquals(of({ SITELAT: "30:12:00 S", SITELONG: "70 42 00 W", SITEALT: "2700" }), site);
  assertEquals(of({ LATITUDE: "-30.2" }), null);
  assertEquals(of({}, { site }), site);
  // Zeros in OBSGEO are a header that was never filled in.
  assertEquals(of({ "OBSGEO-X": "0", "OBSGEO-Y": "0", "OBSGEO-Z": "0" }), null);
});

Deno.test("findDirection() tells hours from degrees", () => {
  const of = (entries: Record<string, string | [string, string]>) =>
    findDirection(facts(entries))?.target ?? null;
  assertEquals(of({ RA: "83.1", DEC: "-12.4" }), { ra_deg: 83.1, dec_deg: -12.4 });
  assertEquals(of({ RA: "05:32:24", DEC: "-12:24:00" })!.ra_deg.toFixed(9), "83.100000000");
  assertEquals(of({ RA: ["5.54", "hours"], DEC: "-12.4" })!.ra_deg.toFixed(9), "83.100000000");
  assertEquals(of({ RA: ["83.1", "[deg] 05:32:24 h:m:s"], DEC: "-12.4" })!.ra_deg, 83.1);
  assertEquals(of({ OBJECT: "x" }), null);
  // A first key that cannot be read gives way to another that can.
  assertEquals(
    of({ RA: "N/A", OBJCTRA: "05 32 24", DEC: "-12.4" })!.ra_deg.toFixed(6),
    "83.100000",
  );
  assertEquals(of({ RA: "83.1" }), null);
  // Precession of 50 years: 0.64 degrees near the equator (Capitaine et al. 2003).
  assertAlmostEquals(of({ RA: "0", DEC: "0", EQUINOX: "B1950.0" })!.ra_deg, 0.6406, 1e-3);
});

Deno.test("findFrame() and findMedium() read what is said, and say what is assumed", () => {
  assertEquals(findFrame(facts({ SPECSYS: "BARYCENT" }), "auto").frame, "barycentric");
  assertEquals(findFrame(facts({ SPECSYS: "GEOCENTR" }), "auto").decision.assumed, true);
  assertEquals(findFrame(facts({}), "auto").decision.assumed, true);
  assertEquals(findFrame(facts({ SPECSYS: "BARYCENT" }), "topocentric").frame, "topocentric");
  assertThrows(
    () => findFrame(facts({ SPECSYS: "LSRK" }), "auto"),
    InputError,
    'SPECSYS must be TOPOCENT, GEOCENTR, HELIOCEN or BARYCENT: current value is "LSRK" (key SPECSYS)',
  );
  const medium = (entries: Record<string, string>, wavelength_angstrom = 5000) =>
    findMedium(facts(entries), { asked: "auto", axis: null, wavelength_angstrom });
  assertEquals(medium({ AIRORVAC: "vac" }).medium, "vacuum");
  assertEquals(medium({ VACUUM: "1" }).medium, "vacuum");
  assertEquals(medium({}).medium, "air");
  assertEquals(medium({}, 1500).medium, "vacuum");
  assertEquals(medium({}).decision.assumed, true);
});

Deno.test("findResolution() tells widths from powers", () => {
  const wavelength_angstrom = Float64Array.of(5000, 6000);
  const of = (entries: Record<string, string | [string, string]>, options = {}) =>
    findResolution(facts(entries), { wavelength_angstrom, ...options })?.resolution_angstrom ??
      null;
  assertEquals(of({ SPEC_RP: "5000" }), Float64Array.of(1, 1.2));
  assertEquals(of({ SPEC_RES: ["0.97", "[Angstrom] FWHM"] }), Float64Array.of(0.97, 0.97));
  assertEquals(of({ SPEC_RES: "5000" }), Float64Array.of(1, 1.2));
  assertEquals(of({}, { resolution_angstrom: 2 }), Float64Array.of(2, 2));
  assertEquals(of({}, { resolving_power: 1000 }), Float64Array.of(5, 6));
  assertAlmostEquals(of({}, { resolution_kms: 60 })![0]!, 1.000692, 1e-5);
  assertEquals(of({}), null);
});

Deno.test("what is there and cannot be read is shown with its key, and is not called missing", () => {
  const cases: [() => unknown, string, string][] = [
    [() => findDirection(facts({ RA: "400", DEC: "-12.4" })), "400", "RA"],
    [() => findDirection(facts({ RA: "83.1", DEC: "south" })), "south", "DEC"],
    [() => findDirection(facts({ RA: ["25.1", "hours"], DEC: "-12.4" })), "25.1", "RA"],
    [() => findSite(facts({ LATITUDE: "abc", LONGITUD: "10" })), "abc", "LATITUDE"],
    [() => findSite(facts({ LATITUDE: "95", LONGITUD: "10" })), "95", "LATITUDE"],
    [
      () => findSite(facts({ "OBSGEO-X": "six", "OBSGEO-Y": "0", "OBSGEO-Z": "0" })),
      "six",
      "OBSGEO-X",
    ],
    // Kilometres.
    [
      () => findSite(facts({ "OBSGEO-X": "1920.4", "OBSGEO-Y": "-5000", "OBSGEO-Z": "-3000" })),
      "1920.4",
      "OBSGEO-X",
    ],
    [() => findDuration(facts({ EXPTIME: "abc" }), {}), "abc", "EXPTIME"],
    [() => requireTime(facts({ "DATE-OBS": "yesterday" })), "yesterday", "DATE-OBS"],
    [() => requireTime(facts({ "DATE-OBS": "2024-01-02", UT: "25:00:00" })), "25:00:00", "UT"],
    [() => requireTime(facts({ "DATE-OBS": "2024-01-02" })), "2024-01-02", "DATE-OBS"],
    [
      () =>
        findResolution(facts({ SPEC_RES: "0" }), { wavelength_angstrom: Float64Array.of(5000) }),
      "0",
      "SPEC_RES",
    ],
  ];
  for (const [work, value, key] of cases) {
    const error = assertThrows(work, InputError);
    assertEquals([error.value, error.key], [value, key]);
  }
  // Where another key gives it, the decision tells what was passed over.
  const passed = findTime(facts({ "DATE-OBS": "yesterday", "MJD-OBS": "60311.5" }));
  assertEquals(passed?.decisions[0]?.from, "MJD-OBS (DATE-OBS = 'yesterday' cannot be read)");
  assertEquals(
    findDuration(facts({ XPOSURE: "abc", EXPTIME: "60" }), {})?.decision.from,
    "EXPTIME, s (XPOSURE = 'abc' cannot be read)",
  );
  assertEquals(
    findDirection(facts({ RA: "83.1", DEC: "-12.4", EQUINOX: "current" }))?.decision.from,
    "RA (degrees), DEC (EQUINOX = current is no equinox: taken as 2000)",
  );
  const medium = findMedium(facts({ AIRORVAC: "helium" }), {
    asked: "auto",
    axis: null,
    wavelength_angstrom: 5000,
  });
  assertEquals(
    medium.decision.from,
    "AIRORVAC = 'helium' is neither air nor vacuum: air in the optical by custom",
  );
  // A key that the user names is never passed over.
  assertEquals(findTime(facts({ T: "noon", "MJD-OBS": "60311.5" }), { keys: { mid: "T" } }), null);
});

Deno.test("findTime() tells place and scale from the name of a column", () => {
  const of = (key: string, value = "2460312.1") => {
    const { place, scale, date } = findTime(namedFacts([[key, value]]), { keys: { mid: key } })!;
    return [place, scale, date[0] + date[1]];
  };
  assertEquals(of("BJD"), ["barycentric", "tdb", 2460312.1]);
  assertEquals(of("BJD_TDB"), ["barycentric", "tdb", 2460312.1]);
  assertEquals(of("BJD_UTC"), ["barycentric", "utc", 2460312.1]);
  assertEquals(of("BMJD", "60311.6"), ["barycentric", "tdb", 2460312.1]);
  assertEquals(of("t_bary"), ["barycentric", "tdb", 2460312.1]);
  assertEquals(of("HJD"), ["heliocentric", "utc", 2460312.1]);
  assertEquals(of("HMJD_TT", "60311.6"), ["heliocentric", "tt", 2460312.1]);
  assertEquals(of("MJD", "60311.6"), ["observatory", "utc", 2460312.1]);
  assertEquals(of("MJD_TT", "60311.6"), ["observatory", "tt", 2460312.1]);
});

Deno.test("findTime() refuses a time scale that it does not know", () => {
  assertThrows(
    () => findTime(facts({ "DATE-OBS": "2024-01-02T12:00:00", TIMESYS: "TCB" })),
    InputError,
    'Cannot read time scale as TIMESYS must be UTC, UT, TAI, TT or TDB: current value is "TCB" (key TIMESYS); state time_scale',
  );
  const told = findTime(facts({ "DATE-OBS": "2024-01-02T12:00:00", TIMESYS: "TCB" }), {
    time_scale: "tdb",
  });
  assertEquals(told?.scale, "tdb");
});
