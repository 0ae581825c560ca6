// One campaign for each trap that observers' data hold, from files and a target file to documents: the
// right answer, or the right warning.
import {
  assert,
  assertAlmostEquals,
  assertEquals,
  assertGreater,
  assertLess,
  assertRejects,
  assertStringIncludes,
} from "@std/assert";
import { join } from "@std/path";
import { InputError } from "../../engine/errors.ts";
import { randomStream } from "../../engine/numerics/mod.ts";
import { airToVacuum, lineNamed, midExposureBjd } from "../../engine/sky/mod.ts";
import type { RawExposure } from "../../engine/spectra/mod.ts";
import type { Trail } from "../../engine/trail/mod.ts";
import { madeExposures, SITE, TARGET } from "../spectra/made_exposures.ts";
import { assertRightPlace, findSource, hjdOf } from "../spectra/one_source.ts";
import { type Campaign, codes, SECTIONS, SOURCE, writeCampaign } from "./campaign_fixture.ts";

const C = 299792.458;
const TWO_GROUPS =
  '[[exposures]]\nfiles = ["one/*.fits"]\n\n[[exposures]]\nfiles = ["two/*.fits"]\n';

async function trailOf(campaign: Campaign, set: readonly string[] = []): Promise<Trail> {
  const session = await campaign.open(set);
  return await session.trail(session.lines("test")[0]!);
}

const textOf = (
  document: { readonly warnings: readonly { readonly code: string; readonly text: string }[] },
  code: string,
) => document.warnings.find((warning) => warning.code === code)?.text ?? "";

/** The exposures as another line would show them: every wavelength times one factor. */
function asLine(raw: readonly RawExposure[], name: string): RawExposure[] {
  const factor = lineNamed(name).vacuum_angstrom / lineNamed("H beta").vacuum_angstrom;
  return raw.map((e) => ({
    ...e,
    wavelength_angstrom: e.wavelength_angstrom.map((w) => w * factor),
    resolution_angstrom: e.resolution_angstrom! * factor,
  }));
}

/** Night-sky lines put on, at rest at the telescope; vacuum wavelengths. */
function withSky(
  raw: readonly RawExposure[],
  lines: readonly (readonly [air_angstrom: number, counts: number])[],
): RawExposure[] {
  return raw.map((e) => ({
    ...e,
    flux: e.flux.map((f, i) =>
      lines.reduce((sum, [air, counts]) => {
        const off = e.wavelength_angstrom[i]! - airToVacuum(air);
        return sum + counts * Math.exp(-0.5 * (off / (e.resolution_angstrom! / 2.3548)) ** 2);
      }, f)
    ),
  }));
}

Deno.test("trap: two arms, one line covered by both, with errors and resolution of their own", async () => {
  const campaign = await writeCampaign([
    { name: "one", raw: madeExposures({ count: 16 }) },
    {
      name: "two",
      raw: madeExposures({
        count: 16,
        seed: 2,
        low_angstrom: 4790,
        high_angstrom: 5200,
        step_angstrom: 1,
        resolution_angstrom: 3,
      }),
    },
  ], { exposures: TWO_GROUPS });
  const trail = await trailOf(campaign);
  assertEquals([trail.sampling.count, new Set(trail.group).size], [32, 2]);
  assertRightPlace(trail);
  const { lines, journal } = await campaign.check();
  assertEquals(journal.map(({ group, exposures }) => [group, exposures]), [[0, 16], [1, 16]]);
  assertEquals(lines[0]!.noise.groups.length, 2);
  // 1.2 and 3 Å at 4862 Å.
  assertAlmostEquals(lines[0]!.resolution_kms.low, 74, 0.5);
  assertAlmostEquals(lines[0]!.resolution_kms.high, 185, 1);
});

Deno.test("trap: a line that no arm covers is refused with what is covered", async () => {
  const campaign = await writeCampaign([{ raw: madeExposures({ count: 8 }) }], {
    lines: '[[lines]]\nname = "H alpha"\n',
  });
  const error = await assertRejects(() => campaign.check(), InputError);
  assertStringIncludes(error.message, "H alpha");
  assertStringIncludes(error.message, "4759.9 to 5009.4");
});

