import { assert, assertEquals, assertRejects, assertStringIncludes } from "@std/assert";
import { newTarget, parseTarget } from "../../engine/campaign/mod.ts";
import { InputError } from "../../engine/errors.ts";
import { encodeExposures } from "../../engine/spectra/mod.ts";
import { rawExposure } from "../cli/small_campaign.ts";

async function folderOf(layout: "image" | "text"): Promise<string> {
  const folder = await Deno.makeTempDir({ prefix: "millrace-new-" });
  for (const { name, bytes } of encodeExposures([0, 1, 2].map((k) => rawExposure(k)), { layout })) {
    await Deno.writeFile(`${folder}/${name}`, bytes);
  }
  return folder;
}

for (const layout of ["image", "text"] as const) {
  Deno.test(`newTarget() starts a target file from ${layout} spectra that the schema takes`, async () => {
    const folder = await folderOf(layout);
    try {
      const made = await newTarget(folder);
      assertEquals(made.groups.map(({ files }) => files), [3]);
      assertEquals(made.lines, ["H beta"]);
      const text = await Deno.readTextFile(made.file);
      const { settings } = parseTarget(text, { file: made.file });
      assertEquals(settings.exposures[0]!.log, layout === "text" ? "log.csv" : undefined);
      assertEquals(settings.lines.map(({ name }) => name), ["H beta"]);
      assertStringIncludes(text, "3 files, 4790 to 4934 Å");
      // What is offered for the map in comments is taken as it stands.
      const [head, map] = text.split("\n[map]\n");
      const offered = map!.replaceAll(/^# (?=\w+ = )/gm, "");
      const taken = parseTarget(`${head}\n[map]\n${offered}`, { file: made.file }).settings.map;
      assertEquals([taken.method, taken.sensitivity, taken.systemic_scan], ["entropy", true, true]);
      // It is the observer's from now on.
      await assertRejects(() => newTarget(folder), InputError, "must not have one already");
    } finally {
      await Deno.remove(folder, { recursive: true });
    }
  });
}

Deno.test("newTarget() tells what is wrong with a folder", async () => {
  const folder = await Deno.makeTempDir({ prefix: "millrace-new-" });
  const error = await assertRejects(() => newTarget(folder), InputError);
  assert(error.message.startsWith("Cannot start a target file as the folder must hold spectra"));
  await Deno.remove(folder);
  await assertRejects(() => newTarget(folder), InputError, "the folder must exist");
});
