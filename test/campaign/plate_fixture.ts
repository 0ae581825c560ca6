// The demo's campaign on the disc, simulated once for all tests of plates and pages.
import { join } from "@std/path";
import {
  openSession,
  parseTarget,
  readTarget,
  type Session,
  simulateExposures,
} from "../../engine/campaign/mod.ts";

const DEMO = new URL("../../examples/demo/", import.meta.url);

/** Settings with which plates are soon made. */
export const FEW = [
  "map.resamples=3",
  "map.structures=false",
  "weigh.trials=20",
  'plate.formats=["svg"]',
];

/** The demo's exposures in a folder, with its target file beside them. */
export interface DemoNight {
  /** The folder. */
  readonly folder: string;
  /**
   * Writes a target file of the demo with a `[plate]` table after it, and opens it. Sessions of the same
   * settings share exposures, maps and the orbit: they differ in `[plate]` alone.
   */
  readonly open: (options?: { plate?: string; set?: readonly string[] }) => Promise<Session>;
}

/** Simulates the demo's night, for one file of tests; its folder goes when they are done. */
export async function demoNight(): Promise<DemoNight> {
  const folder = await Deno.makeTempDir({ prefix: "millrace-plates-" });
  Deno.test.afterAll(() => Deno.remove(folder, { recursive: true }));
  const recipe = await Deno.readTextFile(new URL("recipe.toml", DEMO));
  const target = await Deno.readTextFile(new URL("vx-0417.toml", DEMO));
  await simulateExposures(parseTarget(recipe, { file: "recipe.toml" }), { folder });
  const made = new Map<string, Session>();
  let count = 0;
  return {
    folder,
    async open({ plate = "", set = FEW } = {}) {
      const file = join(folder, `plate-${++count}.toml`);
      await Deno.writeTextFile(file, `${target}\n${plate}`);
      const own = await readTarget(file, { set });
      const key = set.filter((one) => !one.startsWith("plate.")).join("\n");
      const base = made.get(key) ?? openSession(own);
      made.set(key, base);
      // Work is known by its line: the table of the first file stands for those of all.
      const { lines } = base.target.settings;
      return { ...base, target: { ...own, settings: { ...own.settings, lines } } };
    },
  };
}
