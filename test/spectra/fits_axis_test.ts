import { assertAlmostEquals, assertEquals, assertThrows } from "@std/assert";
import { InputError } from "../../engine/errors.ts";
import { type CardSpec, encodeFits, type FitsHeader, parseFits } from "../../engine/fits/mod.ts";
import { readBytes } from "../../engine/files/mod.ts";
import { fitsAxis, readImage, readTable } from "../../engine/spectra/mod.ts";
import reference from "../reference/fits.json" with { type: "json" };

function header(cards: Record<string, CardSpec["value"]>): FitsHeader {
  const bytes = encodeFits([{
    kind: "image",
    shape: [4],
    data: new Float32Array(4),
    cards: Object.entries(cards).map(([keyword, value]) => ({ keyword, value })),
  }]);
  return parseFits(bytes).hdus[0]!.header;
}

interface Case {
  id: string;
  kind: string;
  file: string;
  hdus: { wavelength_A?: number[]; air?: boolean | null; data?: number[] }[];
}

const cases = reference.cases as unknown as Case[];
const path = (file: string) => new URL(`../reference/${file}`, import.meta.url).pathname;

// reference/fits.json, kinds spectrum, dcflag: astropy.wcs and Greisen et al. 2006, 1e-6 Å.
Deno.test("fitsAxis() finds the wavelengths of every reference spectrum", async () => {
  const spectra = cases.filter((c) => c.kind === "spectrum" || c.kind === "dcflag");
  assertEquals(spectra.length, 6);
  for (const c of spectra) {
    const fits = parseFits(await readBytes(path(c.file)), { file: c.file });
    const { wavelength_A: wanted = [], air } = c.hdus[0]!;
    const axis = fitsAxis(fits.hdus[0]!.header, { count: wanted.length });
    wanted.forEach((w, i) => assertAlmostEquals(axis.wavelength_angstrom[i]!, w, 1e-6, c.id));
    assertEquals(axis.medium, air === null ? null : air ? "air" : "vacuum", c.id);
  }
});

// reference/fits.json, kind spectrum_table.
Deno.test("readTable() finds the wavelengths of the reference table", async () => {
  const c = cases.find((each) => each.kind === "spectrum_table")!;
  const [spectrum] = readTable(parseFits(await readBytes(path(c.file)), { file: c.file }));
  c.hdus[1]!.wavelength_A!.forEach((w, i) =>
    assertAlmostEquals(spectrum!.axis.wavelength_angstrom[i]!, w, 1e-6)
  );
  assertEquals(spectrum!.unit, "mJy");
});

const LINEAR = { CRVAL1: 5000, CDELT1: 2, CRPIX1: 1 };

Deno.test("fitsAxis() takes the matrix before CDELT and a PC factor into account", () => {
  const at = (
    cards: Record<string, CardSpec["value"]>,
  ) => [...fitsAxis(header(cards), { count: 2 }).wavelength_angstrom];
  assertEquals(at({ CTYPE1: "AWAV", CUNIT1: "Angstrom", ...LINEAR }), [5000, 5002]);
  assertEquals(at({ CTYPE1: "AWAV", CUNIT1: "Angstrom", ...LINEAR, CD1_1: 3 }), [5000, 5003]);
  assertEquals(at({ CTYPE1: "AWAV", CUNIT1: "Angstrom", ...LINEAR, PC1_1: 2 }), [5000, 5004]);
  assertEquals(at({ CTYPE1: "LINEAR", CRVAL1: 5000, CD1_1: 2 }), [5000, 5002]);
});

Deno.test("fitsAxis() says that it took ångström when no unit is given", () => {
  const axis = fitsAxis(header({ CTYPE1: "LINEAR", CRVAL1: 5000, CD1_1: 2 }), { count: 4 });
  assertEquals(axis.decisions.find((d) => d.what === "wavelength unit"), {
    what: "wavelength unit",
    value: "angstrom",
    from: "no unit: from the size of CRVAL1",
    assumed: true,
  });
  const nm = fitsAxis(header({ CRVAL1: 500, CDELT1: 0.2 }), { count: 2 });
  assertEquals([...nm.wavelength_angstrom], [5000, 5002]);
});

