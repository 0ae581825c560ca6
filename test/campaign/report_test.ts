import {
  assert,
  assertEquals,
  assertLess,
  assertMatch,
  assertNotEquals,
  assertStringIncludes,
} from "@std/assert";
import { join } from "@std/path";
import { runPlate } from "../../engine/campaign/mod.ts";
import { halvesSubject, nightMaps } from "../../engine/campaign/subject/map_subject.ts";
import { nightsOf, rowsOf } from "../../engine/campaign/subject/nights.ts";
import { backProject } from "../../engine/tomography/mod.ts";
import { limitMap } from "../../engine/campaign/subject/limit_subject.ts";
import { toolExists } from "../figures/decode.ts";
import { BROWSER } from "../figures/page/browser_checks.ts";
import { demoNight, FEW } from "./plate_fixture.ts";
import type { PageVisit } from "./report_in_browser.ts";

const night = await demoNight();
const file = join(night.folder, "page", "report.html");

// One page serves all checks: maps by entropy, and a plate with the detection limit.
const session = await night.open({
  plate: '[plate]\nrows = [{ panels = ["map", "detection-limit"] }]\n',
  set: [
    ...FEW,
    "map.method=entropy",
    "map.resamples=0",
    'plate.page_methods=["entropy", "total-variation"]',
  ],
});
await runPlate(session, { folder: join(night.folder, "page") });
const html = await Deno.readTextFile(file);
const data = JSON.parse(html.match(/id="report-data">(.*?)<\/script>/)![1]!);

/** The page without scripts and fonts. */
const markup = html.replaceAll(/<(script|style)[\s\S]*?<\/\1>/g, "");

/** The answer to a question of the checklist, as plain text. */
function answer(question: string): string {
  const plain = html.slice(html.indexOf('id="checklist"')).replaceAll(/<[^>]+>/g, " ")
    .replaceAll(/\s+/g, " ");
  const at = plain.indexOf(question);
  assert(at >= 0, question);
  return plain.slice(at + question.length, at + question.length + 260).trim();
}

Deno.test("reportHtml() keeps the demo's page under 3 MB, and asks nothing of the network", () => {
  assertLess(new TextEncoder().encode(html).length, 3e6);
  assertEquals(markup.match(/(src|href)="(?!data:|#)[^"]*/)?.[0], undefined);
});

Deno.test("reportHtml() offers the methods that are asked for, and back-projection, each once", () => {
  for (const { maps } of data.lines) {
    assertEquals(maps.map(({ method }: { method: string }) => method), [
      "entropy",
      "total-variation",
      "back-projection",
    ]);
    const [one, ...others] = maps;
    for (const other of others) {
      assertEquals(other.pixels, one.pixels);
      assertNotEquals(other.intensity, one.intensity);
    }
    for (const { reduced_chi_square } of maps) assert(Math.abs(reduced_chi_square - 1) < 0.1);
  }
});

Deno.test("reportHtml() fills in the referee's checklist as far as the run knows", () => {
  assertMatch(answer("Was K of the donor corrected"), /for irradiation\? .*photospheric and needs/);
  assertMatch(answer("Is it seen in every night?"), /There is one night/);
  assertMatch(
    answer("Does the map hold at"),
    /At γ ± 1\.\d+ km\/s \(parity of the moments of this data\) the strongest feature moves by/,
  );
  assertMatch(
    answer("Is the feature seen in both halves"),
    /odd exposures: seen; even exposures: seen/,
  );
  assertMatch(
    answer("Is there an upper limit where nothing is seen?"),
    /^\S* ?\d+(\.\d+)? km\/s of the continuum for a compact source \(σ 60 km\/s\) at the donor, at 95 %/,
  );
  assert(!/NaN|undefined|Infinity/.test(markup));
});

Deno.test("reportHtml() says how to get a detection limit when the run made none", async () => {
  const plain = await night.open();
  await runPlate(plain, { folder: join(night.folder, "plain") });
  const text = await Deno.readTextFile(join(night.folder, "plain", "report.html"));
  assertStringIncludes(text, "put the panel detection-limit on the plate, or run weigh");
});

Deno.test("nightsOf() parts exposures at gaps of hours, not at read-outs or a cloud", () => {
  const period_d = 0.0823714;
  const hours = [0, 0.1, 0.2, 1.6, 1.7, 24.1, 24.2, 48.3];
  const orbits = hours.map((hour) => 100.3 + hour / 24 / period_d);
  const sampling = {
    cycle: Float64Array.from(orbits, Math.floor),
    phase: Float64Array.from(orbits, (x) => x - Math.floor(x)),
  };
  assertEquals(nightsOf(sampling, { period_d }), [0, 0, 0, 0, 0, 1, 1, 2]);
  // An orbit of two days: a third of it passes between two nights.
  const long = {
    cycle: new Float64Array(4),
    phase: Float64Array.of(0.01, 0.02, 0.36, 0.37),
  };
  assertEquals(nightsOf(long, { period_d: 2 }), [0, 0, 1, 1]);
});

