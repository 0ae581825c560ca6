import { join } from "@std/path";
import { inputBytes } from "../input_digests.ts";
import { type StepName, stepTable } from "../step_table.ts";
import { readTarget } from "../target.ts";
import { isMeant, type Manifest } from "./manifest.ts";

/** One treatment of one target: its settings, its commands, its folder. */
export interface JobRun {
  /** Name of the variant; null for the target's own treatment. */
  readonly variant: string | null;
  /** Folder of the outputs, from the batch's. */
  readonly folder: string;
  /** Steps in order. */
  readonly commands: readonly StepName[];
  /** Overrides `section.key=value`, in order. */
  readonly set: readonly string[];
}

/** One target of a batch with all that is to be done to it. */
export interface BatchJob {
  /** Name of the target. */
  readonly name: string;
  /** Path of the target file, from the root. */
  readonly file: string;
  /** The same from the manifest. */
  readonly path: string;
  /** Seed in place of the target file's. */
  readonly seed?: number;
  /** Whether maps are made in spite of a large gap in phase. */
  readonly force: boolean;
  /** Its treatments, the target's own first. */
  readonly runs: readonly JobRun[];
}

/**
 * What a manifest asks for, target by target.
 *
 * @param manifest The manifest.
 * @param options Changes for all.
 * @param options.set Overrides after those of the manifest.
 * @param options.seed Seed in place of the target files'.
 * @param options.force Whether maps are made in spite of a large gap in phase. @default false
 * @returns One job a target, sorted by name.
 */
export function batchJobs(
  manifest: Manifest,
  options: { set?: readonly string[]; seed?: number; force?: boolean } = {},
): BatchJob[] {
  const { set = [], seed, force = false } = options;
  const { settings, targets } = manifest;
  return targets.map((target) => {
    const own = [
      ...settings.set,
      ...settings.changes.filter((change) => isMeant(target, change.targets))
        .flatMap((change) => change.set),
    ];
    const variants = settings.variants.filter((variant) => isMeant(target, variant.targets));
    return {
      name: target.name,
      file: target.file,
      path: target.path,
      ...(seed === undefined ? {} : { seed }),
      force,
      runs: [
        {
          variant: null,
          folder: target.name,
          commands: inOrder(settings.commands),
          set: [...own, ...set],
        },
        ...variants.map((variant) => ({
          variant: variant.name,
          folder: join(target.name, variant.name),
          commands: inOrder(variant.commands),
          set: [...own, ...variant.set, ...set],
        })),
      ],
    };
  });
}

/** Commands in the table's order, with a thumbnail wherever there is a map to be seen. */
function inOrder(commands: readonly StepName[]): StepName[] {
  const asked = new Set(commands);
  if (asked.has("map") || asked.has("plate")) asked.add("thumbnail");
  return (Object.keys(stepTable) as StepName[]).filter((name) => asked.has(name));
}

/** Time that opening a target takes, in units of reading a megabyte of exposures. */
const OPENING = 0.2;

/**
 * Time that each treatment of a job is expected to take, from the size of its exposures, its lines and
 * its commands.
 *
 * @param job The job.
 * @returns The times in units of reading a megabyte of exposures; that of opening alone where the
 * target is wrong and will fail at once.
 */
export async function expectedCosts(job: BatchJob): Promise<number[]> {
  const costs: number[] = [];
  for (const { set, commands } of job.runs) {
    let cost = OPENING;
    try {
      const target = await readTarget(job.file, { set, seed: job.seed });
      const megabytes = await inputBytes(target) / 1e6;
      const { lines } = target.settings;
      for (const command of commands) {
        cost += megabytes * Math.max(1, lines.length) * stepTable[command].cost(target.settings);
      }
    } catch {
      // What is wrong with it is told when its turn comes.
    }
    costs.push(cost);
  }
  return costs;
}
