// What keeps a map from being made, as a child process says it: the rule, the value, the place, the way out.
import { assert, assertEquals, assertStringIncludes } from "@std/assert";
import { runMillrace } from "./run_millrace.ts";
import { rawExposure, writeCampaign } from "./small_campaign.ts";

interface Case {
  readonly name: string;
  /** Exposures that are kept, of six. */
  readonly keep?: number;
  readonly change?: (k: number) => Partial<ReturnType<typeof rawExposure>>;
  readonly set?: string;
  readonly message: string;
}

const errors = (value: number) => (k: number) => ({
  error: rawExposure(k).wavelength_angstrom.map(() => value),
});

const CASES: readonly Case[] = [
  {
    name: "two exposures",
    keep: 2,
    message:
      "millrace: Cannot make velocity map as at least three exposures must have unmasked samples: current value is 2 (star.toml)",
  },
  {
    name: "a gap in phase",
    keep: 3,
    message:
      "millrace: Cannot make velocity map as phases must leave no gap over 0.35 modulo half an orbit: current value is 0.403 cycles (star.toml); observe the missing phases, or pass --force to make the map all the same",
  },
  ...[0, Infinity].map((value) => ({
    name: `errors that are all ${value}`,
    change: errors(value),
    message:
      "millrace: Cannot make trail of H beta as at least one exposure must hold a spectrum: current value is 0 (star.toml); dropped as no two samples have an error above zero and are not masked (are the errors in the file all zero?): e0.fits, e1.fits, e2.fits, e3.fits, e4.fits and 1 more",
  })),
  {
    name: "pixels over half the resolution",
    set: "map.pixels=21",
    message:
      "millrace: Cannot make velocity map as a map pixel must be at most half the resolution, 46.24 km/s: current value is 120 km/s (--set, key map.pixels); use at least 53 pixels",
  },
  {
    name: "a map beyond the data",
    set: "map.half_width_kms=1600",
    message:
      "millrace: Cannot make velocity map as a map must not reach beyond the data, which end 1477 km/s from the systemic velocity: current value is 1600 km/s (--set, key map.half_width_kms); make the map smaller, or lines.reach_kms larger",
  },
];

async function written(options: Pick<Case, "keep" | "change">): Promise<string> {
  const { keep = 6, change } = options;
  const folder = await writeCampaign(change === undefined ? {} : { change });
  for (let k = keep; k < 6; k++) await Deno.remove(`${folder}/e${k}.fits`);
  return folder;
}

for (const { name, set, message, ...options } of CASES) {
  Deno.test(`millrace map names what is wrong with ${name}`, async () => {
    const folder = await written(options);
    try {
      const args = ["map", "star.toml", ...(set === undefined ? [] : ["--set", set])];
      const run = await runMillrace([...args, "--json"], { cwd: folder });
      assertEquals([run.code, run.stdout, run.stderr.trim()], [2, "", message]);
      for await (const { isDirectory } of Deno.readDir(folder)) assert(!isDirectory);
    } finally {
      await Deno.remove(folder, { recursive: true });
    }
  });
}

Deno.test("millrace takes a line whose resolution is unknown for two pixels wide, and says so", async () => {
  const folder = await written({ change: () => ({ resolution_angstrom: null }) });
  const run = await runMillrace(["map", "star.toml", "--json"], { cwd: folder });
  await Deno.remove(folder, { recursive: true });
  assertEquals(run.code, 0);
  assertStringIncludes(run.stderr, "the instrumental profile is taken as two pixels wide");
});

Deno.test("millrace --force makes map and plate in spite of a gap in phase, and the plate says so", async () => {
  const folder = await written({ keep: 3 });
  try {
    const forced = await runMillrace(["plate", "star.toml", "--force", "--json"], { cwd: folder });
    assertEquals(forced.code, 0, forced.stderr);
    assertStringIncludes(forced.stderr, "[phase-gap]");
    assertStringIncludes(await Deno.readTextFile(`${folder}/star/plate.svg`), "phase gap 0.40");
    assertStringIncludes(JSON.parse(forced.stdout).captions[0], "a gap of 0.4029 cycles");
    const map = await runMillrace(["map", "star.toml", "--force", "--json"], { cwd: folder });
    assertEquals([map.code, JSON.parse(map.stdout).maps[0].phase_gap.toFixed(3)], [0, "0.403"]);
  } finally {
    await Deno.remove(folder, { recursive: true });
  }
});
