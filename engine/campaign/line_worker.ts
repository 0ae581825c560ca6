// Task module of the worker pool: pieces of work on one line of a target.
import type { WeighOptions } from "../weighing/mod.ts";
import { linesOf } from "./line_of.ts";
import type { MappedLine } from "./map_line.ts";
import { type GatheredTarget, openSession } from "./session.ts";
import { weighLine } from "./steps/run_weigh.ts";
import type { Target } from "./target.ts";
import type { LineTests } from "./test_line.ts";

/** A piece of work on one line. */
export interface LineTask {
  /** What it is called: different for every piece. */
  readonly name: string;
  /** The target. */
  readonly target: Target;
  /** Name of the line. */
  readonly line: string;
  /** Whether maps are made in spite of a large gap in phase. @default {false} */
  readonly force?: boolean;
  /** What is done: the tests before an inversion, the map, or a weighing, which may differ from the file's. */
  readonly work:
    | "tests"
    | "map"
    | { readonly weigh: Pick<WeighOptions, "sets" | "trials" | "limit"> };
}

/** What a weighing concludes. */
export interface LineVerdict {
  /** In words. */
  readonly sentence: string;
  /** The preferred parts; "undecided" among them says that there are none. */
  readonly preferred: readonly string[];
}

/** Does a piece of work. */
export async function runTask(
  task: LineTask,
  gathered: GatheredTarget,
): Promise<LineTests | MappedLine | LineVerdict> {
  const { target, force, work } = task;
  const session = openSession(target, { gathered, force });
  const line = linesOf(target, { action: task.name }).find(({ name }) => name === task.line)!;
  if (work === "tests") return await session.anyMap(line);
  if (work === "map") return await session.map(line);
  const { verdict: { sentence, preferred } } = await weighLine(session, line, work.weigh);
  return { sentence, preferred };
}
