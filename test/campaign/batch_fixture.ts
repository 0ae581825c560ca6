import { assert, assertEquals } from "@std/assert";
import { join } from "@std/path";
import { makeSample } from "../../examples/sample/make_sample.ts";

/** What makes the sample's stars small: few exposures, one arm, one line, a coarse map. */
const SMALL_STARS = [
  "observation.count=12",
  "observation.arms=[{name='blue', first_angstrom=4700.0, step_angstrom=2.4, pixels=130, resolution_angstrom=6.0}]",
];
const SMALL_SETTINGS = [
  `lines=[{name="H beta", continuum_kms=[[-6000, -3200], [5800, 7800]]}]`,
  "map.pixels=61",
  "map.resamples=2",
  'plate.formats=["png"]',
  "plate.png_dpi=60",
];

/** A small campaign of the sample's first stars. */
export interface SmallCampaign {
  /** Path of the manifest. */
  readonly manifest: string;
  /** Names of the targets. */
  readonly names: readonly string[];
  /** The manifest's overrides, for single commands. */
  readonly set: readonly string[];
}

/** Makes a campaign that a batch goes through in a few seconds; with `full`, stars of full size. */
export async function smallCampaign(
  folder: string,
  options: { stars?: number; more?: string; commands?: readonly string[]; full?: boolean } = {},
): Promise<SmallCampaign> {
  const { stars = 3, more = "", commands = ["check", "trail", "map", "plate"], full } = options;
  const names: string[] = [];
  const onStar = (name: string) => names.push(name);
  await makeSample(folder, { stars, set: full ? [] : SMALL_STARS, onStar });
  const manifest = join(folder, "night.toml");
  await Deno.writeTextFile(
    manifest,
    `format = 1
title = "A night"
targets = ["stars/*.toml"]
commands = ${JSON.stringify(commands)}
set = [
${(full ? [] : SMALL_SETTINGS).map((text) => `  '''${text}''',`).join("\n")}
]
${more}`,
  );
  return { manifest, names, set: SMALL_SETTINGS };
}

/** All ordinary files under a folder, by their paths from it; those of our own making begin with a dot. */
export async function filesUnder(folder: string): Promise<Map<string, Uint8Array>> {
  const found = new Map<string, Uint8Array>();
  const walk = async (path: string) => {
    for await (const entry of Deno.readDir(join(folder, path))) {
      const name = path === "" ? entry.name : `${path}/${entry.name}`;
      if (entry.isDirectory) await walk(name);
      else found.set(name, await Deno.readFile(join(folder, name)));
    }
  };
  await walk("");
  return found;
}

/** A file's bytes as text, but for times and, in `batch.json`, what the work cost. */
function timeless(name: string, bytes: Uint8Array): string {
  const text = new TextDecoder("latin1").decode(bytes);
  if (!/(^|\/)(provenance|batch)\.json$/.test(name)) return text;
  return JSON.stringify(
    JSON.parse(text),
    (key, value) => ["started", "ended", "cost"].includes(key) ? null : value,
  );
}

/** Asserts that two batches left the same files, provenance times aside. */
export async function assertSameOutputs(folder: string, reference: string): Promise<void> {
  const [found, expected] = [await filesUnder(folder), await filesUnder(reference)];
  assertEquals([...found.keys()].sort(), [...expected.keys()].sort());
  for (const [name, bytes] of expected) {
    assert(timeless(name, found.get(name)!) === timeless(name, bytes), `${name} differs`);
  }
}

function stepsIn(provenance: string): string[] {
  const { runs } = JSON.parse(provenance) as { runs: { steps: { status: string }[] }[] };
  return runs.flatMap(({ steps }) => steps.filter(({ status }) => status === "done"))
    .map((step) => JSON.stringify(step));
}

/**
 * Asserts that an unfinished batch holds nothing wrong: every file under a final name has the bytes
 * of the finished one, and the provenance records as done only what the finished one does. Tables
 * tell of failures, where there may have been some.
 */
export async function assertNothingWrong(
  folder: string,
  reference: string,
  options: { tables?: boolean } = {},
): Promise<void> {
  const { tables = true } = options;
  const [found, expected] = [await filesUnder(folder), await filesUnder(reference)];
  for (const [name, bytes] of found) {
    if (/(^|\/)\.millrace/.test(name) || (!tables && !name.includes("/"))) continue;
    const right = expected.get(name);
    assert(right !== undefined, `${name} should not be there`);
    const [text, rightText] = [timeless(name, bytes), timeless(name, right)];
    if (name.endsWith("provenance.json")) {
      const known = stepsIn(rightText);
      for (const step of stepsIn(text)) assert(known.includes(step), `${name} records ${step}`);
    } else assert(text === rightText, `${name} differs`);
  }
}
