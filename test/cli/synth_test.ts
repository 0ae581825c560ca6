import {
  assert,
  assertAlmostEquals,
  assertEquals,
  assertLess,
  assertStringIncludes,
} from "@std/assert";
import { fromFileUrl } from "@std/path";
import { runMillrace } from "./run_millrace.ts";

const RECIPE = await Deno.readTextFile(
  fromFileUrl(new URL("../../examples/demo/recipe.toml", import.meta.url)),
);
// A short night of the demo's own system: two lines of gas, one arm.
const SHORT = RECIPE.replace("count = 60", "count = 12")
  .replace(/\[\[lines\]\]\nname = "Na I[\s\S]*?(?=# Sixty)/, "")
  .replace(/\[\[observation\.arms\]\]\nname = "red"[\s\S]*?(?=\[observation\.variability\])/, "")
  .replace(/flickering = .*/, "")
  .replace('name = "H beta"', 'name = "H beta"\ncontinuum_kms = [[-6000, -3200], [5800, 7800]]') +
  '\n[plate]\nformats = ["svg"]\n';

async function folderWith(target: string): Promise<string> {
  const folder = await Deno.makeTempDir({ prefix: "millrace-synth-" });
  await Deno.writeTextFile(`${folder}/plan.toml`, target);
  return folder;
}

Deno.test("millrace synth predicts a plan, records it as raw exposures, and fits what it recorded", async () => {
  const folder = await folderWith(SHORT);
  try {
    const plan = await runMillrace(["synth", "plan.toml", "--exposures", "raw", "--json"], {
      cwd: folder,
    });
    assertEquals(plan.code, 0, plan.stderr);
    const planned = JSON.parse(plan.stdout);
    assertEquals(planned.schema, "model/1");
    assertEquals(planned.exposures.length, 12);
    assertEquals(planned.models[0].chi_square, null);
    // The window holds the disc's whole profile: its flux is what the model states.
    assertAlmostEquals(planned.models[0].equivalent_width_kms.disc, 3700, 10);
    assertAlmostEquals(planned.models[0].equivalent_width_kms.spot, 260, 1);
    for (const name of ["model.fits", "model.json", "model-plate.svg", "model-plate.txt"]) {
      assert((await Deno.stat(`${folder}/plan/${name}`)).size > 0, name);
    }
    await Deno.writeTextFile(
      `${folder}/data.toml`,
      `${SHORT}\n[[exposures]]\nfiles = ["raw/blue/*.fits"]\n`,
    );
    const fitted = await runMillrace(["synth", "data.toml", "--json"], { cwd: folder });
    assertEquals(fitted.code, 0, fitted.stderr);
    const [line] = JSON.parse(fitted.stdout).models;
    // Of N independent samples χ²/N scatters by √(2/N); the continua that were fitted add to it: 5 %.
    const scatter = Math.sqrt(2 / line.sample_count);
    assertLess(Math.abs(line.reduced_chi_square - 1), 5 * scatter + 0.05);
    const without = await runMillrace(
      ["synth", "data.toml", "--json", "--set", 'model.parts=["disc"]', "--out", "other"],
      { cwd: folder },
    );
    assert(JSON.parse(without.stdout).models[0].reduced_chi_square > 1.5);
  } finally {
    await Deno.remove(folder, { recursive: true });
  }
});

Deno.test("millrace synth names physics that cannot be, and what is missing", async () => {
  const folder = await folderWith(SHORT);
  try {
    const beyond = await runMillrace(
      ["synth", "plan.toml", "--set", "model.disc.outer_radius_over_a=0.7"],
      { cwd: folder },
    );
    assertEquals([beyond.code, beyond.stdout], [2, ""]);
    assertStringIncludes(beyond.stderr, "lobe");
    await Deno.writeTextFile(
      `${folder}/none.toml`,
      SHORT.replace(/\[model\][\s\S]*?(?=\[\[lines)/, ""),
    );
    const none = await runMillrace(["synth", "none.toml"], { cwd: folder });
    assertEquals([none.code, none.stdout], [2, ""]);
    assertEquals(
      none.stderr.trim(),
      "millrace: Cannot predict the trail of H beta as the target file must give model (none.toml); add it to the file, or give it with --set",
    );
  } finally {
    await Deno.remove(folder, { recursive: true });
  }
});
