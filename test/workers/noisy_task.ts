// A task module for the tests: each behaviour of a task is one kind.
import { InputError, NotConverged, WorkError } from "@millrace/millrace/errors";
import { randomStream } from "@millrace/millrace/numerics";
import { insideWorker, type Pause, runTasks } from "@millrace/millrace/workers";

export type Kind =
  | "noise"
  | "slow"
  | "input"
  | "work"
  | "late"
  | "partial"
  | "bare"
  | "uncloneable"
  | "crash"
  | "forever"
  | "patient"
  | "nested"
  | "greedy";

export interface Task {
  readonly kind: Kind;
  readonly k: number;
}

export interface Shared {
  readonly seed: number;
}

const seen = new WeakSet<Shared>();

export async function runTask(
  { kind, k }: Task,
  shared: Shared,
  pause: Pause,
): Promise<unknown> {
  switch (kind) {
    case "patient":
      for (;;) await pause();
    case "slow":
      await new Promise((resolve) => setTimeout(resolve, 150));
      return k;
    case "input":
      throw new InputError({
        action: "try",
        rule: "it must work",
        value: k,
        unit: "km/s",
        file: "star.toml",
        line: 4,
        key: "a.b",
      });
    case "work":
      throw Object.assign(new WorkError({ action: "try", reason: `task ${k} broke` }), {
        cause: new RangeError("below"),
      });
    case "late":
      await new Promise((resolve) => setTimeout(resolve, 300));
      throw new WorkError({ action: "try", reason: `task ${k} broke late` });
    case "partial":
      throw new NotConverged("Cannot try: stalled", { map: Float64Array.of(k, 2) });
    case "bare":
      throw new TypeError("bare");
    case "uncloneable":
      return () => k;
    case "crash":
      setTimeout(() => {
        throw new Error("out of the blue");
      });
      await new Promise((resolve) => setTimeout(resolve, 5000));
      return k;
    case "forever":
      while (k >= 0) k++;
      return k;
    case "nested": {
      const inner = await runTasks<Task, unknown, Shared>(
        [0, 1, 2].map((i) => ({ kind: "noise", k: 10 * k + i })),
        { module: new URL(import.meta.url), workers: 3, shared },
      );
      return { inner, inside: insideWorker() };
    }
    case "greedy": {
      const again = seen.has(shared);
      seen.add(shared);
      (shared as { seed: number }).seed = 99;
      return again;
    }
    default: {
      const stream = randomStream(shared.seed, k);
      return Float64Array.from({ length: 1000 }, () => stream.normal());
    }
  }
}

export function transfer(result: unknown): ArrayBuffer[] {
  return result instanceof Float64Array ? [result.buffer as ArrayBuffer] : [];
}