Deno.test("fitsAxis() reads frequency and velocity axes", () => {
  const frequency = fitsAxis(
    header({ CTYPE1: "FREQ", CUNIT1: "Hz", CRVAL1: 5.99584916e14, CDELT1: -1e11 }),
    { count: 2 },
  );
  assertAlmostEquals(frequency.wavelength_angstrom[0]!, 5000, 1e-6);
  assertAlmostEquals(frequency.wavelength_angstrom[1]!, 5000 / (1 - 1e11 / 5.99584916e14), 1e-6);
  const rest = 4.86269e-7;
  const at = (type: string) =>
    fitsAxis(
      header({ CTYPE1: type, CUNIT1: "km/s", CRVAL1: 3000, CDELT1: 10, RESTWAV: rest }),
      { count: 1 },
    ).wavelength_angstrom[0]!;
  const beta = 3000 / 299792.458;
  assertAlmostEquals(at("VOPT"), 4862.69 * (1 + beta), 1e-6);
  assertAlmostEquals(at("VRAD"), 4862.69 / (1 - beta), 1e-6);
  assertAlmostEquals(at("VELO"), 4862.69 * Math.sqrt((1 + beta) / (1 - beta)), 1e-6);
  // Greisen et al. 2006, table 2: a rest frequency does as well.
  const byFrequency = fitsAxis(
    header({ CTYPE1: "VOPT", CRVAL1: 3e6, CDELT1: 1e4, RESTFRQ: 299792458 / rest }),
    { count: 1 },
  );
  assertAlmostEquals(byFrequency.wavelength_angstrom[0]!, at("VOPT"), 1e-6);
});

Deno.test("fitsAxis() reads an axis uniform in frequency but told as wavelength", () => {
  // Greisen et al. 2006, eq. (40) ff.: at the reference pixel value and slope are those of a linear
  // axis; in between it is uniform in frequency.
  const axis = fitsAxis(
    header({ CTYPE1: "WAVE-F2W", CUNIT1: "Angstrom", CRVAL1: 5000, CDELT1: 2, CRPIX1: 2 }),
    { count: 4 },
  ).wavelength_angstrom;
  const frequency = axis.map((w) => 1 / w);
  assertAlmostEquals(axis[1]!, 5000, 1e-9);
  assertAlmostEquals(frequency[1]! - frequency[0]!, frequency[3]! - frequency[2]!, 1e-15);
  assertAlmostEquals((axis[2]! - axis[0]!) / 2, 2, 1e-5);
});

Deno.test("fitsAxis() reads logarithmic axes by type, by flag and by size", () => {
  const at = (cards: Record<string, CardSpec["value"]>) =>
    fitsAxis(header(cards), { count: 2 }).wavelength_angstrom;
  assertAlmostEquals(
    at({ CTYPE1: "LINEAR", "DC-FLAG": 1, CRVAL1: 3.7, CD1_1: 1e-4 })[1]!,
    10 ** 3.7001,
    1e-6,
  );
  assertAlmostEquals(
    at({ CTYPE1: "LOG-LINEAR", CRVAL1: 3.7, CDELT1: 1e-4 })[1]!,
    10 ** 3.7001,
    1e-6,
  );
  assertAlmostEquals(at({ CRVAL1: 3.7, CDELT1: 1e-4 })[0]!, 10 ** 3.7, 1e-6);
  assertAlmostEquals(
    at({ CTYPE1: "LOG-LINEAR", CRVAL1: 8.5, CDELT1: 1e-4 })[0]!,
    Math.exp(8.5),
    1e-6,
  );
  assertAlmostEquals(at({ CTYPE1: "LINEAR", "DC-FLAG": 0, ...LINEAR })[1]!, 5002, 1e-9);
});

