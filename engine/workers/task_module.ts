import { WorkError } from "../errors.ts";

/** A place in a long task where it may be ended. */
export type Pause = () => Promise<void>;

/**
 * What a module must export so that {@linkcode runTasks} can run it, on this thread or on another.
 * Tasks, results and what is shared cross by structured clone: plain data and typed arrays.
 *
 * @typeParam Task One piece of work.
 * @typeParam Result What comes of it.
 * @typeParam Shared What all tasks have in common.
 */
export interface TaskModule<Task, Result, Shared = undefined> {
  /**
   * Does one piece of work. The result may depend on its arguments only, so that it is the same on
   * any thread; chance comes from a seeded stream.
   *
   * @param task A copy of the task.
   * @param shared A copy of what is shared: the same object for all tasks on one thread, so that
   * what is prepared from it can be kept in a `WeakMap`.
   * @param pause To be awaited now and then in a long task: lets an interrupt be heard, and throws
   * once the work is to end.
   */
  runTask(task: Task, shared: Shared, pause: Pause): Result | Promise<Result>;
  /**
   * Array buffers in a result that may be moved instead of copied: those made for it, and kept nowhere.
   *
   * @param result A result of `runTask`.
   */
  transfer?(result: Result): ArrayBuffer[];
}

/** Imports a task module and checks that it is one. */
export async function loadTaskModule<Task, Result, Shared>(
  href: string,
): Promise<TaskModule<Task, Result, Shared>> {
  const module = await import(href);
  if (typeof module.runTask !== "function") {
    throw new WorkError({ action: `run tasks of ${href}`, reason: "it exports no runTask" });
  }
  return module;
}
