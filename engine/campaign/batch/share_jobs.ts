import { InputError } from "../../errors.ts";

/** Which of how many shares. */
export interface Part {
  /** Number of the share, from 1. */
  readonly index: number;
  /** Number of shares. */
  readonly count: number;
}

/**
 * Reads `I/N`.
 *
 * @param text As on the command line.
 * @returns The part.
 * @throws {InputError} When it is not two whole numbers with 1 ≤ I ≤ N.
 *
 * @example
 * ```ts
 * import { parsePart } from "@millrace/millrace/campaign";
 * import { assertEquals } from "@std/assert";
 *
 * assertEquals(parsePart("2/8"), { index: 2, count: 8 });
 * ```
 */
export function parsePart(text: string): Part {
  const match = /^(\d+)\/(\d+)$/.exec(text);
  const [index, count] = [Number(match?.[1]), Number(match?.[2])];
  if (match === null || index < 1 || index > count) {
    throw new InputError({
      action: "divide the work",
      rule: "the part must read I/N, whole numbers with I from 1 to N",
      value: text,
      key: "--part",
    });
  }
  return { index, count };
}

/**
 * Divides work into shares of about the same cost: the dearest first, each to the share that has
 * least so far (Graham 1969, SIAM J. Appl. Math. 17, 416: at worst a third longer than the best
 * division). The same costs give the same shares on every machine.
 *
 * @param costs Expected cost of each piece.
 * @param count Number of shares.
 * @returns Number of the share of each piece, from 1.
 *
 * @example
 * ```ts
 * import { shareByCost } from "@millrace/millrace/campaign";
 * import { assertEquals } from "@std/assert";
 *
 * assertEquals(shareByCost([1, 5, 2, 2], 2), [2, 1, 2, 2]);
 * ```
 */
export function shareByCost(costs: readonly number[], count: number): number[] {
  const order = costs.map((_, i) => i).sort((a, b) => costs[b]! - costs[a]! || a - b);
  const load = new Array<number>(count).fill(0);
  const share = new Array<number>(costs.length).fill(1);
  for (const i of order) {
    const least = load.indexOf(Math.min(...load));
    load[least]! += costs[i]!;
    share[i] = least + 1;
  }
  return share;
}

/** One treatment of one job, by their numbers. */
export interface Piece {
  /** Number of the job. */
  readonly job: number;
  /** Number of the treatment. */
  readonly run: number;
}

/**
 * The order in which treatments are handed to workers: those of the dearest job first, so that what
 * is at work alone at the end is short; those of one job one after another, so that jobs come to
 * their end all along.
 *
 * @param costs Expected cost of each treatment of each job.
 * @returns The treatments; jobs of the same cost in their order.
 *
 * @example
 * ```ts
 * import { dearestFirst } from "@millrace/millrace/campaign";
 * import { assertEquals } from "@std/assert";
 *
 * assertEquals(dearestFirst([[3], [1, 9]]).map(({ job, run }) => [job, run]), [[1, 0], [1, 1], [0, 0]]);
 * ```
 */
export function dearestFirst(costs: readonly (readonly number[])[]): Piece[] {
  return costs.map((own, job) => ({ own, job, whole: own.reduce((a, b) => a + b, 0) }))
    .sort((a, b) => b.whole - a.whole)
    .flatMap(({ own, job }) => own.map((_, run) => ({ job, run })));
}

/**
 * Numbers of the trials of a share: every N-th, so that shares are equal to one.
 *
 * @param total Number of trials.
 * @param part The share.
 * @returns Numbers from 0, increasing.
 *
 * @example
 * ```ts
 * import { trialsOfPart } from "@millrace/millrace/campaign";
 * import { assertEquals } from "@std/assert";
 *
 * assertEquals(trialsOfPart(7, { index: 2, count: 3 }), [1, 4]);
 * ```
 */
export function trialsOfPart(total: number, part: Part): number[] {
  return Array.from({ length: total }, (_, k) => k)
    .filter((k) => k % part.count === part.index - 1);
}