Deno.test("fitsAxis() refuses clearly what it does not read", () => {
  const refused: [Record<string, CardSpec["value"]>, string][] = [
    [{ CTYPE1: "WAVE-TAB", ...LINEAR }, "look-up tables (TAB) and grisms (GRI, GRA) are not read"],
    [
      { CTYPE1: "AWAV-GRA", CUNIT1: "Angstrom", ...LINEAR },
      "look-up tables (TAB) and grisms (GRI, GRA) are not read",
    ],
    [{ CTYPE1: "PIXEL", ...LINEAR }, "a spectral axis must be one of"],
    [{ "DC-FLAG": -1, ...LINEAR }, "the spectrum must have a wavelength scale"],
    [{ CTYPE1: "VELO", CUNIT1: "km/s", CRVAL1: 0, CDELT1: 10 }, "RESTWAV, RESTFRQ were tried"],
    [
      { CTYPE1: "AWAV", CUNIT1: "furlong", ...LINEAR },
      'the unit of a AWAV axis must be known: current value is "furlong" (a.fits, key CUNIT1)',
    ],
    [{ CTYPE1: "LINEAR", CRVAL1: 1, CDELT1: 1 }, "the axis must be a wavelength in a known unit"],
    [
      { CRVAL1: 5000, CDELT1: 0 },
      "the step from pixel to pixel must not be 0: current value is 0 (a.fits, key CDELT1)",
    ],
    [{ CRVAL1: 5000, CD1_1: 0 }, "current value is 0 (a.fits, key CD1_1)"],
    [{ CRVAL1: 5000, CDELT1: 2, PC1_1: 0 }, "current value is 0 (a.fits, key PC1_1)"],
    [
      { CRVAL1: 5000, CDELT1: "two" },
      'as a number (HDU 0, byte 480): current value is "two" (key CDELT1)',
    ],
    [
      { OBJECT: "star" },
      "CTYPE1, CRVAL1, CDELT1, CD1_1, WAT cards and an HDU of wavelengths were tried",
    ],
  ];
  for (const [cards, text] of refused) {
    assertThrows(
      () => fitsAxis(header(cards), { count: 4, file: "a.fits" }),
      InputError,
      text,
    );
  }
});

const WAT = (spec: string): Record<string, CardSpec["value"]> => {
  const cards: Record<string, CardSpec["value"]> = {
    CTYPE1: "MULTISPE",
    CTYPE2: "MULTISPE",
    WAT0_001: "system=multispec",
    WAT1_001: "wtype=multispec label=Wavelength units=angstroms",
  };
  for (let n = 0; n * 68 < spec.length; n++) {
    cards[`WAT2_${String(n + 1).padStart(3, "0")}`] = spec.slice(68 * n, 68 * (n + 1));
  }
  return cards;
};

Deno.test("fitsAxis() reads several dispersions from WAT cards, broken anywhere", () => {
  const spec =
    'wtype=multispec spec1 = "1 1 0 5000.0 1.5 4 0. 10.0 20.0" spec2 = "2 2 1 3.7 1.0E-4 4 0. 30. 40." ' +
    'spec3 = "3 3 2 5000. 1. 4 0. 50. 60. 1. 0. 1 3 1. 4. 5000. 100. 10." ' +
    'spec4 = "4 4 2 5000. 1. 4 1.0E-3 50. 60. 0.5 10. 2 3 1. 4. 5000. 100. 10."';
  const read = (row: number) => fitsAxis(header(WAT(spec)), { count: 4, row }).wavelength_angstrom;
  assertEquals([...read(1)], [5000, 5001.5, 5003, 5004.5]);
  assertAlmostEquals(read(2)[3]!, 10 ** 3.7003, 1e-9);
  // Chebyshev: T0 = 1, T1 = x, T2 = 2x² − 1, with x = −1 at pixel 1 and 1 at pixel 4.
  assertAlmostEquals(read(3)[0]!, 5000 - 100 + 10, 1e-9);
  assertAlmostEquals(read(3)[1]!, 5000 - 100 / 3 + 10 * (2 / 9 - 1), 1e-9);
  // Legendre: P2 = (3x² − 1)/2; weight 0.5, zero point 10, and 1/(1 + z) for z = 0.001.
  assertAlmostEquals(read(4)[1]!, 0.5 * (10 + 5000 - 100 / 3 + 10 * (3 / 9 - 1) / 2) / 1.001, 1e-9);
});

