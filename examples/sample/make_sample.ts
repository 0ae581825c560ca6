/**
 * Simulates the 24 invented stars of the sample into a folder: raw exposures, the target files that
 * their observer would write, and the manifest.
 *
 *     deno run --allow-read --allow-write examples/sample/make_sample.ts sample-run
 *     deno task millrace batch sample-run/sample.toml
 */
import { join } from "@std/path";
import { binaryOf, parseTarget, simulateExposures } from "../../engine/campaign/mod.ts";
import { makeFolder, parseCsv, writeFileAtomically } from "../../engine/files/mod.ts";
import recipe from "./recipe.toml" with { type: "text" };
import manifest from "./sample.toml" with { type: "text" };
import table from "./stars.csv" with { type: "text" };

/** Orbits that the exposures of each star cover. */
const ORBITS = 1.2;

/** How the sample is made. */
export interface SampleOptions {
  /** Number of stars; beyond 24 the list begins again with other seeds. @default {24} */
  readonly stars?: number;
  /** Overrides `section.key=value` of the recipe, after those of the stars. @default {[]} */
  readonly set?: readonly string[];
  /** Told the name of each star when its exposures are written. @default None */
  readonly onStar?: (name: string) => void;
}

/**
 * Makes the sample.
 *
 * @param folder Where; made when missing.
 * @param options How much of it.
 * @returns Path of the manifest.
 */
export async function makeSample(folder: string, options: SampleOptions = {}): Promise<string> {
  const { stars: count = 24, set = [], onStar } = options;
  const { names, rows } = parseCsv(table, { file: "stars.csv" });
  for (let k = 0; k < count; k++) {
    const cells = rows[k % rows.length]!.cells;
    const round = Math.floor(k / rows.length);
    const star = Object.fromEntries(names.map((key, i) => [key, cells[i]!]));
    const name = `${star.name}${round === 0 ? "" : `-${round + 1}`}`;
    await makeStar(join(folder, "stars"), {
      name,
      set: [...settingsOf(star), ...set],
      seed: Number(star.seed) + 1000 * round,
    });
    onStar?.(name);
  }
  const file = join(folder, "sample.toml");
  await writeFileAtomically(file, `# Written by Millrace.\n${manifest}`);
  return file;
}

/** The cells of a star as overrides; an empty one leaves the recipe as it is. */
function settingsOf(star: Readonly<Record<string, string>>): string[] {
  return Object.entries(star).filter(([key, value]) => key.includes(".") && value !== "")
    .map(([key, value]) => {
      const plain = /^\[/.test(value) || Number.isFinite(Number(value));
      return `${key}=${plain ? value : JSON.stringify(value)}`;
    });
}

async function makeStar(
  folder: string,
  options: { name: string; set: readonly string[]; seed: number },
): Promise<void> {
  const { name, seed } = options;
  const draft = parseTarget(recipe, { file: "recipe.toml", set: options.set, seed });
  const { orbit, observation } = draft.settings;
  const { count, overhead_s } = observation!;
  const cycle_s = ORBITS * orbit.period_d! * 86400 / count;
  const truth = parseTarget(recipe, {
    file: "recipe.toml",
    set: [
      ...options.set,
      `title=${name.toUpperCase()}`,
      `observation.exposure_s=${(cycle_s - overhead_s).toFixed(1)}`,
    ],
    seed,
  });
  await makeFolder(folder);
  await simulateExposures(truth, { folder: join(folder, name) });
  const { k_donor_kms } = binaryOf(truth)!;
  const { binary, observation: plan } = truth.settings;
  const arms = plan!.arms.map((arm) => `[[exposures]]\nfiles = ["${name}/${arm.name}/*"]\n`);
  await writeFileAtomically(
    join(folder, `${name}.toml`),
    `# Written by Millrace: what an observer of this invented star would write.

format = 1
title = "${truth.title}"

[orbit]
period_d = ${orbit.period_d}
period_error_d = 0.0000006
zero_bjd_tdb = ${orbit.zero_bjd_tdb}
zero_error_d = 0.0003
systemic_kms = ${orbit.systemic_kms}

[binary]
k_donor_kms = ${k_donor_kms.toFixed(1)}
mass_ratio = ${binary.mass_ratio}
inclination_deg = ${binary.inclination_deg}
inclination_error_deg = 2.0

${arms.join("\n")}
[[lines]]
name = "H beta"
reach_kms = 2500
continuum_kms = [[-6000, -3200], [5800, 7800]]     # clear of He I 4922 and 5016

[[lines]]
name = "Na I 8190"
components_air_angstrom = [8183.26, 8194.82]
traces = "donor"
reach_kms = 1500
continuum_kms = [[-4500, -2000], [2200, 5000]]
`,
  );
}

if (import.meta.main) {
  const [folder = "sample-run"] = Deno.args;
  const file = await makeSample(folder, { onStar: (name) => console.error(name) });
  console.log(`wrote ${file}`);
}
