import { assertAlmostEquals, assertEquals, assertThrows } from "@std/assert";
import { InputError } from "../../engine/errors.ts";
import { brightnessDuring, parsePhotometry, parseShifts } from "../../engine/trail/mod.ts";

Deno.test("parsePhotometry() sorts by time and turns magnitudes into fluxes", () => {
  const { time, flux, of } = parsePhotometry("bjd_tdb,magnitude\n2460311.7,15.0\n2460311.6,17.5\n");
  assertEquals([time, of], [[[2460311, 0.6], [2460311, 0.7]], "target"]);
  assertAlmostEquals(flux[1]! / flux[0]!, 10, 1e-9);
});

Deno.test("parsePhotometry() names file, line and column of what is wrong", () => {
  const wrong: [string, string][] = [
    [
      "time,flux\n1,2\n",
      'it must have a column bjd_tdb and one of flux, magnitude, companion_flux, companion_magnitude: current value is "time, flux" (p.csv)',
    ],
    [
      "bjd_tdb,flux\n2460311.5,0\n",
      "a flux must be positive: current value is 0 (p.csv:2, key flux)",
    ],
    ["bjd_tdb,flux\n60311.5,1\n", "(p.csv:2, key bjd_tdb)"],
    ["bjd_tdb,flux\n2460311.5,1\n2460311.5,2\n", "a time must come once"],
    [
      "bjd_tdb,flux\n2460311.5,bright\n",
      'a cell of this column must be a finite decimal number: current value is "bright" (p.csv:2, key flux)',
    ],
  ];
  for (const [text, message] of wrong) {
    assertThrows(() => parsePhotometry(text, { file: "p.csv" }), InputError, message);
  }
});

Deno.test("brightnessDuring() averages within an exposure and interpolates between points", () => {
  const photometry = {
    time: [0, 10, 20, 30].map((s) => [2460311, s / 86400] as const),
    flux: Float64Array.of(1, 2, 3, 10),
    of: "target" as const,
  };
  const at = (s: number, exposure_s: number) =>
    brightnessDuring(photometry, { mid: [2460311, s / 86400], exposure_s });
  assertAlmostEquals(at(10, 24)!, 2, 1e-9);
  assertAlmostEquals(at(15, 2)!, 2.5, 1e-6);
  assertEquals([at(-5, 2), at(40, 2)], [null, null]);
  assertThrows(
    () =>
      brightnessDuring({ ...photometry, flux: Float64Array.of(1) }, {
        mid: [2460311, 0],
        exposure_s: 1,
      }),
    InputError,
    'there must be one flux a time: current value is "4 times, 1 fluxes"',
  );
  assertThrows(
    () =>
      brightnessDuring({ ...photometry, time: photometry.time.toReversed() }, {
        mid: [2460311, 0],
        exposure_s: 1,
      }),
    InputError,
    'times must increase: current value is "point 2 is not after point 1"',
  );
});

Deno.test("parseShifts() finds files by their last name, rows of a stack by their file", () => {
  const shifts = parseShifts("file,shift_kms\nnight1/a.fits,4.5\nall.fits,-2\n", {
    sources: ["/data/a.fits", "/data/all.fits[3]", "/data/b.fits"],
  });
  assertEquals(shifts.map((s) => s.shift_kms), [4.5, -2, NaN]);
  assertThrows(
    () => parseShifts("file,shift_kms\nx.fits,1\n", { sources: ["a.fits"], file: "s.csv" }),
    InputError,
    'at least one of its files must be among the exposures: current value is "x.fits" (s.csv, key file)',
  );
});
