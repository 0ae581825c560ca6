import { plateLines } from "../../cli/commands/plate.ts";
import {
  assert,
  assertAlmostEquals,
  assertEquals,
  assertMatch,
  assertRejects,
  assertStringIncludes,
} from "@std/assert";
import { join } from "@std/path";
import {
  type MapDocument,
  openSession,
  type OrbitDocument,
  parseTarget,
  runMap,
  runOrbit,
  runPlate,
} from "../../engine/campaign/mod.ts";
import { InputError } from "../../engine/errors.ts";
import { panelNames, studyKinds } from "../../engine/figures/mod.ts";
import { demoNight, FEW } from "./plate_fixture.ts";

const night = await demoNight();
const out = (name: string) => ({ folder: join(night.folder, name) });

function plateOf(rows: string): string {
  return `[plate]\nletters = true\nrows = [\n${rows}\n]\n`;
}

/** Panels of what is asked of a map beside it; a blend's map needs one. */
const studies = [...Object.keys(studyKinds), "period-scan", "sampling"];

Deno.test("runPlate() makes every panel from the demo's target file", async () => {
  // One is drawn by weigh, on a plate of its own: weigh_figures_test.ts.
  const others = [...studies, "blend", "null-distribution"];
  const drawn = panelNames.filter((panel) => !others.includes(panel));
  const rows = drawn.map((panel) => `  { panels = ["${panel}"], height_mm = 20 },`);
  const session = await night.open({ plate: plateOf(rows.join("\n")) });
  const { document, files } = await runPlate(session, out("all"));
  assertEquals(drawn.length, 27);
  const [caption] = document.captions;
  // Each panel has its letter: (a) to (z) and (aa).
  assertEquals([...caption!.matchAll(/\(([a-z]{1,2})\) [A-Zχ]/g)].length, 27, caption);
  assert(!/NaN|undefined|null|Infinity/.test(caption!), caption);
  const svg = await Deno.readTextFile(files[0]!);
  for (const panel of drawn) assertStringIncludes(svg, `data-name="${panel}"`);
});

Deno.test("runPlate() makes every panel of studies of a map from the demo's target file", async () => {
  const rows = studies.map((panel) => `  { panels = ["${panel}"], height_mm = 20 },`);
  const set = [
    'map.method="entropy"',
    "map.pixels=83",
    "map.reduced_chi_square=1.3", // soon reached
    "map.resamples=0",
    'plate.formats=["svg"]',
  ];
  const session = await night.open({ plate: plateOf(rows.join("\n")), set });
  const { document, files } = await runPlate(session, out("studies"));
  const [caption] = document.captions;
  assert(!/NaN|undefined|null|Infinity/.test(caption!), caption);
  assertMatch(
    caption!,
    /against the period\. Best value: 0\.08\d+ ± 0\.0\d+ d\. Dotted: the adopted/,
  );
  const svg = await Deno.readTextFile(files[0]!);
  for (const panel of studies) assertStringIncludes(svg, `data-name="${panel}"`);
});

Deno.test("runPlate() tells the same numbers as map.json and orbit.json", async () => {
  const plate = plateOf(
    '  { panels = ["map"] },\n  { panels = ["velocity-curve", "mass-plane"] },',
  );
  const session = await night.open({ plate });
  const maps: MapDocument = (await runMap(session, out("same"))).document;
  const orbit: OrbitDocument = (await runOrbit(session, out("same"))).document;
  const { document } = await runPlate(session, out("same"));
  const [caption] = document.captions;
  const [first] = maps.maps;
  const said = numbersAfter(caption!, "Feature 1: Vx = ", "Vy = ");
  const feature = first!.features[0]!;
  assertSaid(said[0]!, feature.vx_kms, feature.vx_error_kms);
  assertSaid(said[1]!, feature.vy_kms, feature.vy_error_kms);
  assertSaid(number(caption!, /χ²\/N = ([\d.]+)/), first!.reduced_chi_square, null);
  assertSaid(number(caption!, /(\d+) × \d+ pixels/), first!.pixels, null);
  assertSaid(number(caption!, /rest wavelength ([\d.]+)/), first!.rest_air_angstrom, null);
  for (const [star, report] of [["accretor", orbit.accretor], ["donor", orbit.donor]] as const) {
    const curve = orbit.curves.find(({ line, method }) =>
      line === report!.line && method === report!.method
    )!;
    const [k, gamma, crossing] = numbersAfter(caption!, `, ${star}, K = `, "γ = ", "at phase ");
    assertSaid(k!, curve.k_kms!, curve.k_error_kms);
    assertSaid(gamma!, curve.systemic_kms!, curve.systemic_error_kms);
    assertSaid(crossing!, curve.crossing_phase!, curve.crossing_phase_error);
  }
  const { masses } = orbit;
  const [m1, m2] = numbersAfter(caption!, "Adopted: ", ", ");
  const half = (low: number | null, high: number | null) => (low! + high!) / 2;
  assertSaid(
    m1!,
    masses.accretor_msun!,
    half(masses.accretor_error_low_msun, masses.accretor_error_high_msun),
  );
  assertSaid(
    m2!,
    masses.donor_msun!,
    half(masses.donor_error_low_msun, masses.donor_error_high_msun),
  );

  // The page holds the features as they are, and the table rounds them as their errors justify.
  const html = await Deno.readTextFile(join(night.folder, "same", "report.html"));
  const data = JSON.parse(html.match(/id="report-data">(.*?)<\/script>/)![1]!);
  for (const [i, { features, method }] of maps.maps.entries()) {
    const [shown] = data.lines[i].maps;
    assertEquals(shown.method, method);
    assertEquals(
      shown.features.map((one: { vx_kms: number; vy_kms: number }) => [one.vx_kms, one.vy_kms]),
      features.map(({ vx_kms, vy_kms }) => [vx_kms, vy_kms]),
    );
  }
  const table = html.match(/<table[\s\S]*?<\/table>/)![0].replaceAll(/<[^>]+>/g, " ");
  const [vx] = numbersAfter(table.replaceAll(/\s+/g, " "), "feature 1: V x ");
  assertSaid(vx!, feature.vx_kms, feature.vx_error_kms);
});