Deno.test("trap: nights of different resolution are told apart and mapped together", async () => {
  const campaign = await writeCampaign([
    { name: "one", raw: madeExposures({ count: 16, cadence_s: 430 }) },
    {
      name: "two",
      raw: madeExposures({
        count: 16,
        cadence_s: 430,
        start: "2024-01-03T02:30:00",
        step_angstrom: 1,
        resolution_angstrom: 3,
        seed: 2,
      }),
    },
  ], { exposures: TWO_GROUPS });
  const { maps, warnings } = await campaign.map(["map.pixels=71"]);
  assertAlmostEquals(maps[0]!.peak.vx_kms, SOURCE.vx_kms, 20);
  assertAlmostEquals(maps[0]!.peak.vy_kms, SOURCE.vy_kms, 20);
  assertEquals(codes({ warnings }).filter((code) => code.includes("resolution")), []);
  const { journal } = await campaign.check();
  assertEquals(journal.map((entry) => entry.resolution_angstrom), [1.2, 3]);
});

Deno.test("trap: barycentric wavelengths with UTC times, and what becomes of them without the word", async () => {
  // In March the Earth moves away from the star at 26 km/s.
  const raw = madeExposures({ count: 16, cadence_s: 430, start: "2024-03-10T00:30:00" });
  const factors = raw.map((e) =>
    midExposureBjd({ date: e.start, exposure_s: e.exposure_s }, { target: TARGET, site: SITE })
      .observer_factor
  );
  const moved = raw.map((e, k) => ({
    ...e,
    wavelength_angstrom: e.wavelength_angstrom.map((w) => w * factors[k]!),
  }));
  const campaign = await writeCampaign([{ raw: moved }], {
    exposures: '[[exposures]]\nfiles = ["night/*.fits"]\nwavelength_frame = "barycentric"\n',
  });
  assertRightPlace(await trailOf(campaign));
  const { decisions } = await campaign.check();
  const decided = (what: string) => decisions.find((d) => d.what === what)!;
  assertEquals(decided("wavelength frame").value, "barycentric");
  assertEquals([decided("time place").value, decided("time scale").value], ["observatory", "utc"]);
  // Corrected twice, γ is off by the Earth's motion.
  const twice = findSource(await trailOf(campaign, ['exposures[0].wavelength_frame="auto"']));
  assertAlmostEquals(twice.gamma, C * (factors[8]! - 1), 3);
  assertGreater(Math.abs(twice.gamma), 20);
});

Deno.test("trap: a log of HJD in UTC or TT, with the scale stated or assumed and said", async () => {
  const raw = madeExposures({ count: 16, cadence_s: 430 });
  for (const scale of ["utc", "tt"] as const) {
    const campaign = await writeCampaign([{ raw, layout: "text" }], {
      exposures: `[[exposures]]
files = ["night/*.txt"]
log = "night/hjd.csv"
time_scale = "${scale}"
time_marks = "mid"
resolution_angstrom = 1.2
wavelength_medium = "air"
`,
      sky: `[sky]
ra_deg = ${TARGET.ra_deg}
dec_deg = ${TARGET.dec_deg}
site = { latitude_deg = -30.2, longitude_east_deg = -70.7, height_m = 2700.0 }
`,
    });
    const rows = raw.map((e, k) =>
      `night-${String(k + 1).padStart(3, "0")}.txt,${hjdOf(e, scale)},${e.exposure_s}`
    );
    await Deno.writeTextFile(
      join(campaign.folder, "night/hjd.csv"),
      `file,HJD,exposure_s\n${rows.join("\n")}\n`,
    );
    assertRightPlace(await trailOf(campaign));
    const { decisions, warnings } = await campaign.check();
    const decided = (what: string) => decisions.find((d) => d.what === what)!.value;
    assertEquals([decided("time place"), decided("time scale")], ["heliocentric", scale]);
    assertEquals(codes({ warnings }).filter((code) => code.startsWith("time")), []);
    const untold = await campaign.check([
      'exposures[0].time_scale="auto"',
      'exposures[0].time_marks="auto"',
    ]);
    assertEquals(codes(untold).filter((code) => code.startsWith("time")), [
      "time-scale-assumed",
      "time-mark-assumed",
    ]);
  }
});

