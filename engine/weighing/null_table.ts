import { InputError } from "../errors.ts";
import { sha256 } from "../files/mod.ts";
import type { TrialJob } from "./pair_trials.ts";

/**
 * Statistics of trials of one pair of hypotheses on one configuration. Trial k is the same in every
 * run, so tables of the same key can be kept, shared and joined.
 */
export interface NullTable {
  /** Digest of all that the trials depend on. */
  readonly key: string;
  /** Number of the first trial. */
  readonly first: number;
  /** Gain of chi-square of each trial. */
  readonly statistics: Float64Array;
}

/**
 * Digest of all that a pair's trials depend on: samples, errors, model, noise bank, hypotheses, seed.
 *
 * @param job The pair.
 * @returns 64 hexadecimal digits.
 *
 * @example
 * ```ts
 * import {
 *   fitHypothesis,
 *   noiseBank,
 *   nullKey,
 *   prepareProblem,
 *   simulateTrail,
 *   trialJob,
 *   weighingData,
 * } from "@millrace/millrace/weighing";
 * import { binaryFrom } from "@millrace/millrace/binary";
 * import { assertNotEquals } from "@std/assert";
 *
 * const binary = binaryFrom({ k_accretor_kms: 70, k_donor_kms: 320 });
 * const trail = simulateTrail({ parts: ["disc"] }, { binary, exposures: 16, pixel_kms: 80 });
 * const sets = [["disc"], ["disc", "spot"]] as const;
 * const prepared = prepareProblem(weighingData(trail), { binary }, { sets });
 * const { problem, richest, line_scale } = prepared;
 * const bank = noiseBank(problem, richest, { line_scale });
 * const fit = fitHypothesis(problem, { hypothesis: ["disc"] });
 * const job = trialJob(problem, { fit, second: ["disc", "spot"], bank, seed: 1 });
 * assertNotEquals(nullKey({ ...job, seed: 2 }), nullKey(job));
 * ```
 */
export function nullKey(job: TrialJob): string {
  return sha256(JSON.stringify(job, (_, value) => {
    if (ArrayBuffer.isView(value)) {
      return sha256(new Uint8Array(value.buffer, value.byteOffset, value.byteLength));
    }
    return value instanceof Map ? [...value] : value;
  }));
}

/**
 * Joins tables of one pair, whatever their order and overlap: the unbroken stretch from the
 * earliest trial on, the same bytes as one run would have given.
 *
 * @param tables At least one table, all of the same key.
 * @returns The joined table.
 * @throws {InputError} When keys differ.
 *
 * @example
 * ```ts
 * import { joinNullTables } from "@millrace/millrace/weighing";
 * import { assertEquals } from "@std/assert";
 *
 * const late = { key: "a", first: 2, statistics: Float64Array.of(5, 6) };
 * const early = { key: "a", first: 0, statistics: Float64Array.of(3, 4) };
 * assertEquals(joinNullTables([late, early]).statistics, Float64Array.of(3, 4, 5, 6));
 * ```
 */
export function joinNullTables(tables: readonly NullTable[]): NullTable {
  const sorted = [...tables].sort((a, b) => a.first - b.first);
  const [head] = sorted;
  if (head === undefined || sorted.some(({ key }) => key !== head.key)) {
    throw new InputError({
      action: "join null tables",
      rule: "there must be some, all of one configuration",
      value: [...new Set(sorted.map(({ key }) => key))].join(", "),
    });
  }
  const joined: number[] = [];
  for (const { first, statistics } of sorted) {
    const next = head.first + joined.length;
    if (first > next) break;
    joined.push(...statistics.subarray(Math.min(statistics.length, next - first)));
  }
  return { key: head.key, first: head.first, statistics: Float64Array.from(joined) };
}
