import { AsyncLocalStorage } from "node:async_hooks";

/**
 * One call of {@linkcode runTasks} as a store sees it.
 *
 * @typeParam Result What comes of a task.
 */
export interface StoredCall<Result> {
  /** Address of the task module. */
  readonly module: string;
  /** What all tasks have in common. */
  readonly shared: unknown;
  /** The tasks. */
  readonly tasks: readonly unknown[];
  /** What is being done, as in "replicas". */
  readonly what: string;
  /**
   * Runs some of the tasks in this process.
   *
   * @param indices Their numbers.
   * @param onResult Called with each number and result as soon as there is one.
   */
  run(indices: readonly number[], onResult: (index: number, result: Result) => void): Promise<void>;
  /** Tells how many tasks have results. */
  progress(done: number): void;
  /** Ends the work. */
  readonly signal: AbortSignal | undefined;
}

/** Keeps results of tasks, so that processes can divide them among each other. */
export interface TaskStore {
  /**
   * Finds the results of all tasks of a call: those that are kept, and those that it runs.
   *
   * @typeParam Result What comes of a task.
   * @param call The call.
   * @returns One result for each task.
   */
  results<Result>(call: StoredCall<Result>): Promise<Result[]>;
}

const current = new AsyncLocalStorage<TaskStore>();

/** The store of the work at hand; undefined without one. */
export function currentTaskStore(): TaskStore | undefined {
  return current.getStore();
}

/**
 * Does something during which every call of {@linkcode runTasks}, wherever it stands, gets its results
 * through a store.
 *
 * @typeParam T What the action gives.
 * @param store The store.
 * @param action What to do.
 * @returns What the action gives.
 *
 * @example A store that runs everything here
 * ```ts
 * import { runTasks, type StoredCall, withTaskStore } from "@millrace/millrace/workers";
 * import { assertEquals } from "@std/assert";
 *
 * const text = "export const runTask = (task) => task * task;";
 * const module = new URL(`data:text/javascript,${encodeURIComponent(text)}`);
 * let calls = 0;
 * const results = await withTaskStore({
 *   async results<Result>(call: StoredCall<Result>) {
 *     calls++;
 *     const found: Result[] = [];
 *     await call.run(call.tasks.map((_, i) => i), (index, result) => found[index] = result);
 *     return found;
 *   },
 * }, () => runTasks([1, 2, 3], { module }));
 * assertEquals([results, calls], [[1, 4, 9], 1]);
 * ```
 */
export function withTaskStore<T>(store: TaskStore, action: () => Promise<T>): Promise<T> {
  return current.run(store, action);
}
