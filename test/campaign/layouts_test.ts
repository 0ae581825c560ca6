import { assert, assertAlmostEquals, assertEquals } from "@std/assert";
import { join } from "@std/path";
import type { SpectraLayout } from "../../engine/spectra/mod.ts";
import { madeExposures } from "../spectra/made_exposures.ts";
import type { MapDocument } from "../../engine/campaign/mod.ts";
import { type Campaign, codes, SOURCE, writeCampaign } from "./campaign_fixture.ts";

const EXPOSURES: Readonly<Record<SpectraLayout, string>> = {
  image: '[[exposures]]\nfiles = ["night/*.fits"]\n',
  table: '[[exposures]]\nfiles = ["night/*.fits"]\n',
  stack: '[[exposures]]\nfiles = ["night/nights.fits"]\n',
  text: '[[exposures]]\nfiles = ["night/*.txt"]\nlog = "night/log.csv"\n',
};

const LAYOUTS = ["image", "stack", "table", "text"] as const;

// One campaign a layout, of the same exposures, mapped once.
const made = new Map<SpectraLayout, Promise<{ campaign: Campaign; document: MapDocument }>>();
function mapped(layout: SpectraLayout) {
  const known = made.get(layout) ?? (async () => {
    const campaign = await writeCampaign(
      [{ raw: madeExposures({ count: 16, cadence_s: 450, exposure_s: 300 }), layout }],
      { exposures: EXPOSURES[layout] },
    );
    return { campaign, document: await campaign.map() };
  })();
  made.set(layout, known);
  return known;
}

for (const layout of LAYOUTS) {
  Deno.test(`runMap() goes from files of layout "${layout}" to map.json with the source in its place`, async () => {
    const { campaign, document } = await mapped(layout);
    const { maps, inputs, warnings } = document;
    assertEquals(maps.length, 1);
    // The source is 150 km/s wide (σ); its place on a map of pixels of 33 km/s is found to a
    // fraction of a pixel at this signal to noise.
    assertAlmostEquals(maps[0]!.peak.vx_kms, SOURCE.vx_kms, 17);
    assertAlmostEquals(maps[0]!.peak.vy_kms, SOURCE.vy_kms, 17);
    assertEquals(inputs.length, { image: 16, table: 16, stack: 1, text: 17 }[layout]);
    for (const { file } of inputs) {
      assert((await Deno.stat(join(campaign.folder, file))).isFile, file);
    }
    // Nothing was assumed about times, places or wavelengths.
    assertEquals(warnings.filter(({ code }) => code.endsWith("-assumed")), []);
  });

  Deno.test(`readTarget() takes layout "${layout}" by name, and says so`, async () => {
    const { campaign } = await mapped(layout);
    const found = async (set: string[]) =>
      (await (await campaign.open(set)).exposures()).decisions
        .filter(({ what }) => what === "layout").map(({ value, from }) => [value, from]);
    assertEquals(await found([]), [[layout, "content of the file"]]);
    assertEquals(await found([`exposures[0].layout="${layout}"`]), [[layout, "layout"]]);
  });
}

Deno.test("runMap() makes the same map whatever the layout, but for the digits that text keeps", async () => {
  const [first, ...others] = await Promise.all(LAYOUTS.map(mapped));
  const one = first!.document.maps[0]!;
  for (const { document: { maps } } of others) {
    assertAlmostEquals(maps[0]!.peak.vx_kms, one.peak.vx_kms, 0.1);
    assertAlmostEquals(maps[0]!.peak.vy_kms, one.peak.vy_kms, 0.1);
    assertAlmostEquals(maps[0]!.peak.intensity / one.peak.intensity, 1, 1e-4);
    assertAlmostEquals(maps[0]!.reduced_chi_square, one.reduced_chi_square, 1e-3);
  }
});

Deno.test("runMap() by entropy goes from a stack to a map that fits", async () => {
  const { campaign } = await mapped("stack");
  const { maps, warnings } = await campaign.map(['map.method="entropy"']);
  assertAlmostEquals(maps[0]!.peak.vx_kms, SOURCE.vx_kms, 20);
  assertAlmostEquals(maps[0]!.peak.vy_kms, SOURCE.vy_kms, 20);
  assertAlmostEquals(maps[0]!.reduced_chi_square, 1, 0.1);
  assertEquals(codes({ warnings }).includes("goal-not-reached"), false);
});
