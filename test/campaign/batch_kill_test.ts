import { assert, assertEquals, assertStringIncludes } from "@std/assert";
import { join } from "@std/path";
import { LAUNCH } from "../cli/run_millrace.ts";
import { inFolder } from "../files/support.ts";
import {
  assertNothingWrong,
  assertSameOutputs,
  filesUnder,
  smallCampaign,
} from "./batch_fixture.ts";
import { killBatch } from "./kill_batch.ts";

// test/bench/batch_kills.ts does the same fifty times, with plates.
Deno.test("a batch killed again and again leaves nothing wrong and ends with the same bytes", () =>
  inFolder(async (folder) => {
    const commands = ["check", "trail", "map"];
    const { manifest } = await smallCampaign(folder, { commands });
    const { kills } = await killBatch(manifest, { folder, kills: 3, seed: 1 });
    assertEquals(kills, 3);
  }));

async function mount(folder: string, size: string): Promise<boolean> {
  await Deno.mkdir(folder, { recursive: true });
  const args = ["-t", "tmpfs", "-o", `size=${size}`, "none", folder];
  try {
    return (await new Deno.Command("mount", { args, stderr: "null" }).output()).success;
  } catch {
    return false;
  }
}

async function canMount(): Promise<boolean> {
  const folder = await Deno.makeTempDir();
  try {
    if (!await mount(folder, "64k")) return false;
    await new Deno.Command("umount", { args: [folder] }).output();
    return true;
  } finally {
    await Deno.remove(folder);
  }
}

async function batch(manifest: string, out: string): Promise<{ code: number; stderr: string }> {
  const { code, stderr } = await new Deno.Command(Deno.execPath(), {
    args: [...LAUNCH, "batch", manifest, "--out", out, "--workers", "2"],
    stdin: "null",
    env: { NO_COLOR: "1" },
  }).output();
  return { code, stderr: new TextDecoder().decode(stderr) };
}

Deno.test({
  name: "a batch on a full disc leaves nothing wrong, and goes on when there is space",
  ignore: !await canMount(),
  fn: () =>
    inFolder(async (folder) => {
      const { manifest } = await smallCampaign(folder, { commands: ["check", "trail"] });
      const reference = join(folder, "reference");
      assertEquals((await batch(manifest, reference)).code, 0);
      let whole = 0;
      for (const bytes of (await filesUnder(reference)).values()) whole += bytes.length;
      const out = join(folder, "out");
      // Room for about two thirds.
      assert(await mount(out, String(Math.round(0.65 * whole))));
      try {
        const { code, stderr } = await batch(manifest, out);
        assertEquals(code, 1, stderr);
        assertStringIncludes(stderr, "the disc is full");
        await assertNothingWrong(out, reference, { tables: false });
        const args = ["-o", `remount,size=${4 * whole}`, out];
        assert((await new Deno.Command("mount", { args }).output()).success);
        const again = await batch(manifest, out);
        assertEquals(again.code, 0, again.stderr);
        await assertSameOutputs(out, reference);
      } finally {
        await new Deno.Command("umount", { args: [out] }).output();
      }
    }),
});
