import { assertEquals } from "@std/assert";
import { parseTarget } from "../../engine/campaign/mod.ts";

const guide = await Deno.readTextFile(
  new URL("../../engine/campaign/README.md", import.meta.url),
);
const [, example] = /^```toml\n([\s\S]*?)^```/m.exec(guide)!;

Deno.test("the guide to target files shows one that Millrace takes", () => {
  const { settings } = parseTarget(example!);
  assertEquals(settings.orbit.period_d, 0.0823714);
  assertEquals(settings.model?.parts, ["disc", "spot"]);
});

Deno.test("the guide states the defaults as they are", () => {
  const { settings: shown } = parseTarget(example!);
  const { settings } = parseTarget(
    'format = 1\n[[lines]]\nname = "H beta"\n[[exposures]]\nfiles = ["a"]\n',
  );
  assertEquals(shown.map, { ...settings.map });
  assertEquals(shown.seed, settings.seed);
  assertEquals(shown.weigh.trials, settings.weigh.trials);
  assertEquals(shown.plate, settings.plate);
  const { mask: _mask, skip_phases: _skip, ...trail } = shown.trail;
  const { mask: _none, skip_phases: _all, ...usual } = settings.trail;
  assertEquals(trail, usual);
  assertEquals(shown.lines[0]!.reach_kms, settings.lines[0]!.reach_kms);
  for (const key of ["layout", "time_scale", "wavelength_zero_kms", "photometry"] as const) {
    assertEquals(shown.exposures[0]![key], settings.exposures[0]![key]);
  }
});

Deno.test("the guide names every key of the sections that the schema has", async () => {
  const folder = new URL("../../engine/campaign/schema/", import.meta.url);
  const missing: string[] = [];
  for (const section of ["orbit", "binary", "exposures", "sky", "trail", "lines", "map", "weigh"]) {
    const source = await Deno.readTextFile(new URL(`${section}_section.ts`, folder));
    const [, body] = /export interface \w+Settings \{([\s\S]*?)\n\}/.exec(
      source.slice(source.lastIndexOf("export interface", source.indexOf("/** Schema of"))),
    ) ?? [];
    for (const [, key] of (body ?? "").matchAll(/^ {2}readonly (\w+)\??:/gm)) {
      if (!new RegExp(`\\b${key}\\b`).test(guide)) missing.push(`${section}.${key}`);
    }
  }
  assertEquals(missing, []);
});
