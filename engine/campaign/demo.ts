import { join } from "@std/path";
import { rimImpact } from "../binary/mod.ts";
import { InputError } from "../errors.ts";
import { makeFolder, writeFileAtomically } from "../files/mod.ts";
import type { Progress } from "../workers/mod.ts";
import { binaryOf } from "./binary_of.ts";
import { simulateExposures } from "./simulate.ts";
import { parseTarget, type Target } from "./target.ts";

/** The invented campaign: its truth and the files of its observer. */
export interface DemoCampaign {
  /** Recipe: the truth. */
  readonly recipe: Target;
  /** Path of the observer's target file. */
  readonly target_file: string;
  /** Raw exposures written. */
  readonly exposures: readonly string[];
}

/**
 * Simulates the invented campaign into a folder: raw exposures, and the target file that their
 * observer would write.
 *
 * @param folder The folder.
 * @param options The texts of the campaign.
 * @param options.recipe Text of the recipe: the truth and the plan of the observation.
 * @param options.target Text of the observer's target file.
 * @param options.target_name Name of the observer's target file.
 * @param options.seed Seed, in place of the recipe's.
 * @param options.set Overrides that the target file will be read with, checked first.
 * @param options.overwrite Whether an edited target file may be replaced. @default false
 * @param options.progress Told of each file.
 * @param options.signal Aborts the work.
 * @returns Where things are.
 * @throws {InputError} When the target file was edited, or an override is wrong.
 */
export async function simulateDemo(
  folder: string,
  options: {
    recipe: string;
    target: string;
    target_name: string;
    seed?: number;
    set?: readonly string[];
    overwrite?: boolean;
    progress?: Progress;
    signal?: AbortSignal;
  },
): Promise<DemoCampaign> {
  const { progress, signal, seed } = options;
  const recipe = parseTarget(options.recipe, { file: "examples/demo/recipe.toml", seed });
  const target_file = join(folder, options.target_name);
  const text = `# written by Millrace\n${options.target}`;
  // Settings are checked before anything is written, and a file that was edited is left alone.
  parseTarget(text, { file: target_file, set: options.set });
  if (!options.overwrite) await refuseEdited(target_file, text);
  await makeFolder(folder);
  const exposures = await simulateExposures(recipe, { folder, progress, signal });
  await writeFileAtomically(target_file, text, { overwrite: options.overwrite });
  return { recipe, target_file, exposures };
}

async function refuseEdited(file: string, text: string): Promise<void> {
  const before = await readTextIfAny(file);
  if (before === null || before === text) return;
  throw new InputError({
    action: "write the demo's target file",
    rule: "it must not have been edited since the demo wrote it",
    file,
    remedy: "save your changes under another name, or give --overwrite",
  });
}

async function readTextIfAny(file: string): Promise<string | null> {
  try {
    return await Deno.readTextFile(file);
  } catch (error) {
    if (error instanceof Deno.errors.NotFound) return null;
    throw error;
  }
}

/** Where the bright spot of a recipe truly is, km/s; null when the recipe has none. */
export function trueSpot(
  recipe: Target,
  options: { line: string },
): { vx_kms: number; vy_kms: number; flux_fraction: number } | null {
  const binary = binaryOf(recipe);
  const { model: common, lines } = recipe.settings;
  const model = lines.find(({ name }) => name === options.line)?.model ?? common;
  if (binary === null || model === undefined || !model.parts.includes("spot")) return null;
  const { disc = {}, spot = {} } = model;
  const { stream, keplerian } = rimImpact(
    spot.radius_over_a ?? disc.outer_radius_over_a ?? 0.3,
    binary,
  );
  const mixing = spot.mixing ?? 0;
  const [part, rest] = [spot.equivalent_width_kms ?? 300, disc.equivalent_width_kms ?? 3000];
  return {
    vx_kms: stream.vx_kms + mixing * (keplerian.vx_kms - stream.vx_kms),
    vy_kms: stream.vy_kms + mixing * (keplerian.vy_kms - stream.vy_kms),
    flux_fraction: part / (part + rest),
  };
}
