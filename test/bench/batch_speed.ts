/**
 * Measures a batch: two workers against one on 24 targets, and time for each target and memory with
 * 10 to 300 small ones:
 * `deno run --allow-read --allow-write --allow-run test/bench/batch_speed.ts [workers|growth]`.
 */
import { join } from "@std/path";
import { smallCampaign } from "../campaign/batch_fixture.ts";
import { LAUNCH } from "../cli/run_millrace.ts";

const COMMANDS = ["check", "trail", "map", "plate"];

async function run(
  manifest: string,
  options: { out: string; workers: number },
): Promise<{ seconds: number; peak_mib: number }> {
  const { out, workers } = options;
  const began = performance.now();
  const { code, stderr } = await new Deno.Command(Deno.execPath(), {
    args: [...LAUNCH, "batch", manifest, "--out", out, "--workers", String(workers), "--quiet"],
    stdin: "null",
    stdout: "null",
  }).output();
  if (code !== 0) throw new Error(new TextDecoder().decode(stderr));
  const seconds = (performance.now() - began) / 1000;
  const { cost } = JSON.parse(await Deno.readTextFile(join(out, "batch.json")));
  await Deno.remove(out, { recursive: true });
  return { seconds, peak_mib: cost.peak_memory_bytes / 2 ** 20 };
}

async function workers(folder: string): Promise<void> {
  const { manifest } = await smallCampaign(folder, { stars: 24, commands: COMMANDS, full: true });
  console.log("| workers | time of 24 targets, s | highest memory, MiB |\n| --: | --: | --: |");
  const seconds: number[][] = [[], []];
  // Interleaved, so that what else the machine does falls on both.
  for (let turn = 0; turn < 2; turn++) {
    for (const count of [1, 2]) {
      const made = await run(manifest, { out: join(folder, "out"), workers: count });
      seconds[count - 1]!.push(made.seconds);
      console.log(`| ${count} | ${made.seconds.toFixed(1)} | ${made.peak_mib.toFixed(0)} |`);
    }
  }
  const [one, two] = seconds.map((all) => Math.min(...all)) as [number, number];
  console.log(
    `two workers are ${(one / two).toFixed(2)} times as fast as one (best of two each)`,
  );
}

async function growth(folder: string): Promise<void> {
  console.log(
    "| commands | targets | s for each | highest memory, MiB |\n| --- | --: | --: | --: |",
  );
  for (
    const [commands, counts] of [
      [["check", "trail", "map"], [10, 100, 300]],
      [["check", "trail", "map", "plate"], [10, 60]],
    ] as const
  ) {
    for (const stars of counts) {
      const place = join(folder, `${commands.length}-${stars}`);
      const { manifest } = await smallCampaign(place, { stars, commands });
      const made = await run(manifest, { out: join(place, "out"), workers: 2 });
      const each = (made.seconds / stars).toFixed(3);
      console.log(`| ${commands.at(-1)} | ${stars} | ${each} | ${made.peak_mib.toFixed(0)} |`);
    }
  }
}

const folder = await Deno.makeTempDir({ prefix: "millrace-speed-" });
try {
  const [what] = Deno.args;
  if (what !== "growth") await workers(folder);
  if (what !== "workers") await growth(folder);
} finally {
  await Deno.remove(folder, { recursive: true });
}
