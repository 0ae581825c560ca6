import { type Progress, runTasks } from "../workers/mod.ts";
import type { Trail } from "../trail/mod.ts";
import type { LineTask } from "./line_worker.ts";
import type { LineSettings } from "./schema/lines_section.ts";
import type { GatheredTarget, Session } from "./session.ts";

/** Work that other threads do while this one goes on. */
export interface Beside {
  /**
   * Gives the result of a piece of work that another thread does, or makes it here: what was not
   * started, or has failed there, so that its error arises where it belongs.
   *
   * @typeParam T What it gives.
   * @param name Name of the piece of work.
   * @param make Makes it here.
   * @returns The result.
   */
  readonly take: <T>(name: string, make: () => Promise<T>) => Promise<T>;
  /**
   * Starts pieces of work, the first ones first.
   *
   * @param tasks The pieces.
   * @param gathered What was read of the target.
   */
  readonly start: (tasks: readonly LineTask[], gathered: GatheredTarget) => void;
}

/**
 * Prepares work on other threads. With one worker everything is done on this thread, when it is asked for.
 *
 * @param options How many threads.
 * @param options.workers Their number.
 * @param options.what What is done, for `progress`. @default "lines"
 * @param options.progress Told of each piece.
 * @param options.signal Aborts the work.
 * @returns The work, not started.
 */
export function workBeside(
  options: { workers: number; what?: string; progress?: Progress; signal?: AbortSignal },
): Beside {
  const { workers, what = "lines", progress, signal } = options;
  const started = new Map<string, Promise<unknown>>();
  return {
    take: async <T>(name: string, make: () => Promise<T>) => {
      const found = await started.get(name)?.then(
        (value) => ({ value: value as T }),
        () => undefined,
      );
      return found === undefined ? await make() : found.value;
    },
    start(tasks, gathered) {
      if (workers < 2) return;
      const parts = tasks.map(() => Promise.withResolvers<unknown>());
      parts.forEach(({ promise }, i) => {
        // One that nobody takes is no fault.
        promise.catch(() => {});
        started.set(tasks[i]!.name, promise);
      });
      runTasks<LineTask, unknown, GatheredTarget>(tasks, {
        module: new URL("./line_worker.ts", import.meta.url),
        workers,
        shared: gathered,
        what,
        progress,
        signal,
        onResult: (index, result) => parts[index]!.resolve(result),
      }).catch((error) => parts.forEach(({ reject }) => reject(error)));
    },
  };
}

/**
 * What a session has read, for other threads.
 *
 * @param session The session.
 * @param lines Lines whose trails are made already.
 * @returns Its exposures and these trails.
 */
export async function gather(
  session: Pick<Session, "exposures" | "trail">,
  lines: readonly LineSettings[],
): Promise<GatheredTarget> {
  const trails = new Map<string, Trail>();
  for (const line of lines) trails.set(line.name, await session.trail(line));
  return { exposures: await session.exposures(), trails };
}
