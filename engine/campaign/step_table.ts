import type { OutputHead } from "./output_head.ts";
import type { TargetSettings } from "./schema/target_schema.ts";
import type { Session } from "./session.ts";
import { runCheck } from "./steps/run_check.ts";
import { runMap } from "./steps/run_map.ts";
import { runOrbit } from "./steps/run_orbit.ts";
import { runPlate } from "./steps/run_plate.ts";
import { runProfile } from "./steps/run_profile.ts";
import { runSynth } from "./steps/run_synth.ts";
import { runThumbnail } from "./batch/run_thumbnail.ts";
import { runTrail } from "./steps/run_trail.ts";
import { runWeigh } from "./steps/run_weigh.ts";
import type { StepOutput, StepResult } from "./steps/step.ts";

/** A step of a command, as `batch` and `redo` run it. */
export interface StepEntry {
  /** Does it and writes its files. */
  run(session: Session, output: StepOutput): Promise<StepResult<OutputHead>>;
  /** Time expected for one line, in units of reading its exposures: for shares of equal length. */
  cost(settings: TargetSettings): number;
}

/** Replicas of a map by a direct inversion, in units of reading the exposures. */
const REPLICA = 0.02;
/** An iterative inversion over a direct one. */
const ITERATIVE = 20;
/** The tests whether any map can fit. */
const ANY_MAP = 30;

function mapCost({ map }: TargetSettings): number {
  const one = map.method === "back-projection" ? 1 : ITERATIVE;
  return ANY_MAP + one * (1 + REPLICA * map.resamples);
}

/** A trial of two hypotheses, in units of reading the exposures. */
const TRIAL = 1;

/** Name of a step. */
export type StepName =
  | "check"
  | "profile"
  | "trail"
  | "orbit"
  | "map"
  | "synth"
  | "weigh"
  | "plate"
  | "thumbnail";

/**
 * The steps by command, in the order in which one target's are run. A new command joins `batch`,
 * `redo` and the manifest by its entry here.
 */
export const stepTable: Readonly<Record<StepName, StepEntry>> = {
  check: { run: runCheck, cost: () => 1 },
  profile: { run: runProfile, cost: () => 1 },
  trail: { run: runTrail, cost: () => 1 },
  orbit: { run: runOrbit, cost: () => 5 },
  map: { run: runMap, cost: mapCost },
  synth: { run: runSynth, cost: () => 1 },
  weigh: { run: runWeigh, cost: ({ weigh }) => 10 + TRIAL * weigh.trials },
  plate: { run: runPlate, cost: () => 3 },
  thumbnail: { run: runThumbnail, cost: () => 0.5 },
};

/** Steps that a manifest may ask for; a thumbnail comes with the map by itself. */
export const commandNames: readonly StepName[] = (Object.keys(stepTable) as StepName[])
  .filter((name) => name !== "thumbnail");
