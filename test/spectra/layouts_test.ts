import { assert, assertAlmostEquals, assertEquals, assertThrows } from "@std/assert";
import { InputError } from "../../engine/errors.ts";
import { type CardSpec, encodeFits, parseFits } from "../../engine/fits/mod.ts";
import { randomStream } from "../../engine/numerics/mod.ts";
import {
  encodeExposures,
  findTime,
  namedFacts,
  readImage,
  readStack,
  readTable,
  readText1d,
  recordedIn,
  settleExposure,
} from "../../engine/spectra/mod.ts";
import { madeExposures } from "./made_exposures.ts";

const cards = (entries: Record<string, CardSpec["value"]>): CardSpec[] =>
  Object.entries(entries).map(([keyword, value]) => ({ keyword, value }));
const AXIS = { CRVAL1: 5000, CDELT1: 2, CTYPE1: "AWAV", CUNIT1: "Angstrom" };
const FLUX = Float32Array.of(1, 2, 3, 4, 5, 6);

function stack(header: Record<string, CardSpec["value"]>) {
  return parseFits(
    encodeFits([{
      kind: "image",
      shape: [3, 2],
      data: FLUX,
      cards: cards({ ...AXIS, ...header }),
    }]),
    { file: "all.fits" },
  );
}

Deno.test("readStack() takes times from numbered keys, however they are numbered", () => {
  const lists: Record<string, CardSpec["value"]>[] = [
    { MJD1: 60311.25, MJD2: 60311.5, EXPTIME: 60 },
    { MJD001: 60311.25, MJD002: 60311.5, EXP001: 60, EXP002: 60, EXPTIME: 60 },
    { MJD_01: 60311.25, MJD_02: 60311.5, EXPTIME: 60 },
  ];
  for (const list of lists) {
    const rows = readStack(stack({ ...list, "DATE-OBS": "2020-01-01T00:00:00" }));
    const times = rows.map((row) => findTime(row.times)!.date);
    assertEquals(times, [[2460311, 0.75], [2460312, 0]]);
    assertEquals(rows[1]!.flux, Float64Array.of(4, 5, 6));
    assertEquals(rows[1]!.source, "all.fits[2]");
  }
});

Deno.test("readStack() prefers a row's own exposure time, and never takes the file's date for all rows", () => {
  const fits = parseFits(
    encodeFits([
      { kind: "image", shape: [3, 2], data: FLUX, cards: cards({ ...AXIS, EXPTIME: 99 }) },
      {
        kind: "table",
        columns: [
          { name: "HJD", data: Float64Array.of(2460311.25, 2460311.5) },
          { name: "EXPTIME", data: Float64Array.of(60, 70), unit: "s" },
        ],
      },
    ]),
    { file: "all.fits" },
  );
  assertEquals(readStack(fits).map((row) => row.facts.find("EXPTIME")?.text), ["60", "70"]);
  assertThrows(
    () => readStack(stack({ "DATE-OBS": "2024-01-01T00:00:00", EXPTIME: 60 })),
    InputError,
    "Cannot read stack as each of the 2 rows must have a time; tables of as many rows and numbered keys were tried",
  );
});

function table(
  columns: Parameters<typeof encodeFits>[0][number] extends infer H
    ? H extends { kind: "table"; columns: infer C } ? C : never
    : never,
) {
  return parseFits(encodeFits([{ kind: "table", columns }]), { file: "t.fits" });
}