Deno.test("runPlate() draws rims at the Keplerian speed of their radius, and contours", async () => {
  const plate = `[plate]
contours = [0.5]
rims_over_a = [0.32]
rows = [{ panels = ["map"] }]
`;
  const session = await night.open({ plate, set: [...FEW, "binary.mass_ratio_error=0.02"] });
  const { document } = await runPlate(session, out("rims"));
  const [caption] = document.captions;
  // v sin i = √(G M1 / r) sin i with M1, a and i of the recipe, by hand: 734 km/s at r = 0.32 a.
  const { binary } = parseTarget(
    await Deno.readTextFile(new URL("../../examples/demo/recipe.toml", import.meta.url)),
  ).settings;
  const period_s = 0.0823714 * 86400;
  const gm_sun = 1.3271244e20;
  const total = gm_sun * binary.mass_accretor_msun! * (1 + binary.mass_ratio!);
  const a = Math.cbrt(total * (period_s / (2 * Math.PI)) ** 2);
  const speed = Math.sqrt(gm_sun * binary.mass_accretor_msun! / (0.32 * a)) / 1000;
  const seen = speed * Math.sin(binary.inclination_deg! * Math.PI / 180);
  // The observer's K1 + K2 is within a part in a thousand of the truth.
  const said = number(caption!, /Keplerian speed ([\d.]+) km\/s/);
  assert(Math.abs(said.value / seen - 1) < 2e-3, `${said.value} for ${seen}`);
  assertStringIncludes(caption!, "Contours at 0.5 of the peak");
  assertStringIncludes(caption!, "Band: streams from q = 0.2 to 0.24.");
});

const wrong: [when: string, plate: string, message: RegExp, set?: readonly string[]][] = [
  [
    "a panel is not known",
    'rows = [\n  { panels = ["map"] },\n  { panels = ["trail", "residal"] },\n]',
    /current value is "residal" \(.*plate-\d+\.toml:(\d+), key plate\.rows\[1\]\.panels\[1\]\); the nearest is "residual"/,
  ],
  [
    "a colour map is not known",
    'colour_map = "ciridis"',
    /"ciridis" \(.*\.toml:\d+, key plate\.colour_map\); the nearest is "viridis"|the nearest is "cividis"/,
  ],
  [
    "a row's line is not there",
    'rows = [{ panels = ["map"], line = "He I 4471" }]',
    /one of H beta, He II 4686, Na I 8190: current value is "He I 4471" \(.*\.toml:\d+, key plate\.rows\[0\]\.line\)/,
  ],
  [
    "a panel's line is not mapped though rows are for each line",
    'each_line = true\nrows = [{ panels = ["map", { panel = "trail", line = "Na I 8190" }] }]',
    /one of H beta, He II 4686: current value is "Na I 8190"/,
  ],
  [
    "maps were not resampled",
    'rows = [{ panels = ["spread"] }]',
    /it needs spread of H beta \(.*\.toml:\d+, key plate\.rows\[0\]\.panels\[0\]\); set map\.resamples to 2 or more/,
    ["map.resamples=0"],
  ],
];

