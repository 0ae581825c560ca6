import { assertEquals, assertRejects } from "@std/assert";
import { InputError } from "../../engine/errors.ts";
import { lineNamed } from "../../engine/sky/mod.ts";
import { encodeExposures, readExposures } from "../../engine/spectra/mod.ts";
import { makeTrail } from "../../engine/trail/mod.ts";
import { EPHEMERIS, madeExposures, SITE, TARGET, written } from "./made_exposures.ts";

const raw = madeExposures({ count: 3 });

async function message(work: () => Promise<unknown> | unknown, folder: string): Promise<string> {
  const error = await assertRejects(async () => await work(), InputError);
  return error.message.replaceAll(folder, "DIR");
}

async function files(change: (e: typeof raw[number], k: number) => typeof raw[number] = (e) => e) {
  const paths = await written(encodeExposures(raw.map(change)));
  return { paths, folder: paths[0]!.replace(/\/[^/]*$/, "") };
}

Deno.test("readExposures() refuses a missing file", async () => {
  assertEquals(
    await message(() => readExposures(["nowhere/a.fits"]), "-"),
    "Cannot read spectrum as the file must exist (nowhere/a.fits); check the name and the folder it is looked for in",
  );
});

Deno.test("readExposures() refuses no file at all", async () => {
  assertEquals(
    await message(() => readExposures([]), "-"),
    "Cannot read exposures as there must be at least one file: current value is 0",
  );
});

Deno.test("readExposures() refuses wavelengths that are not monotonic", async () => {
  const { paths, folder } = await files((e, k) =>
    k === 1
      ? { ...e, wavelength_angstrom: e.wavelength_angstrom.map((w, i) => i === 20 ? w - 3 : w) }
      : e
  );
  assertEquals(
    await message(() => readExposures(paths), folder),
    "Cannot read spectrum as wavelengths must increase (or decrease) throughout, and pixel 21 does not after 4768.1692: current value is 4765.6692 angstrom (DIR/exposure-002.fits); join overlapping orders into one spectrum, or give each its own",
  );
});

Deno.test("makeTrail() refuses exposures that are nothing but NaN", async () => {
  const { paths, folder } = await files((e) => ({ ...e, flux: e.flux.map(() => NaN) }));
  const { spectra } = await readExposures(paths);
  assertEquals(
    await message(
      () => makeTrail(spectra, { line: lineNamed("H beta"), ephemeris: EPHEMERIS }),
      folder,
    ),
    "Cannot make trail of H beta as at least one exposure must hold a spectrum: current value is 0; dropped as blank (no two usable samples differ): DIR/exposure-001.fits, DIR/exposure-002.fits, DIR/exposure-003.fits",
  );
});

for (const exposure_s of [0, -30]) {
  Deno.test(`readExposures() refuses an exposure of ${exposure_s} s`, async () => {
    const { paths, folder } = await files((e, k) => k === 2 ? { ...e, exposure_s } : e);
    assertEquals(
      await message(() => readExposures(paths), folder),
      `Cannot read exposure time as exposure time must be positive, and below 1e6 s: current value is ${exposure_s} s (DIR/exposure-003.fits, key XPOSURE); mend the header or the log, or leave the exposure out`,
    );
  });
}

Deno.test("readExposures() refuses a truncated FITS file, with the byte", async () => {
  const { paths, folder } = await files();
  const bytes = await Deno.readFile(paths[1]!);
  await Deno.writeFile(paths[1]!, bytes.subarray(0, 6000));
  const text = await message(() => readExposures(paths), folder);
  assertEquals(/DIR\/exposure-002\.fits/.test(text) && /byte \d+/.test(text), true, text);
});

Deno.test("readExposures() refuses a foreign file that calls itself FITS", async () => {
  const { paths, folder } = await files();
  await Deno.writeTextFile(paths[0]!, "this is a letter to the observatory\n");
  const text = await message(() => readExposures(paths), folder);
  assertEquals(/DIR\/exposure-001\.fits/.test(text) && /byte 0/.test(text), true, text);
  await Deno.writeFile(paths[0]!.replace(".fits", ".dat"), new Uint8Array(5000));
  const binary = await message(() => readExposures([paths[0]!.replace(".fits", ".dat")]), folder);
  assertEquals(/byte 0/.test(binary), true, binary);
});

Deno.test("readExposures() refuses text that is no table, with file and line", async () => {
  const folder = await Deno.makeTempDir();
  const cases: [string, string][] = [
    ["5000 1\n5001 two\n", 'a line must hold numbers: current value is "5001 two" (DIR/a.txt:2)'],
    ["5000 1 2\n5001 1\n", "every line must have 3 columns: current value is 2 (DIR/a.txt:2)"],
    ["5000\n", "a line must hold wavelength and flux: current value is 1 (DIR/a.txt:1)"],
    ["# nothing\n", 'the file must hold lines of numbers: current value is "none" (DIR/a.txt)'],
  ];
  for (const [text, wanted] of cases) {
    await Deno.writeTextFile(`${folder}/a.txt`, text);
    assertEquals(
      await message(() => readExposures([`${folder}/a.txt`]), folder),
      `Cannot read text spectrum as ${wanted}`,
    );
  }
});

