import { WorkError } from "../errors.ts";
import { unpackError } from "./error_crossing.ts";
import type { FromWorker, ToWorker } from "./messages.ts";

/** What {@linkcode runOnPool} needs besides the tasks. */
export interface PoolOptions<Result> {
  /** Address of the task module. */
  readonly module: string;
  /** Number of workers. */
  readonly workers: number;
  /** What all tasks have in common. */
  readonly shared: unknown;
  /** Called after each task with how many are done, its number and its result. */
  readonly onDone: (done: number, index: number, result: Result) => void;
  /** Ends everything at once. */
  readonly signal: AbortSignal | undefined;
}

/**
 * Runs tasks on worker threads: one task at a time in each, handed out in order. The results are in
 * the order of the tasks. When tasks fail, the first of them in that order is the one reported, as on one
 * thread: those before it are waited for, those after it are not started.
 */
export function runOnPool<Result>(
  tasks: readonly unknown[],
  { module, workers, shared, onDone, signal }: PoolOptions<Result>,
): Promise<Result[]> {
  const { promise, resolve, reject } = Promise.withResolvers<Result[]>();
  const results = new Array<Result>(tasks.length);
  const pool: Worker[] = [];
  const running = new Map<Worker, number>();
  let next = 0;
  let done = 0;
  let failure: { index: number; error: Error } | undefined;

  const close = () => {
    signal?.removeEventListener("abort", abort);
    for (const worker of pool) worker.terminate();
  };
  const fail = (error: unknown) => {
    close();
    reject(error);
  };
  const abort = () => fail(signal!.reason);

  const handOut = (worker: Worker) => {
    if (failure === undefined && next < tasks.length) {
      const index = next++;
      const message: ToWorker = { kind: "task", index, task: tasks[index] };
      running.set(worker, index);
      try {
        worker.postMessage(message);
      } catch (error) {
        running.delete(worker);
        failure = { index, error: error as Error };
      }
    }
    if (failure !== undefined) {
      const before = [...running.values()].filter((index) => index < failure!.index);
      if (before.length === 0) fail(failure.error);
    } else if (done === tasks.length) {
      close();
      resolve(results);
    }
  };

  const receive = (worker: Worker, message: FromWorker) => {
    switch (message.kind) {
      case "ready":
        return handOut(worker);
      case "unusable":
        return fail(unpackError(message.error));
      case "done":
        running.delete(worker);
        results[message.index] = message.result as Result;
        onDone(++done, message.index, message.result as Result);
        return handOut(worker);
      case "failed":
        running.delete(worker);
        if (failure === undefined || message.index < failure.index) {
          failure = { index: message.index, error: unpackError(message.error) };
        }
        return handOut(worker);
    }
  };

  const crash = (worker: Worker, reason: string) => {
    const index = running.get(worker);
    const task = index === undefined ? "" : ` in task ${index}`;
    fail(new WorkError({ action: "run tasks", reason: `a worker stopped${task}: ${reason}` }));
  };

  if (signal?.aborted) {
    reject(signal.reason);
    return promise;
  }
  signal?.addEventListener("abort", abort);
  try {
    for (let i = 0; i < Math.min(workers, tasks.length); i++) {
      const worker = new Worker(new URL("./worker.ts", import.meta.url), { type: "module" });
      pool.push(worker);
      worker.onmessage = ({ data }: MessageEvent<FromWorker>) => {
        try {
          receive(worker, data);
        } catch (error) {
          fail(error);
        }
      };
      worker.onerror = (event) => {
        event.preventDefault();
        crash(worker, event.message);
      };
      worker.onmessageerror = () => crash(worker, "its message could not be read");
      worker.postMessage({ kind: "open", module, shared } satisfies ToWorker);
    }
  } catch (error) {
    fail(error);
  }
  return promise;
}