Deno.test("trap: missing errors are estimated, and every command says so", async () => {
  const campaign = await writeCampaign([
    { raw: madeExposures({ count: 16, cadence_s: 430, errors: false, signal_to_noise: 30 }) },
  ]);
  assertRightPlace(await trailOf(campaign), { within_kms: 4 });
  const { lines, warnings, decisions } = await campaign.check();
  assert(codes({ warnings }).includes("errors-estimated"));
  assert(codes(await campaign.map()).includes("errors-estimated"));
  const [group] = lines[0]!.noise.groups;
  assertEquals(group!.errors_given, false);
  // 16 exposures of about 100 pixels: the scale is known to 3 %, the estimate's own to as much.
  assertAlmostEquals(group!.measured_scale, 1, 0.15);
  assertStringIncludes(decisions.find(({ what }) => what === "errors")!.value, "variance");
});

Deno.test("trap: noise that resampling correlated is told with the number of pixels that count as one", async () => {
  const raw = madeExposures({ count: 24, signal_to_noise: 20 }).map((e) => ({
    ...e,
    wavelength_angstrom: e.wavelength_angstrom.map((w) => w + 0.25),
    flux: e.flux.map((f, i) => 0.5 * (f + (e.flux[i + 1] ?? f))),
  }));
  const campaign = await writeCampaign([{ raw }]);
  const document = await campaign.check();
  const { noise, noise_scale } = document.lines[0]!;
  assertAlmostEquals(noise_scale, Math.SQRT1_2, 0.06);
  assertAlmostEquals(noise.correlation_length_pixels, 2, 0.25);
  assertStringIncludes(textOf(document, "noise-correlated"), "pixels count as one");
});

Deno.test("trap: flexure of 15 km/s that drifts with phase is reported against K1, and corrected when asked", async () => {
  const flexure = (k: number) => 15 * Math.sin(2 * Math.PI * k / 23);
  // He I 5876, with the sky's [O I] 5577 in the same spectra.
  const raw = madeExposures({
    count: 24,
    signal_to_noise: 80,
    medium: "vacuum",
    low_angstrom: 4600,
    high_angstrom: 5010,
  });
  const sky = withSky(asLine(raw, "He I 5876"), [[5577.339, 4000]]);
  const bent = sky.map((e, k) => ({
    ...e,
    wavelength_angstrom: e.wavelength_angstrom.map((w) => w * (1 + flexure(k) / C)),
  }));
  const lines = SECTIONS.lines!.replace("H beta", "He I 5876");
  const campaign = await writeCampaign([{ raw: bent }], { lines });

  const off = findSource(await trailOf(campaign));
  assertGreater(Math.hypot(off.vx - SOURCE.vx_kms, off.vy - SOURCE.vy_kms), 8);
  const plain = await campaign.check();
  const [zero] = plain.zeros;
  assertEquals([zero!.corrected, zero!.measured, zero!.features], [false, 24, ["[O I] 5577"]]);
  assertAlmostEquals(zero!.orbital_kms, 15, 1);
  assertEquals(zero!.k_accretor_kms, 70);
  const said = textOf(plain, "wavelength-zero-off");
  assertStringIncludes(said, "goes with the orbit by");
  assertStringIncludes(said, "against K1 of 70 km/s: nothing was corrected");

  const asked = ['exposures[0].wavelength_zero_kms="sky-lines"'];
  assertRightPlace(await trailOf(campaign, asked));
  const corrected = await campaign.check(asked);
  assertEquals(corrected.zeros[0]!.corrected, true);
  assertAlmostEquals(corrected.zeros[0]!.orbital_kms, 15, 1);
  assertEquals(codes(corrected).filter((code) => code.startsWith("wavelength-zero")), [
    "wavelength-zero-corrected",
  ]);
  // Not silently: the map says it too.
  assertStringIncludes(
    textOf(await campaign.map(asked), "wavelength-zero-corrected"),
    "wavelengths of 24 of 24 exposures were moved by −",
  );

  // The same by a table, one exposure missing from it.
  const rows = bent.slice(1).map((_, k) =>
    `night-${String(k + 2).padStart(3, "0")}.fits,${flexure(k + 1)}`
  );
  await Deno.writeTextFile(
    join(campaign.folder, "shifts.csv"),
    `file,shift_kms\n${rows.join("\n")}\n`,
  );
  const listed = ['exposures[0].wavelength_zero_kms="shifts.csv"'];
  assertRightPlace(await trailOf(campaign, listed));
  const byTable = await campaign.check(listed);
  assertStringIncludes(textOf(byTable, "wavelength-zero-missing"), "night/night-001.fits");
  assert(byTable.inputs.some(({ file }) => file === "shifts.csv"));
  assertEquals(byTable.zeros[0]!.error_kms, null);
});

