import { assert, assertEquals, assertRejects, assertStringIncludes } from "@std/assert";
import { InputError, NotConverged, WorkError } from "@millrace/millrace/errors";
import { insideWorker, runTasks } from "@millrace/millrace/workers";
import type { Kind, Shared, Task } from "./noisy_task.ts";

const module = new URL("./noisy_task.ts", import.meta.url);

function run<Result = unknown>(
  kinds: readonly Kind[],
  workers: number,
  more: {
    shared?: Shared;
    signal?: AbortSignal;
    progress?: (done: number, total: number) => void;
    onResult?: (index: number, result: Result) => void;
  } = {},
): Promise<Result[]> {
  const tasks = kinds.map((kind, k): Task => ({ kind, k }));
  return runTasks<Task, Result, Shared>(tasks, { module, workers, shared: { seed: 3 }, ...more });
}

Deno.test("runTasks() returns the same bytes when workers are 1, 2 or 3", async () => {
  const kinds = new Array<Kind>(20).fill("noise");
  const one = await run<Float64Array>(kinds, 1);
  assertEquals(one.length, 20);
  for (const workers of [2, 3]) {
    const several = await run<Float64Array>(kinds, workers);
    several.forEach((result, i) => {
      assertEquals(new Uint8Array(result.buffer), new Uint8Array(one[i]!.buffer), `task ${i}`);
    });
  }
});

Deno.test("runTasks() keeps the order of tasks when the first ones are slow", async () => {
  const progress: number[] = [];
  const results = await run<unknown>(["slow", "noise", "noise", "noise"], 2, {
    progress: (done, total) => progress.push(done / total),
  });
  assertEquals(results[0], 0);
  assert(results[3] instanceof Float64Array);
  assertEquals(progress, [0.25, 0.5, 0.75, 1]);
});

Deno.test("runTasks() tells each result with its number as soon as there is one", async () => {
  for (const workers of [1, 2]) {
    const told = new Map<number, unknown>();
    const results = await run<unknown>(["slow", "noise", "noise", "noise"], workers, {
      onResult: (index, result) => told.set(index, result),
    });
    assertEquals(told.size, 4);
    assertEquals([0, 1, 2, 3].map((index) => told.get(index)), results);
    if (workers === 1) assertEquals([...told.keys()], [0, 1, 2, 3]);
  }
});

Deno.test("runTasks() really runs elsewhere when workers are more than one", async () => {
  // A nested run reports where it is.
  const [here] = await run<{ inside: boolean }>(["nested"], 1);
  const [there] = await run<{ inside: boolean }>(["nested", "nested"], 2);
  assertEquals([here!.inside, there!.inside, insideWorker()], [false, true, false]);
});

Deno.test("runTasks() gives the same when nested inside a worker", async () => {
  const alone = await run<{ inner: unknown[] }>(["nested", "nested"], 1);
  const nested = await run<{ inner: unknown[] }>(["nested", "nested"], 2);
  assertEquals(nested.map(({ inner }) => inner), alone.map(({ inner }) => inner));
});

