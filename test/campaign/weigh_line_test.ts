import { assert, assertEquals, assertStringIncludes } from "@std/assert";
import {
  batchJobs,
  jobTarget,
  openSession,
  readManifest,
  weighLine,
} from "@millrace/millrace/campaign";
import { inFolder } from "../files/support.ts";
import { smallCampaign } from "./batch_fixture.ts";

Deno.test("weighLine() gives a quick verdict that says from how few trials it comes", () =>
  inFolder(async (folder) => {
    const { manifest } = await smallCampaign(folder, { stars: 1 });
    const job = batchJobs(await readManifest(manifest))[0]!;
    const session = openSession(await jobTarget(job, job.runs[0]!));
    const line = session.lines("weigh")[0]!;
    const sets = [["disc"], ["disc", "spot"]];
    const { verdict, comparison, limit, warnings } = await weighLine(session, line, {
      sets,
      trials: 5,
      limit: false,
    });
    assertEquals(comparison.hypotheses.length, 2);
    assertEquals(limit, null);
    assertStringIncludes(verdict.sentence, "5 trials");
    assert(warnings.some(({ code }) => code === "too-few-trials"));
  }));
