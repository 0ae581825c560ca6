import { assert, assertAlmostEquals, assertEquals, assertLess, assertThrows } from "@std/assert";
import { join } from "@std/path";
import {
  openSession,
  type OrbitDocument,
  parseTarget,
  readTarget,
  runOrbit,
} from "../../engine/campaign/mod.ts";
import { refinedTarget } from "../../engine/campaign/refined_target.ts";
import { InputError } from "../../engine/errors.ts";
import { madeExposures } from "../spectra/made_exposures.ts";
import { SECTIONS, writeCampaign } from "./campaign_fixture.ts";

// Two nights of the source at (300, 400) km/s, which moves as a star with K = 500 km/s whose
// conjunction is atan(300/400)/2π = 0.1024 orbits after the zero.
const nights = [
  { name: "night", raw: madeExposures({ count: 20, cadence_s: 360, signal_to_noise: 15 }) },
  {
    name: "later",
    raw: madeExposures({
      count: 20,
      cadence_s: 360,
      signal_to_noise: 15,
      start: "2024-01-03T02:00:00",
    }),
  },
];
// A period that is known about as well as these two nights give it.
const sections = (orbit: string) => ({
  orbit: `[orbit]\n${orbit}`,
  exposures: '[[exposures]]\nfiles = ["night/*.fits", "later/*.fits"]\n',
  plate: '[plate]\nformats = ["svg"]\n',
  lines: SECTIONS.lines!.replace("reach_kms = 2000", 'reach_kms = 2000\ntraces = "donor"'),
});

async function refine(file: string, folder: string): Promise<OrbitDocument> {
  const session = openSession(await readTarget(file));
  return (await runOrbit(session, { folder: join(folder, "out") }, { refine: true })).document;
}

Deno.test("orbit --refine measured again on its own file gives the same, and counts nothing twice", async () => {
  const { folder } = await writeCampaign(
    nights,
    sections(
      "period_d = 0.08 # from eclipses\nperiod_error_d = 3e-6\nzero_hjd_tt = 2460310.6\nzero_error_d = 0.002\n",
    ),
  );
  const first = await refine(join(folder, "star.toml"), folder);
  assertEquals(first.period_from, "fitted");
  assertEquals(first.zero_from, "donor");
  const file = join(folder, "star-refined.toml");
  const text = await Deno.readTextFile(file);
  assert(text.includes("# from eclipses"));
  const { orbit } = parseTarget(text).settings;
  assertEquals(orbit.period_d, first.period_d);
  assertEquals(orbit.zero_bjd_tdb, first.zero_bjd_tdb);
  assertEquals([orbit.before?.period_d, orbit.before?.zero_hjd_tt], [0.08, 2460310.6]);
  const again = await refine(file, folder);
  assertEquals(
    [again.period_d, again.period_error_d, again.zero_bjd_tdb, again.zero_error_d],
    [first.period_d, first.period_error_d, first.zero_bjd_tdb, first.zero_error_d],
  );
  const third = await Deno.readTextFile(join(folder, "star-refined-refined.toml"));
  assertEquals(parseTarget(third).settings.orbit, orbit);
  // Without the table the period would be its own prior, and its error smaller for nothing.
  const bare = join(folder, "bare.toml");
  await Deno.writeTextFile(bare, text.slice(0, text.indexOf("[orbit.before]")));
  assertLess((await refine(bare, folder)).period_error_d!, 0.85 * first.period_error_d!);
});

Deno.test("orbit --refine of a range of periods gives a file that every command takes", async () => {
  const { folder } = await writeCampaign(nights, sections("period_range_d = [0.0798, 0.0802]\n"));
  const first = await refine(join(folder, "star.toml"), folder);
  // 0.1024 orbits after the zero of the made exposures, by whole orbits.
  assertAlmostEquals(first.period_d, 0.08, 4 * first.period_error_d!);
  const orbits = (first.zero_bjd_tdb - 2460310.6) / 0.08 - 0.1024;
  assertAlmostEquals(orbits, Math.round(orbits), 0.02);
  const { settings } = await readTarget(join(folder, "star-refined.toml"));
  assertEquals(settings.orbit.period_d, first.period_d);
  assertEquals(settings.orbit.period_range_d, undefined);
  assertEquals(settings.orbit.before?.period_range_d, [0.0798, 0.0802]);
});

Deno.test("refinedTarget() keeps a zero that is no conjunction from passing for one", () => {
  const target = parseTarget(
    "format = 1\n[orbit]\nperiod_range_d = [0.05, 0.3] # unknown\n\n[map]\npixels = 101\n",
  );
  const text = refinedTarget(
    target,
    {
      period_d: 0.1,
      period_error_d: 1e-5,
      period_from: "searched",
      zero_bjd_tdb: 2460310.5,
      zero_error_d: 0.001,
      zero_period_covariance_d2: 0,
      zero_marks: "emission-crossing",
      zero_from: "accretor",
      accretor: null,
      donor: null,
    } as unknown as Parameters<typeof refinedTarget>[1],
  );
  const { orbit } = parseTarget(text).settings;
  assertEquals([orbit.period_d, orbit.zero_marks], [0.1, "emission-crossing"]);
  assertEquals(orbit.before?.period_range_d, [0.05, 0.3]);
});

Deno.test("refinedTarget() moves the zero with the period", () => {
  const target = parseTarget("format = 1\n[orbit]\nperiod_d = 0.1\nzero_bjd_tdb = 2450000.5\n");
  const report = {
    period_d: 0.10001,
    period_error_d: 1e-6,
    period_from: "fitted",
    zero_bjd_tdb: 2460310.5,
    zero_error_d: 0.001,
    zero_period_covariance_d2: 0,
    zero_marks: "donor-conjunction",
    zero_from: "target",
    accretor: null,
    donor: null,
  } as unknown as Parameters<typeof refinedTarget>[1];
  assertEquals(parseTarget(refinedTarget(target, report)).settings.orbit.zero_bjd_tdb, 2460310.5);
});

Deno.test("parseTarget() knows the keys of [orbit.before]", () => {
  assertThrows(
    () => parseTarget("format = 1\n[orbit]\nperiod_d = 0.1\n[orbit.before]\nperid_d = 0.1\n"),
    InputError,
    'key "perid_d" is not known in [orbit.before] (target.toml:5:1, key orbit.before.perid_d); the nearest known key is "period_d"',
  );
});