for (const workers of [1, 2]) {
  Deno.test(`runTasks() carries errors with class and parts when workers are ${workers}`, async () => {
    const input = await assertRejects(() => run(["noise", "input"], workers), InputError);
    assertEquals(
      input.message,
      "Cannot try as it must work: current value is 1 km/s (star.toml:4, key a.b)",
    );
    assertEquals([input.line, input.key, input.value, input.unit], [4, "a.b", 1, "km/s"]);
    assertStringIncludes(input.stack!, "noisy_task.ts");

    const work = await assertRejects(() => run(["noise", "work"], workers), WorkError);
    assertEquals(work.reason, "task 1 broke");
    assertEquals((work.cause as Error).name, "RangeError");

    const stalled = await assertRejects(
      () => run(["noise", "partial"], workers),
      NotConverged,
    );
    assertEquals(stalled.partial, { map: Float64Array.of(1, 2) });

    const bare = await assertRejects(() => run(["noise", "bare"], workers), Error, "bare");
    assertEquals(bare.name, "TypeError");
  });

  Deno.test(`runTasks() reports the first failure in order when workers are ${workers}`, async () => {
    const kinds: Kind[] = ["slow", "noise", "work", "work", "noise", "work"];
    await assertRejects(() => run(kinds, workers), WorkError, "task 2 broke");
    await assertRejects(() => run(["late", "work"], workers), WorkError, "task 0 broke late");
  });

  Deno.test(`runTasks() fails when a result cannot cross and workers are ${workers}`, async () => {
    const error = await assertRejects(() => run(["noise", "uncloneable"], workers), Error);
    assertStringIncludes(error.message, "could not be cloned");
  });

  Deno.test(`runTasks() protects what is shared when workers are ${workers}`, async () => {
    const shared = { seed: 3 };
    await run(["greedy", "greedy", "greedy"], workers, { shared });
    assertEquals(shared, { seed: 3 });
  });

  Deno.test(`runTasks() does nothing when there are no tasks and workers are ${workers}`, async () => {
    assertEquals(await run([], workers), []);
  });

  Deno.test(`runTasks() names the module when it is missing and workers are ${workers}`, async () => {
    const options = { module: new URL("data:text/javascript,export default 1"), workers };
    await assertRejects(() => runTasks([1, 2], options), WorkError, "it exports no runTask");
    const missing = { module: new URL("./missing_task.ts", import.meta.url), workers };
    await assertRejects(() => runTasks([1, 2], missing), Error, "missing_task.ts");
  });

  Deno.test(`runTasks() stops between tasks when aborted and workers are ${workers}`, async () => {
    const control = new AbortController();
    let last = 0;
    const running = run(new Array<Kind>(20).fill("slow"), workers, {
      signal: control.signal,
      progress: (done) => {
        last = done;
        if (done === 3) control.abort(new Error("enough"));
      },
    });
    await assertRejects(() => running, Error, "enough");
    assertEquals(last, 3);
    await assertRejects(() => run(["noise"], workers, { signal: control.signal }), Error, "enough");
  });
}

Deno.test("runTasks() lets the abort of a timer through when tasks never wait on one thread", async () => {
  const control = new AbortController();
  setTimeout(() => control.abort(new Error("timer")), 5);
  const kinds = new Array<Kind>(100_000).fill("noise");
  await assertRejects(() => run(kinds, 1, { signal: control.signal }), Error, "timer");
});

Deno.test("runTasks() stops within a task on one thread, where the task pauses", async () => {
  const control = new AbortController();
  setTimeout(() => control.abort(new Error("timer")), 5);
  await assertRejects(() => run(["patient"], 1, { signal: control.signal }), Error, "timer");
});

Deno.test("runTasks() ends at once when aborted while a worker never returns", async () => {
  const control = new AbortController();
  setTimeout(() => control.abort(), 300);
  const error = await assertRejects(
    () => run(["forever", "forever"], 2, { signal: control.signal }),
    DOMException,
  );
  assertEquals(error.name, "AbortError");
});

Deno.test("runTasks() fails instead of hanging when a worker crashes", async () => {
  await assertRejects(
    () => run(["crash", "noise", "slow"], 2),
    WorkError,
    "a worker stopped in task 0",
  );
});

Deno.test("runTasks() leaves the tasks as they are when results are moved", async () => {
  const text = "export const runTask = (t) => t; export const transfer = (t) => [t.buffer];";
  const echo = new URL(`data:text/javascript,${encodeURIComponent(text)}`);
  const tasks = [Float64Array.of(1, 2), Float64Array.of(3)];
  for (const workers of [1, 2]) {
    const results = await runTasks<Float64Array, Float64Array>(tasks, { module: echo, workers });
    assertEquals(results, [Float64Array.of(1, 2), Float64Array.of(3)]);
    assertEquals(tasks, [Float64Array.of(1, 2), Float64Array.of(3)]);
  }
});

Deno.test("runTasks() refuses when the number of workers is none", async () => {
  for (const workers of [0, -1, 1.5, NaN]) {
    await assertRejects(() => run(["noise"], workers), InputError, "whole number from 1");
  }
});

Deno.test("runTasks() works when there is read permission only", async () => {
  const script = new URL("./read_only_run.ts", import.meta.url);
  const { code, stdout, stderr } = await new Deno.Command(Deno.execPath(), {
    args: ["run", "--no-prompt", "--allow-read", script.href],
  }).output();
  assertEquals(code, 0, new TextDecoder().decode(stderr));
  const [one, two] = JSON.parse(new TextDecoder().decode(stdout));
  assertEquals(one, two);
});