Deno.test("halvesSubject() and nightMaps() part two nights, and make no map of too few exposures", async () => {
  const line = session.lines("test")[0]!;
  const mapped = await session.map(line);
  const { sampling } = mapped.trail;
  const parted = (first: number) => {
    const cycle = sampling.cycle.map((value, i) => i < first ? value : value + 291); // a day later
    return { ...mapped, trail: { ...mapped.trail, sampling: { ...sampling, cycle } } };
  };
  const period_d = 0.0823714;
  assertEquals(halvesSubject(mapped, { period_d }).names, ["odd exposures", "even exposures"]);
  const { names, maps } = halvesSubject(parted(30), { period_d });
  assertEquals(names, ["first night", "second night"]);
  assertNotEquals(maps[0].intensity, maps[1].intensity);
  const [first, second] = nightMaps(parted(55), { period_d });
  assertEquals([first!.name, first!.exposures, second!.name, second!.exposures], [
    "night 1",
    55,
    "night 2",
    5,
  ]);
  assert(first!.map !== null);
  assertEquals(second!.map, null);
  // Each night's map is that of its own exposures alone.
  const grid = rowsOf(mapped.trail.grid, (row) => row < 55);
  const alone = backProject({ grid }, {
    pixels: mapped.map.pixels,
    half_width_kms: mapped.map.half_width_kms,
    systemic_kms: mapped.systemic_kms,
  });
  assertEquals(first!.map!.intensity, alone.intensity);
});

Deno.test("limitMap() turns shares of the line's light into flux, place by place", () => {
  const cells = 31;
  // A share that rises from left to right; none in one corner.
  const share = Array.from({ length: cells * cells }, (_, k) => 0.1 + 0.2 * (k % cells) / 30);
  const limit = {
    cells,
    half_width_kms: 1500,
    sigma_kms: 60,
    false_alarm: 0.01,
    threshold: 4,
    threshold_error: 0.1,
    trials: 20,
    fraction_50: share,
    fraction_95: share.map((value, k) => k === 15 * cells + 15 ? null : value),
    fraction_95_error: share.map(() => 0),
  };
  const map = limitMap({ limit, light_kms: 900 }, { pixels: 61, half_width_kms: 1500 });
  const at = (column: number, row: number) => map.intensity[row * 61 + column]!;
  // Pixel 10 of 61 is cell 5 of 31: share 0.1333, flux 900 × 0.1333 / 0.8667 = 138.5 by hand.
  assert(Math.abs(at(10, 30) - 138.46) < 0.01, `${at(10, 30)}`);
  assert(Number.isNaN(at(30, 30)), "no share would be found in the middle");
  assert(Number.isNaN(at(0, 0)), "corners are beyond the map's circle");
  assertEquals([map.found_part, map.trials], [0.95, 20]);
});

Deno.test({
  name: "the demo's page works in a real browser: switches, keyboard, no complaint",
  ignore: !toolExists(BROWSER),
  async fn() {
    const script = new URL("report_in_browser.ts", import.meta.url).pathname;
    const picture = join(night.folder, "page.png");
    const command = new Deno.Command(Deno.execPath(), {
      args: ["run", "--allow-all", "--no-check", script, file, picture],
    });
    const { stdout, stderr } = await command.output();
    const text = new TextDecoder().decode(stdout).trim();
    assert(text.startsWith("{"), new TextDecoder().decode(stderr));
    const visit: PageVisit = JSON.parse(text);
    assertEquals(visit.faults, []);
    assertEquals(visit.methods, ["entropy", "total-variation", "back-projection"]);
    assertEquals(visit.lines, ["Hβ", "He II 4686"]);
    assertMatch(visit.readout, /^Vx −5\d\d, Vy 3\d\d km\/s: an S-wave of 6\d\d km\/s/);
    assertMatch(visit.shown[0], /^Hβ.* entropy, χ²\/N = /);
    assertMatch(visit.shown[1], /^Hβ.* back-projection, χ²\/N = /);
    assertMatch(visit.shown[2], /^He II 4686, /);
    assertMatch(visit.exposures[0], /^1 of 60/);
    assertMatch(visit.exposures[1], /^2 of 60/);
    assert((await Deno.stat(picture)).size > 50_000);
  },
});