Deno.test("readTable() knows wavelengths, fluxes and errors by many names and units", () => {
  const flux = { name: "flux", data: Float64Array.of(1, 2) };
  const first = (columns: Parameters<typeof table>[0]) => readTable(table(columns))[0]!;
  const cases: [Parameters<typeof table>[0], [number, number]][] = [
    [[{ name: "lambda", data: Float64Array.of(5000, 5001) }, flux], [5000, 5001]],
    [[{ name: "WAVE", unit: "nm", data: Float64Array.of(500, 500.1) }, flux], [5000, 5001]],
    [[{ name: "wavelength_nm", data: Float64Array.of(500, 500.1) }, flux], [5000, 5001]],
    [[{ name: "wave", unit: "um", data: Float64Array.of(0.5, 0.5001) }, flux], [5000, 5001]],
    [[{ name: "loglam", data: Float64Array.of(3.7, 3.70001) }, flux], [10 ** 3.7, 10 ** 3.70001]],
    [[{ name: "WAVELENGTH", data: Float64Array.of(3.7, 3.70001) }, flux], [
      10 ** 3.7,
      10 ** 3.70001,
    ]],
  ];
  for (const [columns, [a, b]] of cases) {
    const { wavelength_angstrom } = first(columns).axis;
    assertAlmostEquals(wavelength_angstrom[0]!, a, 1e-6);
    assertAlmostEquals(wavelength_angstrom[1]!, b, 1e-6);
  }
  const wave = { name: "WAVE", data: Float64Array.of(5000, 5001) };
  const errorOf = (
    name: string,
    values: Float64Array,
  ) => [...first([wave, flux, { name, data: values }]).error!];
  assertEquals(errorOf("ERR_FLUX", Float64Array.of(2, 0)), [2, Infinity]);
  assertEquals(errorOf("IVAR", Float64Array.of(0.25, 0)), [2, Infinity]);
  assertEquals(errorOf("VARIANCE", Float64Array.of(4, NaN)), [2, Infinity]);
  assertEquals(first([wave, flux]).error, null);
  const masked = first([wave, flux, { name: "err", data: Float64Array.of(1, 1) }, {
    name: "MASK",
    data: Int16Array.of(0, 8),
  }]);
  assertEquals([[...masked.error!], masked.flux[0]], [[1, Infinity], 1]);
});

Deno.test("readTable() reads one row of arrays, and several rows as several exposures", () => {
  const one = readTable(table([
    { name: "WAVE", shape: [3], data: Float64Array.of(5000, 5001, 5002) },
    { name: "FLUX", shape: [3], data: Float32Array.of(1, 2, 3) },
  ]));
  assertEquals([one.length, [...one[0]!.flux]], [1, [1, 2, 3]]);
  const two = readTable(table([
    { name: "WAVE", shape: [2], data: Float64Array.of(5000, 5001, 5000.5, 5001.5) },
    { name: "FLUX", shape: [2], data: Float32Array.of(1, 2, 3, 4) },
    { name: "MJD", data: Float64Array.of(60311.25, 60311.5) },
  ]));
  assertEquals(two.map((s) => s.source), ["t.fits[1]", "t.fits[2]"]);
  assertEquals(two.map((s) => findTime(s.times)!.date), [[2460311, 0.75], [2460312, 0]]);
});

Deno.test("readTable() lists the columns when it knows none of them, and takes those that are named", () => {
  const strange = table([
    { name: "X", unit: "nm", data: Float64Array.of(500, 501) },
    { name: "Y", data: Float64Array.of(1, 2) },
  ]);
  assertThrows(
    () => readTable(strange),
    InputError,
    'names such as WAVE, LAMBDA, LOGLAM and FLUX, SPEC were tried: current value is "X, Y" (t.fits); name them by keys.wavelength and keys.flux',
  );
  const [named] = readTable(strange, { keys: { wavelength: "X", flux: "Y" } });
  assertEquals([...named!.axis.wavelength_angstrom], [5000, 5010]);
  assertThrows(
    () =>
      readTable(
        table([{ name: "WAVE", unit: "cubits", data: Float64Array.of(1, 2) }, {
          name: "FLUX",
          data: Float64Array.of(1, 2),
        }]),
      ),
    InputError,
    'the unit of the wavelengths must be known: current value is "cubits" (t.fits, key WAVE)',
  );
});