Deno.test("trap: flexure is measured from telluric absorption where no sky line is left", async () => {
  const flexure = (k: number) => 15 * Math.sin(2 * Math.PI * k / 23);
  const raw = asLine(
    madeExposures({
      count: 24,
      signal_to_noise: 80,
      medium: "vacuum",
      low_angstrom: 4600,
      high_angstrom: 5010,
    }),
    "H alpha",
  ).map((e, k) => ({
    ...e,
    // The gamma band of oxygen, three of its blends.
    flux: e.flux.map((f, i) =>
      [[6279, 0.4], [6287, 0.3], [6296, 0.35]].reduce(
        (light, [place, depth]) =>
          light * (1 - depth! * Math.exp(-0.5 * ((e.wavelength_angstrom[i]! - place!) / 2) ** 2)),
        f,
      )
    ),
    wavelength_angstrom: e.wavelength_angstrom.map((w) => w * (1 + flexure(k) / C)),
  }));
  const campaign = await writeCampaign([{ raw }], {
    lines: SECTIONS.lines!.replace("H beta", "H alpha"),
  });
  const plain = await campaign.check();
  assertEquals([plain.zeros[0]!.from, plain.zeros[0]!.features], [
    "telluric absorption",
    ["O2 gamma band"],
  ]);
  assertStringIncludes(textOf(plain, "wavelength-zero-off"), 'wavelength_zero_kms = "telluric"');
  // 15 km/s, smoothed a little by the mean to which each exposure is matched.
  assertAlmostEquals(plain.zeros[0]!.orbital_kms, 15, 1.5);
  const asked = ['exposures[0].wavelength_zero_kms="telluric"'];
  const [off, right] = [
    findSource(await trailOf(campaign)),
    findSource(await trailOf(campaign, asked)),
  ];
  const miss = ({ vx, vy }: typeof off) => Math.hypot(vx - SOURCE.vx_kms, vy - SOURCE.vy_kms);
  assertGreater(miss(off), 8);
  assertLess(miss(right), 4);
});

Deno.test("trap: a sky line across the wing draws a ring, is named, and is masked when asked", async () => {
  const lines = SECTIONS.lines!.replace("H beta", "He I 5876");
  const raw = withSky(
    asLine(madeExposures({ count: 24, medium: "vacuum" }), "He I 5876"),
    [[5889.951, 3000], [5895.924, 2000]],
  );
  const campaign = await writeCampaign([{ raw }], { lines });
  const plain = await campaign.check();
  const ring = plain.lines[0]!.contents.find(({ name, kind }) =>
    kind === "static" && name === "Na I 5890"
  )!;
  // 5889.95 against 5875.62 Å: 731 km/s, less the observer's motion.
  assertAlmostEquals(ring.ring_radius_kms!, 731, 31);
  assertStringIncludes(textOf(plain, "static-feature"), "Na I 5890 at +7");
  assertStringIncludes(textOf(plain, "static-feature"), "mask them with trail.mask");
  assertGreater(findSource(await trailOf(campaign)).reduced, 2);

  const asked = ['trail.mask=["sky", "interstellar"]'];
  const masked = await trailOf(campaign, asked);
  assertRightPlace(masked);
  assertLess(findSource(masked).reduced, 1.15);
  const { contents } = (await campaign.check(asked)).lines[0]!;
  // What is left is a weak band of water, broader than a ring.
  assertEquals(
    contents.filter(({ window, ring_radius_kms }) => window === "line" && ring_radius_kms !== null),
    [],
  );
});

