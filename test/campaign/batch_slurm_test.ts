import { assert, assertEquals, assertMatch, assertStringIncludes } from "@std/assert";
import { fromFileUrl, join } from "@std/path";
import { runMillrace } from "../cli/run_millrace.ts";
import { inFolder, isAvailable } from "../files/support.ts";
import { assertSameOutputs, smallCampaign } from "./batch_fixture.ts";
import { startSlurm, until } from "./slurm.ts";

const SUBMIT = fromFileUrl(new URL("../../examples/cluster/submit.sh", import.meta.url));

const available = Deno.uid() === 0 &&
  isAvailable("sh", ["-c", "command -v slurmctld slurmd sbatch scontrol squeue munged hostname"]);

/** Number of the process that holds a lock. */
async function holder(lock: string): Promise<number> {
  const owner = await Deno.readTextFile(lock);
  return Number(/\(process (\d+)\)/.exec(owner)![1]);
}

Deno.test({
  name: "examples/cluster on a real Slurm: a task killed and requeued ends with the same bytes",
  ignore: !available,
  fn: () =>
    inFolder(async (folder) => {
      const { manifest } = await smallCampaign(folder, {
        stars: 6,
        commands: ["check", "trail", "map"],
      });
      const reference = join(folder, "reference");
      const alone = await runMillrace(["batch", manifest, "--out", reference]);
      assertEquals(alone.code, 0, alone.stderr);
      const cluster = join(folder, "cluster");
      await Deno.mkdir(cluster);
      const slurm = await startSlurm(cluster);
      try {
        const logs = join(folder, "job-%A_%a.log");
        const options = ["--cpus-per-task=1", `--output=${logs}`];
        const env = `--export=ALL,DENO=${Deno.execPath()},NO_COLOR=1`;
        const said = await slurm.run(SUBMIT, manifest, "2", ...options, env);
        assertMatch(said, /^parts: job \d+, tables: job \d+$/);
        const [parts, gather] = said.match(/\d+/g) as [string, string];
        const state = async (job: string) =>
          (await slurm.run("squeue", "--noheader", "--states=all", "--format=%T", `--jobs=${job}`))
            .split("\n").filter((line) => line !== "").join(" ");

        // One task is killed outright while it has a target in hand. Both are stopped first: had the
        // other one ended before the requeue, the tables would not wait for the first any more.
        const stopped: number[] = [];
        for (const part of [1, 2]) {
          const lock = join(folder, `night/.millrace-part-${part}-of-2.lock`);
          await until(async () => (await holder(lock)) > 0, { what: `part ${part}` });
          stopped.push(await holder(lock));
          Deno.kill(stopped.at(-1)!, "SIGSTOP");
        }
        const [first, second] = stopped as [number, number];
        Deno.kill(first, "SIGKILL");
        await until(async () => (await state(`${parts}_1`)) === "FAILED", { what: "the kill" });
        // It starts after the few seconds that Slurm waits by itself: hurried on within the second of
        // its end, the node would refuse it as the job that was just killed.
        await slurm.run("scontrol", "requeue", `${parts}_1`);
        Deno.kill(second, "SIGCONT");

        const ended = async (job: string) => !/PENDING|RUNNING|COMPLETING/.test(await state(job));
        await until(() => ended(gather), { seconds: 300, what: "the tables" });
        assertEquals(await state(`${parts}_1`), "COMPLETED");
        assertEquals(await state(`${parts}_2`), "COMPLETED");
        assertEquals(await state(gather), "COMPLETED");
        const log = await Deno.readTextFile(join(folder, `job-${parts}_1.log`));
        // Once for each time that it was started, in one file.
        assertStringIncludes(log, "part 1 of 2: 3 targets, 0 failed");
        await assertSameOutputs(join(folder, "night"), reference);
        assert((await Deno.readTextFile(join(folder, "night/index.html"))).includes("6 done"));
      } finally {
        await slurm.stop();
      }
    }),
});
