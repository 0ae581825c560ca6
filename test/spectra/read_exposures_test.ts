import { assert, assertAlmostEquals, assertEquals, assertRejects } from "@std/assert";
import { InputError } from "../../engine/errors.ts";
import { orbitalPhase } from "../../engine/binary/mod.ts";
import { daysBetween, lineNamed, midExposureBjd } from "../../engine/sky/mod.ts";
import {
  encodeExposures,
  type ExposuresRead,
  type RawExposure,
  readExposures,
  type ReadExposuresOptions,
  type SpectraLayout,
} from "../../engine/spectra/mod.ts";
import { makeTrail } from "../../engine/trail/mod.ts";
import {
  EPHEMERIS,
  madeExposures,
  type Making,
  SITE,
  TARGET,
  truth,
  written,
} from "./made_exposures.ts";

const H_BETA = lineNamed("H beta");

async function read(
  raw: readonly RawExposure[],
  layout: SpectraLayout,
  options: ReadExposuresOptions = {},
): Promise<ExposuresRead> {
  const paths = await written(encodeExposures(raw, { layout }));
  const log = paths.find((path) => path.endsWith("log.csv"));
  return await readExposures(paths.filter((path) => path !== log), {
    ...(log === undefined ? {} : { log }),
    ...options,
  });
}

// Chi-square per sample of a trail against the truth that was put in.
function misfit({ spectra }: Pick<ExposuresRead, "spectra">): number {
  const trail = makeTrail(spectra, {
    line: H_BETA,
    ephemeris: EPHEMERIS,
    reach_kms: 2000,
    continuum_kms: [[-5000, -2500], [2500, 5000]],
    noise_scale: 1,
    cosmic_rays: false,
  });
  let chi = 0;
  for (let i = 0; i < trail.sampling.count; i++) {
    for (let k = trail.sampling.start[i]!; k < trail.sampling.start[i + 1]!; k++) {
      const wanted = truth(trail.sampling.velocity_kms[k]!, trail.sampling.phase[i]!);
      chi += ((trail.flux[k]! - wanted) / trail.error[k]!) ** 2;
    }
  }
  return chi / trail.flux.length;
}

// Misfit of a trail whose 3 100 samples are right: chi-square per sample scatters by 0.025, and the
// continuum's own errors add 0.02. A shift of a tenth of a pixel (3 km/s) adds 0.1.
const RIGHT = 0.08;

for (const layout of ["image", "stack", "table", "text"] as const) {
  const cases: [string, Making][] = [
    ["in air", { medium: "air" }],
    ["in vacuum", { medium: "vacuum" }],
    ["on uneven pixels", { medium: "vacuum", uneven: true }],
  ];
  for (const [what, making] of cases) {
    Deno.test(`readExposures() takes layout "${layout}" ${what} from files to a trail`, async () => {
      const raw = madeExposures(making);
      const result = await read(raw, layout);
      assertEquals(result.spectra.length, raw.length);
      result.spectra.forEach((spectrum, k) => {
        const { bjd, observer_factor } = midExposureBjd(
          { date: raw[k]!.start, exposure_s: 240 },
          { target: TARGET, site: SITE },
        );
        // Start times are written to the millisecond.
        assert(Math.abs(daysBetween(spectrum.mid, bjd)) * 86400 < 1e-3);
        assertAlmostEquals(spectrum.observer_factor!, observer_factor, 1e-11);
        assertAlmostEquals(spectrum.resolution_angstrom![0]!, 1.2, 1e-9);
        assertEquals([spectrum.exposure_s, spectrum.errors_given], [240, true]);
      });
      assertAlmostEquals(misfit(result), 1, RIGHT);
      assertEquals(result.warnings, []);
      const decided = (name: string) => result.decisions.find((d) => d.what === name);
      assertEquals(decided("layout")?.value, layout);
      assertEquals(decided("wavelength medium")?.value, making.medium);
      assertEquals(decided("time scale")?.value, "utc");
      assertEquals(decided("time marks")?.value, "start");
      assertEquals(decided("layout")?.exposures, raw.length);
    });
  }
}