Deno.test("trap: blank, duplicate and out-of-order exposures are dropped or sorted, and named", async () => {
  const raw = madeExposures();
  const blank = { ...raw[3]!, flux: raw[3]!.flux.map(() => 0) };
  const mixed = [
    raw[20]!,
    ...raw.slice(0, 3),
    blank,
    ...raw.slice(4, 20),
    raw[10]!,
    ...raw.slice(21),
  ];
  const campaign = await writeCampaign([{ raw: mixed }]);
  const document = await campaign.check();
  assertEquals([document.exposures, document.lines[0]!.exposures], [25, 23]);
  assertStringIncludes(textOf(document, "blank-exposures"), "night/night-005.fits");
  assertStringIncludes(textOf(document, "duplicate-exposures"), "night/night-022.fits (as night/");
  assert(codes(document).includes("exposures-reordered"));
  const trail = await trailOf(campaign);
  assertRightPlace(trail);
  const clean = await trailOf(await writeCampaign([{ raw: raw.filter((_, k) => k !== 3) }]));
  assertEquals(trail.flux, clean.flux);
});

Deno.test("trap: NaNs and infinite errors stay masks, in documents too", async () => {
  const random = randomStream(5);
  const raw = madeExposures({ count: 16, cadence_s: 430 }).map((e) => ({
    ...e,
    flux: e.flux.map((f) => random.uniform() < 0.03 ? NaN : f),
    error: e.error!.map((s) => random.uniform() < 0.03 ? Infinity : s),
  }));
  const campaign = await writeCampaign([{ raw }]);
  const trail = await trailOf(campaign);
  assertRightPlace(trail);
  const { maps } = await campaign.map();
  const masked = [...trail.error].filter((e) => e === Infinity).length;
  assertEquals(maps[0]!.sample_count, trail.flux.length - masked);
  assertAlmostEquals(masked / trail.flux.length, 0.06, 0.02);
  assertAlmostEquals(maps[0]!.peak.vx_kms, SOURCE.vx_kms, 17);
  await campaign.check();
  for (const name of ["check.json", "map.json"]) {
    const text = await Deno.readTextFile(join(campaign.folder, "star", name));
    assertEquals(/\bNaN\b|Infinity/.test(text), false, name);
  }
});

Deno.test("trap: exposures of another star among the files are pointed out", async () => {
  const raw = madeExposures({ count: 8 }).map((e, k) => k === 2 ? { ...e, dec_deg: 20 } : e);
  const document = await (await writeCampaign([{ raw }])).check();
  assertStringIncludes(textOf(document, "pointed-elsewhere"), "1 of 8 exposures point elsewhere");
});

Deno.test("trap: exposures of another grating are left out of a line, and named", async () => {
  const blue = madeExposures({ count: 12, cadence_s: 570 });
  const red = asLine(blue, "H alpha");
  const mixed = blue.map((one, k) => k % 6 === 2 ? red[k]! : one);
  const document = await (await writeCampaign([{ raw: mixed }])).check();
  assertEquals(document.lines[0]!.exposures, 10);
  assertEquals(
    textOf(document, "line-not-covered"),
    "2 exposures do not cover the line, as others of their group do, and are left out: night/night-003.fits, night/night-009.fits",
  );
  assertEquals(
    textOf(document, "exposures-unused"),
    "2 of 12 exposures cover no line of the target file: night/night-003.fits, night/night-009.fits",
  );
  // An arm is of use to a line of its own, and missed where it has none.
  const arms = [{ name: "one", raw: blue }, { name: "two", raw: red.slice(0, 6) }];
  const read = async (sections: Partial<typeof SECTIONS>) =>
    await (await (await writeCampaign(arms, { exposures: TWO_GROUPS, ...sections })).open())
      .exposures();
  assertEquals(codes(await read({})), ["exposures-unused"]);
  const lines = `${SECTIONS.lines}\n${SECTIONS.lines!.replace("H beta", "H alpha")}`;
  assertEquals(codes(await read({ lines })), []);
});

Deno.test("trap: a map of very few exposures warns of the streaks that its sampling leaves", async () => {
  const warned = async (count: number) => {
    const raw = madeExposures({ count, cadence_s: 7000 / count });
    const document = await (await writeCampaign([{ raw }])).map();
    return textOf(document, "few-exposures-mapped");
  };
  assertStringIncludes(await warned(5), "the map is of 5 exposures alone");
  assertEquals(await warned(12), "");
});