Deno.test("readExposures() refuses a log that does not fit its files", async () => {
  const paths = await written(encodeExposures(raw, { layout: "text" }));
  const folder = paths[0]!.replace(/\/[^/]*$/, "");
  const spectra = paths.filter((path) => path.endsWith(".txt"));
  const log = `${folder}/log.csv`;
  const lines = (await Deno.readTextFile(log)).trimEnd().split("\n")
    .filter((line) => !line.startsWith("#"));
  const cases: [string, string][] = [
    [
      [lines[0], lines[1], lines[2]].join("\n"),
      'every file must have a row in the log: current value is "exposure-003.txt" (DIR/log.csv, key file)',
    ],
    [
      [...lines, lines[1]].join("\n"),
      'a file must come once: current value is "exposure-001.txt" (DIR/log.csv:5)',
    ],
    [
      lines.join("\n").replace("file,", "name,"),
      'a column must name the files; the columns are name, start_utc, exposure_s, ra, dec, latitude, longitude, height, resolution: current value is "file" (DIR/log.csv, key keys.file)',
    ],
  ];
  for (const [text, wanted] of cases) {
    await Deno.writeTextFile(log, `${text}\n`);
    assertEquals(
      await message(() => readExposures(spectra, { log }), folder),
      `Cannot read log of spectra as ${wanted}`,
    );
  }
  await Deno.writeTextFile(log, `${lines.join("\n")}\nlost.txt,2024-01-01T00:00:00,60,,,,,,\n`);
  const { warnings } = await readExposures(spectra, { log });
  assertEquals(warnings.map((w) => w.text), [
    "rows of the log name files that were not read: lost.txt",
  ]);
});

/** Overwrites cards of a file's primary header. */
async function spoil(path: string, cards: Record<string, string>) {
  const bytes = await Deno.readFile(path);
  for (const [key, value] of Object.entries(cards)) {
    const at = Array.from({ length: 36 }, (_, k) => 80 * k)
      .find((k) => String.fromCharCode(...bytes.subarray(k, k + 8)).trim() === key)!;
    const card = `${key.padEnd(8)}= ${value}`.padEnd(80);
    bytes.set(new TextEncoder().encode(card), at);
  }
  await Deno.writeFile(path, bytes);
}

Deno.test("readExposures() shows a value that it cannot read, with its key and file", async () => {
  const cases: [Record<string, string>, string][] = [
    [
      { "DATE-OBS": "'yesterday'" },
      'Cannot read time of exposure as it must be an ISO 8601 date such as 2024-03-01T02:03:04.5, or a Julian or modified Julian date: current value is "yesterday" (DIR/exposure-002.fits, key DATE-OBS); mend the header or the log, or name another key by keys.mid or keys.start',
    ],
    [
      { XPOSURE: "'abc'" },
      'Cannot read exposure time as it must be a number: current value is "abc" (DIR/exposure-002.fits, key XPOSURE); mend the header or the log',
    ],
    [
      { RA: "'five'" },
      'Cannot read direction of target as right ascension must be sexagesimal hours, or a number from 0 to 360 degrees: current value is "five" (DIR/exposure-002.fits, key RA); mend the header or the log',
    ],
    [
      { "OBSGEO-Y": "'x'" },
      'Cannot read place of observatory as it must be a number: current value is "x" (DIR/exposure-002.fits, key OBSGEO-Y); mend the header or the log',
    ],
    [
      { CDELT1: "0.0" },
      "Cannot read wavelength axis as the step from pixel to pixel must not be 0: current value is 0 (DIR/exposure-002.fits, key CDELT1); mend the header",
    ],
  ];
  for (const [cards, wanted] of cases) {
    const { paths, folder } = await files();
    await spoil(paths[1]!, cards);
    assertEquals(await message(() => readExposures(paths), folder), wanted);
  }
});

Deno.test("readExposures() goes on without a resolution that it cannot read, and shows the value", async () => {
  const { paths } = await files();
  await spoil(paths[1]!, { SPEC_RES: "'high'" });
  const { spectra, decisions } = await readExposures(paths);
  assertEquals(spectra.map((s) => s.resolution_angstrom === null), [false, true, false]);
  const told = decisions.find((d) => d.what === "resolution" && d.value === "not known");
  assertEquals(
    told?.from,
    "SPEC_RES = 'high' cannot be read: it must be a positive number",
  );
});

Deno.test("readExposures() shows what of a log it cannot read, with its line", async () => {
  const paths = await written(encodeExposures(raw, { layout: "text" }));
  const folder = paths[0]!.replace(/\/[^/]*$/, "");
  const log = `${folder}/log.csv`;
  const text = await Deno.readTextFile(log);
  await Deno.writeTextFile(log, text.replace(/(exposure-002.txt,)[^,]*/, "$1at dawn"));
  const spectra = paths.filter((path) => path.endsWith(".txt"));
  const found = await message(() => readExposures(spectra, { log }), folder);
  assertEquals(
    found.includes('current value is "at dawn" (DIR/log.csv:4, key start_utc)'),
    true,
    found,
  );
});

