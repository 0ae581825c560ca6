// Run by a test in a process of its own, with read permission only.
import { runTasks } from "@millrace/millrace/workers";
import type { Shared, Task } from "./noisy_task.ts";

const tasks: Task[] = [0, 1, 2, 3].map((k) => ({ kind: "noise", k }));
const module = new URL("./noisy_task.ts", import.meta.url);
const sums: number[] = [];
for (const workers of [1, 2]) {
  const results = await runTasks<Task, Float64Array, Shared>(tasks, {
    module,
    workers,
    shared: { seed: 5 },
  });
  sums.push(results.flatMap((r) => Array.from(r)).reduce((a, b) => a + b));
}
console.log(JSON.stringify(sums));