Deno.test("readExposures() would show a wrong medium, frame or time: the test of a trail can fail", async () => {
  const raw = madeExposures();
  assert(misfit(await read(raw, "image", { wavelength_medium: "vacuum" })) > 2);
  assert(misfit(await read(raw, "image", { wavelength_frame: "barycentric" })) > 1 + 2 * RIGHT);
  assert(misfit(await read(raw, "image", { time_marks: "end" })) > 1.5);
});

Deno.test("readExposures() masks what a layout marks as masked", async () => {
  const raw = madeExposures({ count: 2 }).map((e) => ({
    ...e,
    error: e.error!.map((s, i) => i === 7 ? Infinity : s),
    flux: e.flux.map((f, i) => i === 9 ? NaN : f),
  }));
  for (const layout of ["image", "stack", "table", "text"] as const) {
    const { spectra } = await read(raw, layout);
    for (const { error, flux } of spectra) {
      assertEquals([error[7], error[8]! < Infinity], [Infinity, true], layout);
      assert(Number.isNaN(flux[9]!), layout);
    }
  }
});

Deno.test("readExposures() estimates errors that are missing, and says so", async () => {
  const raw = madeExposures({ signal_to_noise: 40 });
  const with_errors = await read(raw, "image");
  for (const layout of ["image", "stack", "table", "text"] as const) {
    const bare = await read(raw.map((e) => ({ ...e, error: null })), layout);
    assertEquals(bare.spectra.every((s) => !s.errors_given), true);
    const ratio = bare.spectra.map((s, k) => {
      const pairs = [...s.error].map((e, i) => e / with_errors.spectra[k]!.error[i]!).sort((a, b) =>
        a - b
      );
      return pairs[pairs.length >> 1]!;
    });
    // 500 pixels an exposure: the scatter is known to 5 % each.
    const mean = ratio.reduce((a, b) => a + b, 0) / ratio.length;
    assertAlmostEquals(mean, 1, 0.03, layout);
    const decision = bare.decisions.find((d) => d.what === "errors")!;
    assertEquals([decision.assumed, decision.exposures], [true, raw.length]);
  }
});

Deno.test("readExposures() names the file, the key and what was tried", async () => {
  const raw = madeExposures({ count: 1 });
  const [path] = await written(encodeExposures(raw));
  const cut = async (key: string) => {
    const bytes = await Deno.readFile(path!);
    // A key is taken away by renaming it: same length, so nothing else moves.
    const text = new TextDecoder("latin1").decode(bytes);
    const at = text.indexOf(key.padEnd(8));
    bytes[at] = "Z".charCodeAt(0);
    const name = path!.replace(".fits", `-${key}.fits`);
    await Deno.writeFile(name, bytes);
    return name;
  };
  const wrong: [string, string][] = [
    [
      "DATE-OBS",
      "Cannot read time of exposure as the file or its log must give one; DATE-AVG, DATE-BEG, DATE-OBS, MJD-AVG, MJD-BEG, MJD-OBS, DATE-END, MJD-END, BJD, HJD, JD, MJD and their variants were tried",
    ],
    [
      "XPOSURE",
      "Cannot read exposure time as the file or its log must give it; XPOSURE, EXPTIME, EXPOSURE, exposure_s, EXP_TIME, EXPOTIME, TEXPTIME, ITIME, TELAPSE, DURATION were tried",
    ],
    [
      "RA",
      "Cannot correct to the barycentre as bringing topocentric wavelengths to the barycentre needs the target's coordinates; RA, RA_TARG, RA_OBJ, OBJRA, OBJCTRA, DEC, DEC_TARG, DEC_OBJ, OBJDEC, OBJCTDEC were tried",
    ],
    [
      "OBSGEO-X",
      "Cannot correct to the barycentre as bringing topocentric wavelengths to the barycentre needs the observatory's place; OBSGEO-X, OBSGEO-L, LATITUDE, SITELAT, OBS-LAT, LONGITUD, LONGITUDE, SITELONG were tried",
    ],
    [
      "CRVAL1",
      "Cannot read wavelength axis as the image must have a wavelength axis; CTYPE1, CRVAL1, CDELT1, CD1_1, WAT cards and an HDU of wavelengths were tried",
    ],
  ];
  for (const [key, text] of wrong) {
    const name = await cut(key);
    const error = await assertRejects(() => readExposures([name]), InputError, text);
    assert(error.message.includes(name), error.message);
  }
  // What the user states mends it.
  const { spectra } = await readExposures([await cut("OBSGEO-X")], { site: SITE });
  assertEquals(spectra.length, 1);
});