Deno.test("readExposures() refuses keys that name nothing, with the nearest name", async () => {
  const { paths, folder } = await files();
  const table = await written(encodeExposures(raw, { layout: "table" }));
  const text = await written(encodeExposures(raw, { layout: "text" }));
  const txt = text.filter((path) => path.endsWith(".txt"));
  const log = text.at(-1)!;
  const cases: [() => Promise<unknown>, string][] = [
    [
      () => readExposures(paths, { keys: { start: "DATE-OBSS" } }),
      'Cannot read exposures as the header, the row or the log of every exposure must have what keys.start names: current value is "DATE-OBSS" (DIR/exposure-001.fits, key keys.start); the nearest name there is "DATE-OBS"; exposures that lack it go into [[exposures]] of their own',
    ],
    [
      () => readExposures(paths, { keys: { exposure_s: "XPOSUR" } }),
      'what keys.exposure_s names: current value is "XPOSUR" (DIR/exposure-001.fits, key keys.exposure_s); the nearest name there is "XPOSURE"',
    ],
    [
      () => readExposures(paths, { keys: { flux: "FLUX" } }),
      "keys.flux names a column of a FITS table, and the layout here is image",
    ],
    [
      () => readExposures(paths, { keys: { file: "name" } }),
      "keys.file names a column of the log, and there is no log",
    ],
    [
      () => readExposures(table, { keys: { error: "IVARR" } }),
      'the table of every file must have what keys.error names: current value is "IVARR"',
    ],
    [
      () => readExposures(table, { keys: { aperture: "2" } }),
      "keys.aperture is the row of an image with several objects, and the layout here is table",
    ],
    [
      () => readExposures(txt, { log, keys: { mid: "start_utd" } }),
      'the nearest name there is "start_utc"',
    ],
  ];
  for (const [work, wanted] of cases) {
    const found = await message(work, folder);
    assertEquals(found.includes(wanted), true, found);
  }
});

Deno.test("readExposures() refuses a named key that one exposure of a group lacks or leaves empty", async () => {
  const { paths, folder } = await files();
  await spoil(paths[2]!, { "DATE-OBS": "''" });
  assertEquals(
    (await message(() => readExposures(paths, { keys: { start: "DATE-OBS" } }), folder)).includes(
      'what keys.start names must have a value for every exposure: current value is "DATE-OBS" (DIR/exposure-003.fits, key keys.start)',
    ),
    true,
  );
  // One of several times may be empty.
  const text = await written(encodeExposures(raw, { layout: "text" }));
  const log = text.at(-1)!;
  const rows = [
    "file,early,late,exposure_s",
    "exposure-001.txt,2460311.5,,240",
    "exposure-002.txt,,2460311.6,240",
    "exposure-003.txt,2460311.7,,240",
  ];
  await Deno.writeTextFile(log, `${rows.join("\n")}\n`);
  const { spectra } = await readExposures(text.slice(0, -1), {
    log,
    keys: { start: "early", end: "late" },
    time_place: "barycentric",
    time_scale: "tdb",
    site: SITE,
    target: TARGET,
  });
  assertEquals(spectra.map(({ mid }) => (mid[0] + mid[1]).toFixed(5)), [
    "2460311.50139",
    "2460311.59861",
    "2460311.70139",
  ]);
});

Deno.test("readExposures() warns where a Julian date is taken as the observatory's", async () => {
  const text = await written(encodeExposures(raw, { layout: "text" }));
  const log = text.at(-1)!;
  const codes = async (column: string, value = "2460311.5", more = {}) => {
    const rows = text.slice(0, -1).map((path) => `${path.replace(/.*\//, "")},${value},240`);
    await Deno.writeTextFile(log, `file,${column},exposure_s\n${rows.join("\n")}\n`);
    const { warnings } = await readExposures(text.slice(0, -1), {
      log,
      site: SITE,
      target: TARGET,
      ...more,
    });
    return warnings.map(({ code }) => code);
  };
  assertEquals(await codes("mid"), ["time-scale-assumed", "time-place-assumed"]);
  assertEquals(await codes("JD"), [
    "time-scale-assumed",
    "time-place-assumed",
    "time-mark-assumed",
  ]);
  assertEquals(await codes("mid", "60311.0"), ["time-scale-assumed", "time-place-assumed"]);
  // What the name, the user, or a calendar says needs no warning.
  assertEquals(await codes("mid_bjd_tdb"), []);
  assertEquals(await codes("mid (BJD_TDB)"), []);
  assertEquals(await codes("BJD_TDB", undefined, { keys: { mid: "BJD_TDB" } }), []);
  assertEquals(await codes("mid", undefined, { time_place: "barycentric", time_scale: "tdb" }), []);
  assertEquals(await codes("mid_utc", "2024-01-01T00:00:00"), []);
});