for (const [when, plate, message, set] of wrong) {
  Deno.test(`runPlate() names file, line, key and remedy when ${when}`, async () => {
    const session = await night.open({ plate: `[plate]\n${plate}\n`, set: set ?? FEW });
    const error = await assertRejects(() => runPlate(session, out("wrong")), InputError);
    assertMatch(error.message, message);
    const line = error.message.match(/\.toml:(\d+)/);
    if (line === null) return;
    const text = session.target.text.split("\n")[Number(line[1]) - 1]!;
    assert(/panels|colour_map|rows/.test(text), `line ${line[1]} is: ${text}`);
  });
}

Deno.test("runPlate() finds a wrong word before it reads a file", async () => {
  const target = parseTarget(`format = 1
[orbit]
period_d = 0.08
zero_bjd_tdb = 2460311.6
[[exposures]]
files = ["not-there/*.fits"]
[[lines]]
name = "H beta"
[plate]
rows = [{ panels = ["mapp"] }]
`);
  await assertRejects(
    () => runPlate(openSession(target), out("early")),
    InputError,
    'the nearest is "map"',
  );
});

Deno.test("runPlate() draws a donor's line without a map of it when no panel needs one", async () => {
  const plate = '[plate]\nrows = [{ panels = ["trail", "coverage"], line = "Na I 8190" }]\n';
  const session = await night.open({ plate });
  const { document } = await runPlate(session, out("donor"));
  assertMatch(document.captions[0]!, /^Trail as observed .*night 1, 60 exposures\.$/);
});

Deno.test("runPlate() repeats rows for each mapped line, and shows two lines in one row", async () => {
  const each = await night.open({
    plate: '[plate]\neach_line = true\nrows = [{ panels = ["map"] }]\n',
  });
  const { document: repeated } = await runPlate(each, out("each"));
  assertEquals(repeated.captions[0]!.match(/Velocity map of/g)!.length, 2);
  const pair = await night.open({
    plate: '[plate]\nrows = [{ panels = ["map", { panel = "map", line = "He II 4686" }] }]\n',
  });
  const { document, files } = await runPlate(pair, out("pair"));
  assertMatch(document.captions[0]!, /VX-0417, H beta .*VX-0417, He II 4686 /);

  // What the command tells of them; by hand: two squares of 449 pt, each with 57 pt of axes and bar, 9 pt apart.
  assertEquals(plateLines(repeated), [
    "  figure  mm         formats  lines       panels",
    "  ──────  ─────────  ───────  ──────────  ──────",
    "  plate   174 × 360  svg txt  H beta      map",
    "                              He II 4686  map",
  ]);
  assertEquals(document.figures.map(({ rows }) => rows), [
    [{ lines: ["H beta", "He II 4686"], panels: ["map", "map"] }],
  ]);
  const [, height] = (await Deno.readTextFile(files[0]!)).match(/height="([\d.]+)pt"/)!;
  assertAlmostEquals(document.figures[0]!.height_mm, Number(height) / 72 * 25.4, 0.05);
});

/** A number as it stands in a text. */
interface Said {
  readonly value: number;
  readonly error: number | null;
  readonly decimals: number;
}

function parse(text: string): Said {
  const match = text.match(/^([−-]?\d+(?:\.\d+)?)(?: ± (\d+(?:\.\d+)?))?/)!;
  const plain = match[1]!.replace("−", "-");
  return {
    value: Number(plain),
    error: match[2] === undefined ? null : Number(match[2]),
    decimals: (plain.split(".")[1] ?? "").length,
  };
}

function number(text: string, pattern: RegExp): Said {
  return parse(text.match(pattern)![1]!);
}

/** The numbers that stand after words, each sought behind the one before. */
function numbersAfter(text: string, ...words: string[]): Said[] {
  let at = 0;
  return words.map((word) => {
    const found = text.indexOf(word, at);
    assert(found >= 0, `"${word}" in ${text}`);
    at = found + word.length;
    return parse(text.slice(at));
  });
}

/** A number in a text is one of a document, rounded; with an error, to its second digit. */
function assertSaid(said: Said, value: number, error: number | null): void {
  const unit = 10 ** -said.decimals;
  const slack = said.decimals === 0 ? Math.max(0.5, Math.abs(value) * 5e-4) : 0.5 * unit;
  assert(Math.abs(said.value - value) <= slack * (1 + 1e-9), `${said.value} for ${value}`);
  if (error === null) return;
  assert(Math.abs(said.error! / error - 1) <= 0.05, `${said.error} for ${error}`);
  assert(unit <= error, `${said.decimals} decimals for an error of ${error}`);
}
