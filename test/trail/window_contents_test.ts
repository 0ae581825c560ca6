import { assert, assertAlmostEquals, assertEquals } from "@std/assert";
import { lineNamed } from "../../engine/sky/mod.ts";
import { continuumWindows, windowContents } from "../../engine/trail/mod.ts";

Deno.test("windowContents() finds He I 4922 at +3740 km/s from H beta in a careless window", () => {
  const found = windowContents(lineNamed("H beta"), {
    reach_kms: 2500,
    continuum_kms: [[-6000, -3000], [3000, 6000]],
    half_width_kms: 1200,
  });
  const helium = found.find((c) => c.name.includes("4922") && c.window === "continuum")!;
  // 4921.93 against 4861.33 Å, both in air, from any list of lines.
  assertAlmostEquals(helium.velocity_kms, 3740, 10);
  // Its wing reaches to 2540 km/s: not into the line's own window.
  assertEquals(found.some((c) => c.name.includes("4922") && c.window === "line"), false);
});

Deno.test("windowContents() finds nothing in windows that steer clear", () => {
  const found = windowContents(lineNamed("H beta"), {
    reach_kms: 2500,
    continuum_kms: [[-6000, -3000], [5800, 7800]].map((w) => w as [number, number]),
    half_width_kms: 0,
  });
  assertEquals(found.filter((c) => c.window === "line"), []);
});

Deno.test("windowContents() tells the ring that a static feature draws", () => {
  const line = lineNamed("H beta");
  const observed = [{
    name: "a sky line",
    low_angstrom: line.vacuum_angstrom * (1 + 1000 / 299792.458),
    high_angstrom: line.vacuum_angstrom * (1 + 1010 / 299792.458),
  }];
  const [ring] = windowContents(line, {
    reach_kms: 2500,
    continuum_kms: [],
    half_width_kms: 0,
    observed,
    systemic_kms: 27,
  }).filter((c) => c.kind === "static");
  assertAlmostEquals(ring!.ring_radius_kms!, 1005 - 27, 1e-6);
  assertAlmostEquals(ring!.range_kms[0], 1000, 1e-6);
  // A band over the whole window draws no single ring.
  const band = {
    name: "a band",
    low_angstrom: line.vacuum_angstrom * 0.97,
    high_angstrom: line.vacuum_angstrom * 1.03,
  };
  const [all] = windowContents(line, {
    reach_kms: 2500,
    continuum_kms: [],
    half_width_kms: 0,
    observed: [band],
  }).filter((c) => c.kind === "static");
  assertEquals([all!.range_kms, all!.ring_radius_kms], [[-2500, 2500], null]);
});

Deno.test("continuumWindows() keeps clear of neighbours and falls back beside a crowded line", () => {
  const windows = continuumWindows(lineNamed("H beta"), { reach_kms: 2000, width_kms: 1200 });
  for (const [low, high] of windows) {
    assert(low >= 2000 || high <= -2000);
    // He I 4922 stands at 3737 to 3740 km/s, by the list.
    assert(high < 3740 - 1199 || low > 3737 + 1199, `${low} to ${high}`);
  }
  assertEquals(continuumWindows(lineNamed("H beta"), { reach_kms: 2000, width_kms: 9000 }), [
    [-4000, -2000],
    [2000, 4000],
  ]);
});