Deno.test("readExposures() leaves its options alone and reads in the order of the files", async () => {
  const raw = madeExposures({ count: 3 });
  const paths = await written(encodeExposures(raw));
  const options = { keys: {}, group: 2 };
  const before = structuredClone(options);
  const { spectra } = await readExposures(paths.toReversed(), options);
  assertEquals(options, before);
  assertEquals(spectra.map((s) => s.source), paths.toReversed());
  assertEquals(spectra.map((s) => s.group), [2, 2, 2]);
  assert(orbitalPhase(EPHEMERIS, spectra[0]!.mid).phase > 0);
});

Deno.test("readExposures() brings heliocentric wavelengths to the barycentre", async () => {
  const raw = madeExposures({ count: 1, medium: "vacuum" });
  const { spectra } = await read(raw, "image", { wavelength_frame: "heliocentric" });
  const { observer_factor, heliocentric_factor } = midExposureBjd(
    { date: raw[0]!.start, exposure_s: 240 },
    { target: TARGET, site: SITE },
  );
  const ratio = spectra[0]!.wavelength_angstrom[100]! / raw[0]!.wavelength_angstrom[100]!;
  assertAlmostEquals(ratio, observer_factor / heliocentric_factor, 1e-12);
  // The Sun moves at up to 16 m/s about the barycentre; dilation and potentials add 4.6 m/s.
  assert(Math.abs(ratio - 1) * 299792458 < 25 && Math.abs(ratio - 1) * 299792458 > 0.1);
});

Deno.test("readExposures() needs no site when time and wavelengths are barycentric, and takes VELOSYS either way round", async () => {
  const raw = madeExposures({ count: 1 });
  const [path] = await written(encodeExposures(raw, { layout: "text" }));
  const spectrum = (await Deno.readTextFile(path!)).split("\n").filter((l) => !l.startsWith("#"))
    .join("\n");
  const { bjd, observer_factor } = midExposureBjd(
    { date: raw[0]!.start, exposure_s: 240 },
    { target: TARGET, site: SITE },
  );
  const of = async (facts: string) => {
    const name = path!.replace(".txt", `-${facts.length}.txt`);
    const time = `# BJD_TDB = ${bjd[0]}${
      bjd[1].toFixed(9).slice(1)
    }\n# EXPTIME = 240\n# SPECSYS = BARYCENT\n`;
    await Deno.writeTextFile(name, `${time}${facts}${spectrum}`);
    const { spectra, decisions } = await readExposures([name]);
    return { factor: spectra[0]!.observer_factor, decisions };
  };
  assertEquals((await of("")).factor, null);
  const rough = await of("# RA = 83.1\n# DEC = -12.4\n");
  assert(Math.abs(rough.factor! / observer_factor - 1) * 299792.458 < 0.47);
  const speed = (observer_factor - 1) * 299792458;
  for (const stated of [speed, -speed]) {
    const { factor, decisions } = await of(`# RA = 83.1\n# DEC = -12.4\n# VELOSYS = ${stated}\n`);
    assertAlmostEquals(factor!, observer_factor, 1e-9);
    assert(decisions.some((d) => d.from === "VELOSYS"));
  }
});

Deno.test("readExposures() tells where the target is, and which exposures point elsewhere", async () => {
  const raw = madeExposures({ count: 5 });
  const all = await read(raw, "image");
  assertAlmostEquals(all.target!.ra_deg, TARGET.ra_deg, 1e-9);
  assertEquals(all.warnings, []);
  const mixed = raw.map((exposure, k) => k === 3 ? { ...exposure, ra_deg: 84.2 } : exposure);
  const { warnings } = await read(mixed, "image");
  assertEquals(warnings.map((w) => w.code), ["pointed-elsewhere"]);
  // 1.1 deg of right ascension at declination −12.4.
  assert(
    /^1 of 5 exposures point elsewhere than the others \(.*exposure-004\.fits by 1\.07 deg\)/.test(
      warnings[0]!.text,
    ),
    warnings[0]!.text,
  );
});
