import { assert, assertAlmostEquals, assertEquals, assertThrows } from "@std/assert";
import { InputError } from "@millrace/millrace/errors";
import {
  directionFromEquinox,
  geocentricOfSite,
  parseDeclination,
  parseRightAscension,
  siteFromGeocentric,
} from "@millrace/millrace/sky";
import barycentric from "../reference/barycentric.json" with { type: "json" };

const PYTHON = "/usr/bin/python3";
const hasAstropy = await (async () => {
  try {
    const { success } = await new Deno.Command(PYTHON, { args: ["-c", "import astropy"] }).output();
    return success;
  } catch {
    return false;
  }
})();

Deno.test("parseRightAscension() reads what headers write when forms differ", () => {
  const same = [
    "05:32:24.1",
    "5 32 24.1",
    "5h32m24.1s",
    "05h 32m 24.1s",
    "+05:32:24.1",
    "5:32:24.10",
  ];
  for (const text of same) {
    assertAlmostEquals(parseRightAscension(text), 83.10041666666667, 1e-12, text);
  }
  assertEquals(parseRightAscension("05:30"), 82.5);
  assertEquals(parseRightAscension("05 30.5"), 82.625);
  assertEquals(parseRightAscension("83.1"), 83.1);
  assertEquals(parseRightAscension("5.5h"), 82.5);
  assertEquals(parseRightAscension("24:00:00"), 0);
});

Deno.test("parseDeclination() keeps the sign when degrees are zero", () => {
  const same = [
    "-00:30:36",
    "-0 30 36",
    "-0d30m36s",
    "−00°30′36″",
    "-0.51",
    "- 00:30:36",
    "-00:30.6",
  ];
  for (const text of same) assertAlmostEquals(parseDeclination(text), -0.51, 1e-15, text);
  assertEquals(parseDeclination("+90:00:00"), 90);
});

Deno.test("sexagesimal readers say why when the text is none", () => {
  for (
    const bad of [
      "",
      "5:60:00",
      "5:10:60",
      "5:10:-3",
      "x",
      "5:10.5:30",
      "1e3",
      "NaN",
      "25:00:00",
      "-1:0:0",
    ]
  ) {
    assertThrows(() => parseRightAscension(bad), InputError, "Cannot read right ascension", bad);
  }
  for (const bad of ["90:00:01", "-91", "5h10m", "", "12:61"]) {
    assertThrows(() => parseDeclination(bad), InputError, "Cannot read declination", bad);
  }
});

Deno.test("siteFromGeocentric() undoes geocentricOfSite() when sites are anywhere", () => {
  for (const latitude_deg of [-90, -89.9, -45, -1e-9, 0, 28.8, 67.8, 90]) {
    for (const longitude_east_deg of [-179.99, -70.4, 0, 149.1]) {
      for (const height_m of [-420, 0, 4200]) {
        const site = { latitude_deg, longitude_east_deg, height_m };
        const back = siteFromGeocentric(geocentricOfSite(site));
        assertAlmostEquals(back.latitude_deg, latitude_deg, 1e-11);
        assertAlmostEquals(back.height_m, height_m, 1e-8);
        if (Math.abs(latitude_deg) < 90) {
          assertAlmostEquals(back.longitude_east_deg, longitude_east_deg, 1e-11);
        }
      }
    }
  }
});

// reference/barycentric.json parts: the site's distance from the centre and from the axis do not depend on
// the frame but for the 0.3° tilt of precession; the distance is exact.
Deno.test("geocentricOfSite() has the reference's distance when its sites are placed", () => {
  // deno-lint-ignore no-explicit-any
  for (const one of barycentric.cases as any[]) {
    const place = geocentricOfSite({
      latitude_deg: one.lat_deg,
      longitude_east_deg: one.lon_deg,
      height_m: one.height_m,
    });
    const expected = 1000 * Math.hypot(...one.parts.site_gcrs_km as number[]);
    assertAlmostEquals(Math.hypot(...place), expected, 0.01, one.id);
  }
});

Deno.test("sites are refused when they are in space or in other units", () => {
  for (const bad of [[0, 0, 0], [6378, 0, 0], [4.2e7, 0, 0], [NaN, 0, 0]] as const) {
    assertThrows(() => siteFromGeocentric(bad), InputError, "near the ground, in metres");
  }
  assertThrows(
    () => geocentricOfSite({ latitude_deg: 0, longitude_east_deg: 400, height_m: 0 }),
    InputError,
    "east longitude must be from -360 to 360 deg: current value is 400 deg",
  );
});

Deno.test("directionFromEquinox() does nothing at 2000 and is refused when the year is none", () => {
  const direction = { ra_deg: 123.4, dec_deg: -56.7 };
  const same = directionFromEquinox(direction, 2000);
  assertAlmostEquals(same.ra_deg, 123.4, 1e-12);
  assertAlmostEquals(same.dec_deg, -56.7, 1e-12);
  assertThrows(() => directionFromEquinox(direction, 0), InputError, "from 1800 to 2200");
});

// astropy FK5(equinox) → ICRS. Its older precession constant differs by 0.3″ a century, and the frames by
// 0.02″: 0.4″ over the century tried.
Deno.test({
  name: "directionFromEquinox() agrees with astropy when it is installed",
  ignore: !hasAstropy,
  fn: async () => {
    const tried = [[0, 0, 1950], [100, 45, 1950], [250, -80, 1975.5], [300, 20, 2023.5], [
      10,
      89,
      1900,
    ]];
    const script = `
import json
from astropy.coordinates import SkyCoord, FK5
out = []
for ra, dec, year in json.loads('${JSON.stringify(tried)}'):
    c = SkyCoord(ra, dec, unit='deg', frame=FK5(equinox='J%s' % year)).icrs
    out.append([c.ra.deg, c.dec.deg])
print(json.dumps(out))`;
    const { stdout } = await new Deno.Command(PYTHON, { args: ["-c", script] }).output();
    const expected = JSON.parse(new TextDecoder().decode(stdout)) as [number, number][];
    tried.forEach(([ra_deg, dec_deg, year], i) => {
      const here = directionFromEquinox({ ra_deg: ra_deg!, dec_deg: dec_deg! }, year!);
      const [ra, dec] = expected[i]!;
      const arcsec =
        Math.hypot(here.dec_deg - dec, (here.ra_deg - ra) * Math.cos(dec * Math.PI / 180)) * 3600;
      assert(arcsec < 0.4, `${arcsec}`);
    });
  },
});