Deno.test("fitsAxis() refuses splines in WAT cards, and descriptions cut short", () => {
  assertThrows(
    () =>
      fitsAxis(
        header(WAT('wtype=multispec spec1 = "1 1 2 5000. 1. 4 0. 1. 2. 1. 0. 3 2 1. 4. 1. 2. 3."')),
        { count: 4 },
      ),
    InputError,
    'must be a Chebyshev or Legendre polynomial: current value is "cubic spline" (key WAT2, spec1)',
  );
  assertThrows(
    () =>
      fitsAxis(
        header(WAT('wtype=multispec spec1 = "1 1 2 5000. 1. 4 0. 1. 2. 1. 0. 1 9 1. 4. 1. 2."')),
        { count: 4 },
      ),
    InputError,
    "a polynomial of order 9 must have as many coefficients",
  );
  assertThrows(
    () => fitsAxis(header(WAT('wtype=multispec spec1 = "1 1 nothing"')), { count: 4 }),
    InputError,
    "a spectrum must be described by at least nine numbers",
  );
});

function multispec(rows: number, bands: number, cards: Record<string, CardSpec["value"]>) {
  const bytes = encodeFits([{
    kind: "image",
    shape: bands > 1 ? [4, rows, bands] : [4, rows],
    data: Float32Array.from({ length: 4 * rows * bands }, (_, i) => i + 1),
    cards: Object.entries(cards).map(([keyword, value]) => ({ keyword, value })),
  }]);
  return parseFits(bytes, { file: "night.fits" });
}

Deno.test("readImage() takes orders all, and of objects on the slit one", () => {
  const orders = WAT(
    'wtype=multispec spec1 = "1 1 0 5000. 1.5 4 0. 1. 2." spec2 = "2 2 0 6000. 1.5 4 0. 1. 2."',
  );
  assertEquals(readImage(multispec(2, 1, orders)).map((s) => s.source), [
    "night.fits[1]",
    "night.fits[2]",
  ]);
  const objects = WAT(
    'wtype=multispec spec1 = "1 1 0 5000. 1.5 4 0. 1. 2." spec2 = "2 2 0 5000.1 1.5 4 0. 1. 2."',
  );
  const [first, ...none] = readImage(multispec(2, 1, objects));
  assertEquals([first!.source, none.length], ["night.fits[1]", 0]);
  assertEquals(first!.decisions.find((d) => d.what === "row")?.assumed, true);
  const [second] = readImage(multispec(2, 1, objects), { keys: { aperture: "2" } });
  assertEquals([...second!.flux], [5, 6, 7, 8]);
  assertThrows(
    () => readImage(multispec(2, 1, objects), { keys: { aperture: "7" } }),
    InputError,
    "aperture must be a row of the image, 1 to 2",
  );
});

Deno.test("readImage() takes flux and errors from named bands on a third axis", () => {
  const [spectrum] = readImage(multispec(1, 4, {
    CRVAL1: 5000,
    CD1_1: 2,
    BANDID1: "spectrum - background fit, weights variance, clean yes",
    BANDID2: "raw - background fit, weights none, clean no",
    BANDID3: "background - background fit",
    BANDID4: "sigma - background fit, weights variance, clean yes",
  }));
  assertEquals([...spectrum!.flux], [1, 2, 3, 4]);
  assertEquals([...spectrum!.error!], [13, 14, 15, 16]);
});

Deno.test("readImage() refuses rows that nothing explains: a raw frame is no set of spectra", () => {
  assertThrows(
    () => readImage(multispec(50, 1, { CRVAL1: 5000, CD1_1: 2 })),
    InputError,
    "WAT cards, APNUM1, keys.aperture, and times for each row were tried",
  );
});
