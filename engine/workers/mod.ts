/**
 * One pool of worker threads with the same interface as one thread. No science.
 *
 * @module
 */
export * from "./progress.ts";
export * from "./run_tasks.ts";
export type { Pause, TaskModule } from "./task_module.ts";
export * from "./task_store.ts";
