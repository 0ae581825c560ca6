// Data that the benches of the weighing room share. S/N 25 per element of 60 km/s unless stated, a line
// of 60 Å equivalent width, 60 exposures over one orbit, and continua fitted to 1 %.
import { randomStream } from "@millrace/millrace/numerics";
import type { Model } from "@millrace/millrace/synthesis";
import {
  compareHypotheses,
  type Hypothesis,
  type NoiseBank,
  noiseBank,
  type PreparedProblem,
  prepareProblem,
  simulateTrail,
  type SimulateTrailOptions,
  type TrialJob,
  trialJob,
  type WeighableTrail,
  type WeighedHypothesis,
  weighingData,
} from "@millrace/millrace/weighing";
import { binary, WIDTH } from "../weighing/made.ts";

export { binary, WIDTH };

/** A disc without a spot: round, or with patterns whose angles are drawn. */
export function discModel(seed: number, asymmetric: boolean): Model {
  const random = randomStream(seed, 1);
  return {
    parts: ["disc"],
    disc: {
      equivalent_width_kms: WIDTH,
      one_armed_amplitude: asymmetric ? 0.3 : 0,
      one_armed_deg: 360 * random.uniform(),
      two_armed_amplitude: asymmetric ? 0.2 : 0,
      two_armed_deg: 180 * random.uniform(),
    },
  };
}

/** A simulated trail. */
export function trailOf(
  model: Model,
  options: Partial<SimulateTrailOptions> = {},
): WeighableTrail {
  return simulateTrail(model, { binary, pixel_kms: 40, continuum_error: 0.01, ...options });
}

/** What trials of a null hypothesis against another need. */
export interface Pair {
  readonly prepared: PreparedProblem;
  readonly bank: NoiseBank;
  readonly simple: WeighedHypothesis;
  readonly job: TrialJob;
}

/** Prepares a pair of hypotheses on a trail. */
export function pairOf(
  trail: WeighableTrail,
  { first, second, seed }: {
    readonly first: Hypothesis;
    readonly second: Hypothesis;
    readonly seed: number;
  },
): Pair {
  const prepared = prepareProblem(weighingData(trail), { binary }, { sets: [first, second] });
  const { problem, richest, line_scale } = prepared;
  const [simple] = compareHypotheses(prepared, [first]).hypotheses;
  const bank = noiseBank(problem, richest, { line_scale });
  const job = trialJob(problem, { fit: simple!.fit, second, bank, seed });
  return { prepared, bank, simple: simple!, job };
}

/** One row of a Markdown table. */
export function row(...cells: readonly (string | number)[]): void {
  console.log(`| ${cells.join(" | ")} |`);
}
