// Entry of a worker thread: loads a task module and runs its tasks one by one.
import { packError } from "./error_crossing.ts";
import type { FromWorker, ToWorker } from "./messages.ts";
import { loadTaskModule, type TaskModule } from "./task_module.ts";

interface WorkerScope {
  onmessage: ((event: MessageEvent<ToWorker>) => void) | null;
  postMessage(message: FromWorker, transfer?: ArrayBuffer[]): void;
}
const scope = globalThis as unknown as WorkerScope;

// A worker is ended from outside, at once: its tasks need not listen.
const unheard = Promise.resolve();
const pause = () => unheard;

let module: TaskModule<unknown, unknown, unknown>;
let shared: unknown;

async function answer(message: ToWorker): Promise<[FromWorker, ArrayBuffer[]]> {
  if (message.kind === "open") {
    try {
      module = await loadTaskModule(message.module);
      shared = message.shared;
      return [{ kind: "ready" }, []];
    } catch (error) {
      return [{ kind: "unusable", error: packError(error) }, []];
    }
  }
  const { index } = message;
  try {
    const result = await module.runTask(message.task, shared, pause);
    return [{ kind: "done", index, result }, module.transfer?.(result) ?? []];
  } catch (error) {
    return [{ kind: "failed", index, error: packError(error) }, []];
  }
}

scope.onmessage = async ({ data }) => {
  const [message, transfer] = await answer(data);
  try {
    scope.postMessage(message, transfer);
  } catch (error) {
    // The result holds something that cannot be cloned.
    if (message.kind !== "done") throw error;
    scope.postMessage({ kind: "failed", index: message.index, error: packError(error) });
  }
};
