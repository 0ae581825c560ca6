/**
 * Kills a batch of three targets with SIGKILL at fifty seeded moments and compares what it leaves, byte
 * for byte, with an undisturbed run:
 * `deno run --allow-read --allow-write --allow-run test/bench/batch_kills.ts [kills] [seed]`.
 */
import { smallCampaign } from "../campaign/batch_fixture.ts";
import { killBatch } from "../campaign/kill_batch.ts";

const [kills = "50", seed = "1"] = Deno.args;
const folder = await Deno.makeTempDir({ prefix: "millrace-kills-" });
try {
  const { manifest } = await smallCampaign(folder);
  const began = performance.now();
  const report = await killBatch(manifest, {
    folder,
    kills: Number(kills),
    seed: Number(seed),
    onKill: (count) => console.error(`${count} of ${kills} kills`),
  });
  const minutes = ((performance.now() - began) / 60_000).toFixed(1);
  console.log(
    `${report.kills} kills, ${report.in_the_middle} of them with some steps done and some not, ` +
      `${report.ended} undisturbed ends between them: same bytes (${minutes} min)`,
  );
} finally {
  await Deno.remove(folder, { recursive: true });
}
