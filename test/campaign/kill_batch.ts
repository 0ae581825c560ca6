import { join } from "@std/path";
import { randomStream } from "@millrace/millrace/numerics";
import { LAUNCH } from "../cli/run_millrace.ts";
import { assertNothingWrong, assertSameOutputs } from "./batch_fixture.ts";

/** What came of killing a batch again and again. */
export interface KillReport {
  /** Runs that were killed at work. */
  readonly kills: number;
  /** Runs that came to their end before they were killed; the next one began from nothing. */
  readonly ended: number;
  /** Kills after which some step was kept and some was not yet made. */
  readonly in_the_middle: number;
}

function start(manifest: string, out: string): Deno.ChildProcess {
  return new Deno.Command(Deno.execPath(), {
    args: [...LAUNCH, "batch", manifest, "--out", out, "--workers", "2", "--quiet"],
    stdin: "null",
    stdout: "null",
    stderr: "piped",
    env: { NO_COLOR: "1" },
  }).spawn();
}

async function toItsEnd(child: Deno.ChildProcess): Promise<void> {
  const { code, stderr } = await child.output();
  if (code !== 0) throw new Error(new TextDecoder().decode(stderr));
}

async function stepCount(out: string): Promise<number> {
  let steps = 0;
  try {
    for await (const { name } of Deno.readDir(out)) {
      const text = await Deno.readTextFile(join(out, name, "provenance.json")).catch(() => null);
      if (text === null) continue;
      const { runs } = JSON.parse(text) as { runs: { steps: unknown[] }[] };
      for (const run of runs) steps += run.steps.length;
    }
  } catch (error) {
    if (!(error instanceof Deno.errors.NotFound)) throw error;
  }
  return steps;
}

/** Names in the folders of the targets, hidden ones aside. */
async function namesThere(out: string): Promise<Set<string>> {
  const names = new Set<string>();
  try {
    for await (const target of Deno.readDir(out)) {
      if (!target.isDirectory) continue;
      for await (const { name } of Deno.readDir(join(out, target.name))) {
        if (!name.startsWith(".")) names.add(`${target.name}/${name}`);
      }
    }
  } catch (error) {
    if (!(error instanceof Deno.errors.NotFound)) throw error;
  }
  return names;
}

/** Waits until some new names have appeared, or a time has passed, or the child has ended. */
async function untilNewNames(
  out: string,
  options: { count: number; deadline_ms: number; ended: () => boolean },
): Promise<void> {
  const { count, deadline_ms, ended } = options;
  const known = await namesThere(out);
  const end = performance.now() + deadline_ms;
  while (performance.now() < end && !ended()) {
    const fresh = [...await namesThere(out)].filter((name) => !known.has(name));
    if (fresh.length >= count) return;
    await new Promise((resolve) => setTimeout(resolve, 1));
  }
}

/**
 * Runs a batch, kills it with SIGKILL, and again, and looks after every kill that nothing wrong is
 * there; whenever a run comes to its end, its outputs must be those of the undisturbed one, and the
 * next begins from nothing. Every other kill comes at a random moment, the others as soon as a random
 * number of new files have appeared.
 *
 * @param manifest The manifest.
 * @param options How often, and where.
 * @returns What happened.
 */
export async function killBatch(
  manifest: string,
  options: { folder: string; kills: number; seed: number; onKill?: (count: number) => void },
): Promise<KillReport> {
  const { folder, kills, seed, onKill } = options;
  const [reference, out] = [join(folder, "undisturbed"), join(folder, "killed")];
  const began = performance.now();
  await toItsEnd(start(manifest, reference));
  const whole_ms = performance.now() - began;
  const total = await stepCount(reference);
  const random = randomStream(seed);
  const report = { kills: 0, ended: 0, in_the_middle: 0 };
  for (let attempt = 0; report.kills < kills; attempt++) {
    const child = start(manifest, out);
    let ended = false;
    const output = child.output().finally(() => ended = true);
    // From the first file on; later moments find less and less to do.
    const deadline_ms = (0.12 + 0.5 * random.uniform()) * whole_ms;
    const count = attempt % 2 === 0 ? 1 + random.integer(5) : Infinity;
    await untilNewNames(out, { count, deadline_ms, ended: () => ended });
    try {
      child.kill("SIGKILL");
    } catch {
      // It has ended by itself.
    }
    const { code, signal, stderr } = await output;
    if (signal === "SIGKILL") {
      report.kills++;
      const steps = await stepCount(out);
      if (steps > 0 && steps < total) report.in_the_middle++;
      if (await exists(out)) await assertNothingWrong(out, reference);
      onKill?.(report.kills);
      continue;
    }
    if (code !== 0) throw new Error(new TextDecoder().decode(stderr));
    report.ended++;
    await assertSameOutputs(out, reference);
    await Deno.remove(out, { recursive: true });
  }
  await toItsEnd(start(manifest, out));
  await assertSameOutputs(out, reference);
  return report;
}

async function exists(path: string): Promise<boolean> {
  try {
    await Deno.stat(path);
    return true;
  } catch {
    return false;
  }
}
