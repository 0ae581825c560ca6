import { InputError } from "../errors.ts";
import { runOnPool } from "./pool.ts";
import type { Progress } from "./progress.ts";
import { loadTaskModule } from "./task_module.ts";
import { currentTaskStore } from "./task_store.ts";

/**
 * Options of {@linkcode runTasks}.
 *
 * @typeParam Shared What all tasks have in common.
 * @typeParam Result What comes of a task.
 */
export interface RunTasksOptions<Shared, Result = unknown> {
  /** Module to run, a {@linkcode TaskModule}: `new URL("./my_task.ts", import.meta.url)`. */
  readonly module: URL;
  /**
   * Threads to use; 1 runs on this one. Within a worker it is always 1.
   *
   * @default 1
   */
  readonly workers?: number;
  /**
   * What all tasks have in common: sent once to each thread, not with every task.
   *
   * @default undefined
   */
  readonly shared?: Shared;
  /**
   * Called after each task with the number done, in the order in which they end.
   *
   * @default None
   */
  readonly progress?: Progress;
  /**
   * Called with the number of a task and its result as soon as there is one, in the order in which
   * tasks end.
   *
   * @default None
   */
  readonly onResult?: (index: number, result: Result) => void;
  /**
   * What is being done, for `progress`.
   *
   * @default "tasks"
   */
  readonly what?: string;
  /**
   * Ends the work: at once with several workers; with one between two tasks, or where a task pauses.
   *
   * @default None
   */
  readonly signal?: AbortSignal;
}

/** True on a worker thread, where work is not divided further. */
export function insideWorker(): boolean {
  return "WorkerGlobalScope" in globalThis;
}

// Lets timers, signals and messages have their turn: awaiting a settled promise does not.
function turn(): Promise<void> {
  const { port1, port2 } = new MessageChannel();
  return new Promise((resolve) => {
    port1.onmessage = () => {
      port1.close();
      resolve();
    };
    port2.postMessage(null);
  });
}

/**
 * Runs independent tasks on one thread or several. Results are in the order of the tasks and the same
 * bytes whatever the number of workers: a task sees copies of its input and of what is shared, nothing else.
 * The first task in that order that fails ends the work with its error; those of Millrace arrive with their
 * class and parts.
 *
 * @typeParam Task One piece of work.
 * @typeParam Result What comes of it.
 * @typeParam Shared What all tasks have in common.
 * @param tasks The tasks; not changed.
 * @param options The module, the number of workers, progress and signal.
 * @returns One result for each task.
 * @throws {InputError} When `workers` is not a whole number from 1, or a task throws one.
 * @throws {WorkError} When the module cannot be run, a worker stops, or a task throws one.
 *
 * @example With a module in the address itself; elsewhere it stands in a file beside its caller
 * ```ts
 * import { runTasks } from "@millrace/millrace/workers";
 * import { assertEquals } from "@std/assert";
 *
 * const text = "export const runTask = (task, shared) => task * shared;";
 * const module = new URL(`data:text/javascript,${encodeURIComponent(text)}`);
 * assertEquals(await runTasks([1, 2, 3], { module, shared: 10 }), [10, 20, 30]);
 * ```
 */
export async function runTasks<Task, Result, Shared = undefined>(
  tasks: readonly Task[],
  options: RunTasksOptions<Shared, Result>,
): Promise<Result[]> {
  const { module, workers = 1, progress, onResult, what = "tasks", signal } = options;
  if (!Number.isInteger(workers) || workers < 1) {
    throw new InputError({
      action: "run tasks",
      rule: "the number of workers must be a whole number from 1",
      value: workers,
    });
  }
  const total = tasks.length;
  signal?.throwIfAborted();
  if (total === 0) return [];
  const store = currentTaskStore();
  if (store === undefined) return runHere(tasks, options);
  const results = await store.results<Result>({
    module: module.href,
    shared: options.shared,
    tasks,
    what,
    async run(indices, onIndex) {
      await runHere(indices.map((index) => tasks[index]!), {
        ...options,
        progress: undefined,
        onResult: (at: number, result: Result) => onIndex(indices[at]!, result),
      });
    },
    progress: (done) => progress?.(done, total, what),
    signal,
  });
  results.forEach((result, index) => onResult?.(index, result));
  return results;
}

async function runHere<Task, Result, Shared>(
  tasks: readonly Task[],
  options: RunTasksOptions<Shared, Result>,
): Promise<Result[]> {
  const { module, workers = 1, progress, onResult, what = "tasks", signal } = options;
  const total = tasks.length;
  const onDone = (done: number, index: number, result: Result) => {
    onResult?.(index, result);
    progress?.(done, total, what);
  };
  if (workers > 1 && total > 1 && !insideWorker()) {
    const { shared } = options;
    return runOnPool<Result>(tasks, { module: module.href, workers, shared, onDone, signal });
  }

  const { runTask } = await loadTaskModule<Task, Result, Shared>(module.href);
  const shared = structuredClone(options.shared) as Shared;
  const results: Result[] = [];
  const pause = async () => {
    await turn();
    signal?.throwIfAborted();
  };
  for (const [index, task] of tasks.entries()) {
    await pause();
    const result = structuredClone(await runTask(structuredClone(task), shared, pause));
    results.push(result);
    onDone(results.length, index, result);
  }
  return results;
}
