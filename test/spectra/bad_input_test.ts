import { assertEquals, assertRejects } from "@std/assert";
import { InputError } from "../../engine/errors.ts";
import { lineNamed } from "../../engine/sky/mod.ts";
import { encodeExposures, readExposures } from "../../engine/spectra/mod.ts";
import { makeTrail } from "../../engine/trail/mod.ts";
import { EPHEMERIS, madeExposures, written } from "./made_exposures.ts";

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