Deno.test("readImage() takes wavelengths, errors and masks from other HDUs", () => {
  const [spectrum] = readImage(parseFits(
    encodeFits([
      { kind: "image", shape: [], data: null, cards: cards({ EXPTIME: 60 }) },
      { kind: "image", name: "SCI", shape: [3], data: Float32Array.of(1, 2, 3) },
      { kind: "image", name: "VAR", shape: [3], data: Float32Array.of(4, 9, 16) },
      { kind: "image", name: "DQ", shape: [3], data: Uint8Array.of(0, 2, 0) },
      {
        kind: "image",
        name: "WAVELENGTH",
        unit: "nm",
        shape: [3],
        data: Float64Array.of(500, 500.2, 500.5),
      },
    ]),
    { file: "a.fits" },
  ));
  assertEquals([...spectrum!.axis.wavelength_angstrom].map((w) => Math.round(w * 10) / 10), [
    5000,
    5002,
    5005,
  ]);
  assertEquals([...spectrum!.error!], [2, Infinity, 4]);
  assertEquals(spectrum!.facts.find("EXPTIME")?.text, "60");
  assertThrows(
    () =>
      readImage(
        parseFits(encodeFits([{ kind: "image", shape: [], data: null }]), { file: "e.fits" }),
      ),
    InputError,
    'the file must hold an image of fluxes, and it holds none: current value is "0: empty" (e.fits); for a binary table state layout = "table"',
  );
});

Deno.test("readText1d() reads blanks, commas, CRLF, names at the top and facts in comments", () => {
  const of = (text: string) => readText1d(text, { file: "a.txt" });
  assertEquals([...of("lambda,flux,err\r\n5000,1,0.1\r\n5001,nan,0\r\n").error!], [0.1, Infinity]);
  assertEquals(
    of("# EXPTIME = 300\n! note\n500.0\t1.5\n500.2\t1.6\n").facts.find("exptime")?.text,
    "300",
  );
  assertAlmostEquals(of("500.0 1\n500.2 2\n").axis.wavelength_angstrom[1]!, 5002, 1e-9);
  assertEquals([...of("5000 1.5D2\n5001 2e2\n").flux], [150, 200]);
});

Deno.test("settleExposure() brings fluxes per frequency to fluxes per wavelength, and says so", () => {
  const [recorded] = readTable(table([
    { name: "WAVE", unit: "Angstrom", data: Float64Array.of(4000, 5000, 6000) },
    { name: "FLUX", unit: "mJy", data: Float64Array.of(1, 1, 1) },
    { name: "ERR", unit: "mJy", data: Float64Array.of(0.1, 0.1, 0.1) },
  ]));
  const found = namedFacts([["BJD_TDB", "2460311.5"], ["EXPTIME", "60"], ["SPECSYS", "BARYCENT"]]);
  const { spectrum, decisions } = settleExposure({ ...recorded!, times: found, facts: found });
  // F_lambda falls as the square of the wavelength.
  assertAlmostEquals(spectrum.flux[0]! / spectrum.flux[2]!, 2.25, 1e-12);
  assertAlmostEquals(spectrum.error[0]! / spectrum.flux[0]!, 0.1, 1e-12);
  assert(decisions.some((d) => d.value === "per frequency, brought to per wavelength"));
});

Deno.test("recordedIn() and settleExposure() meet damaged headers with a result or an InputError, nothing else", () => {
  const files = (["image", "table", "stack"] as const)
    .map((layout) =>
      encodeExposures(madeExposures({ count: 2, high_angstrom: 4790 }), { layout })[0]!.bytes
    );
  const random = randomStream(11);
  let read = 0;
  for (let trial = 0; trial < 600; trial++) {
    const bytes = files[trial % 3]!.slice();
    for (let n = 0; n < 1 + random.integer(8); n++) {
      // Header characters, mostly of values.
      const at = random.integer(Math.min(bytes.length, 5760));
      bytes[at] = 32 + random.integer(95);
    }
    try {
      for (const one of recordedIn(bytes, { file: "f.fits" }).recorded) {
        const { spectrum } = settleExposure(one);
        assert(spectrum.wavelength_angstrom.every((w) => Number.isFinite(w)), `trial ${trial}`);
        read++;
      }
    } catch (error) {
      assert(error instanceof InputError, `trial ${trial}: ${(error as Error).stack}`);
    }
  }
  assert(read > 100, `${read} read`);
});
