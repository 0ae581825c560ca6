import { assert, assertEquals, assertRejects } from "@std/assert";
import { join } from "@std/path";
import { WorkError } from "@millrace/millrace/errors";
import {
  batchJobs,
  gatherShares,
  jobTarget,
  openSession,
  readManifest,
  runMap,
  runShare,
  runWeigh,
  type SharedStep,
  type StepResult,
  type Target,
} from "@millrace/millrace/campaign";
import { inFolder, namesIn } from "../files/support.ts";
import { smallCampaign } from "./batch_fixture.ts";

const steps = { map: runMap, weigh: runWeigh };

async function smallTarget(folder: string, set: readonly string[]): Promise<Target> {
  const manifest = await readManifest((await smallCampaign(folder, { stars: 1 })).manifest);
  const job = batchJobs(manifest, { set })[0]!;
  return jobTarget(job, job.runs[0]!);
}

for (
  const [step, file, set] of [
    ["map", "map.fits", ["map.resamples=8", "map.pixels=41"]],
    ["weigh", "weigh.json", ['weigh.sets=[["disc"], ["disc", "spot"]]', "weigh.trials=40"]],
  ] as const satisfies readonly (readonly [SharedStep, string, readonly string[]])[]
) {
  Deno.test(`${step} divided in three and joined gives the bytes of one process`, () =>
    inFolder(async (folder) => {
      const target = await smallTarget(folder, set);
      const [one, many] = [join(folder, "one"), join(folder, "many")];
      const run = (output: string): Promise<StepResult<unknown>> =>
        steps[step](openSession(target), { folder: output });
      await run(one);
      // Two of the three at once; the third is never begun, and its trials are taken over.
      await Promise.all(
        [3, 1].map((index) =>
          runShare(step, openSession(target), { folder: many, part: { index, count: 3 } })
        ),
      );
      const shares = await namesIn(many);
      assertEquals(shares, [".millrace-shares"]);
      const output = { folder: many };
      await gatherShares(() => run(many), output);
      assertEquals(await namesIn(many), await namesIn(one));
      assertEquals(await Deno.readFile(join(many, file)), await Deno.readFile(join(one, file)));
    }));
}

Deno.test("gatherShares() names trials that are missing or damaged, and leaves the others", () =>
  inFolder(async (folder) => {
    const target = await smallTarget(folder, ["map.resamples=8", "map.pixels=41"]);
    const out = join(folder, "out");
    const share = { folder: out, part: { index: 1, count: 2 } };
    await runShare("map", openSession(target), share);
    const shares = join(out, ".millrace-shares");
    const [call] = await namesIn(shares) as [string];
    assert(call.startsWith("replicas-"));
    await Deno.remove(join(shares, call, "2.bin"));
    await Deno.truncate(join(shares, call, "5.bin"), 100);
    const gather = () =>
      gatherShares(() => runMap(openSession(target), { folder: out }), { folder: out });
    const error = await assertRejects(gather, WorkError);
    assertEquals(error.reason, "2 of 8 pieces of the replicas are missing: 2, 5");
    assertEquals(await namesIn(out), [".millrace-shares"]);
    // Only these are made again.
    const kept = await Deno.stat(join(shares, call, "1.bin"));
    await runShare("map", openSession(target), share);
    assertEquals((await Deno.stat(join(shares, call, "1.bin"))).mtime, kept.mtime);
    await gather();
    assertEquals(await namesIn(out), ["map.fits", "map.json"]);
  }));

Deno.test("runShare() does not take what other settings have made", () =>
  inFolder(async (folder) => {
    const set = ["map.resamples=8", "map.pixels=41"];
    const target = await smallTarget(folder, set);
    const out = join(folder, "out");
    const part = { index: 1, count: 1 };
    await runShare("map", openSession(target), { folder: out, part });
    const other = await smallTarget(folder, [...set, "seed=5"]);
    await assertRejects(
      () => gatherShares(() => runMap(openSession(other), { folder: out }), { folder: out }),
      WorkError,
      "8 of 8 pieces of the replicas are missing",
    );
  }));
