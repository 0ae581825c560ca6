// The six plates of examples/plates, each made of invented data.
import { assert, assertEquals, assertMatch } from "@std/assert";
import { join } from "@std/path";
import { makeSample } from "../../examples/sample/make_sample.ts";
import { readManifest, runBatch, runPlate } from "../../engine/campaign/mod.ts";
import { demoNight } from "./plate_fixture.ts";

const PLATES = new URL("../../examples/plates/", import.meta.url);
const MM = 72 / 25.4;
const night = await demoNight();

interface Made {
  readonly svg: string;
  readonly caption: string;
}

/** Makes a plate of the demo, as an SVG whatever formats it asks for. */
async function make(name: string): Promise<Made> {
  const plate = await Deno.readTextFile(new URL(`${name}.toml`, PLATES));
  const set = ['plate.formats=["svg"]', "map.resamples=3", "weigh.trials=20"];
  const session = await night.open({ plate, set });
  const folder = join(night.folder, name);
  const { document } = await runPlate(session, { folder });
  return {
    svg: await Deno.readTextFile(join(folder, "plate.svg")),
    caption: document.captions[0]!,
  };
}

/** Names of the panels that a plate shows, in order. */
function panels(svg: string): string[] {
  const names = [...svg.matchAll(/data-name="([a-z-]+)"/g)].map((match) => match[1]!);
  return names.filter((name, i) => !(name === "residual" && names[i - 1] === "phase-curve"))
    .filter((name) => !/^(phase-curve|diagnostic-\d)$/.test(name));
}

/** The page's size, mm. */
function size(svg: string): [width: number, height: number] {
  const [, width, height] = svg.match(/width="([\d.]+)pt" height="([\d.]+)pt"/)!;
  return [Number(width) / MM, Number(height) / MM];
}

function assertReadable(svg: string): void {
  const sizes = [...svg.matchAll(/font-size="([\d.]+)"/g)].map((match) => Number(match[1]));
  // What journals print at the least; raised and lowered letters, too.
  assert(sizes.length > 10 && Math.min(...sizes) >= 6, `${Math.min(...sizes)} pt`);
}

Deno.test("examples/plates/single-column.toml makes a figure of a column's width", async () => {
  const { svg, caption } = await make("single-column");
  const [width, height] = size(svg);
  assert(Math.abs(width - 84) < 0.01 && height < 240);
  assertEquals(panels(svg), ["map", "trail", "model", "residual"]);
  assertMatch(caption, /Contours at 0\.3, 0\.6 of the peak/);
  assertReadable(svg);
});

Deno.test("examples/plates/double-column.toml makes a figure over two columns", async () => {
  const { svg, caption } = await make("double-column");
  assert(Math.abs(size(svg)[0] - 174) < 0.01);
  assertEquals(panels(svg).slice(0, 5), ["map", "trail", "model", "residual", "velocity-curve"]);
  assertMatch(caption, /\(e\) Velocities .*\(f\) Constraints on the two masses .*Adopted: /);
  assertReadable(svg);
});

Deno.test("examples/plates/three-lines.toml makes a row for each of three lines", async () => {
  const { svg, caption } = await make("three-lines");
  assertEquals(panels(svg).filter((name) => name === "map").length, 2);
  assertEquals(panels(svg).filter((name) => name === "trail").length, 3);
  assertMatch(caption, /VX-0417, H beta .*VX-0417, He II 4686 /);
  assertMatch(svg, />Na I 8190</);
  assertReadable(svg);
});

Deno.test("examples/plates/asymmetry.toml makes the tests of an asymmetry", async () => {
  const { svg, caption } = await make("asymmetry");
  assertEquals(panels(svg), [
    "map",
    "asymmetric",
    "significance",
    "half-one",
    "half-two",
    "detection-limit",
    "azimuth-profile",
    "radial-profile",
  ]);
  assertMatch(caption, /Map of odd exposures alone.*would have been found at each place in 95 %/);
  assertReadable(svg);
});

Deno.test("examples/plates/talk-slide.toml makes a slide with letters for the last row", async () => {
  const { svg } = await make("talk-slide");
  const [width, height] = size(svg);
  assert(Math.abs(width - 254) < 0.01 && width / height > 1.7 && width / height < 2.2);
  assertEquals(panels(svg), ["map", "trail", "residual"]);
  const sizes = [...svg.matchAll(/<text[^>]* font-size="([\d.]+)"/g)].map((m) => Number(m[1]));
  assert(Math.min(...sizes) > 14, `${Math.min(...sizes)} pt on a page of 254 mm`);
});

Deno.test("examples/plates/sample-page.toml makes a page of four objects", async () => {
  const folder = join(night.folder, "sample");
  await makeSample(folder, {
    stars: 4,
    set: [
      "observation.count=16",
      "observation.arms=[{name='blue', first_angstrom=4700.0, step_angstrom=2.4, pixels=130, resolution_angstrom=6.0}]",
    ],
  });
  const file = join(folder, "sample-page.toml");
  const text = await Deno.readTextFile(new URL("sample-page.toml", PLATES));
  await Deno.writeTextFile(
    file,
    text.replace('formats = ["pdf"]', 'formats = ["svg"]').replace(
      "commands =",
      `set = ['lines=[{name="H beta", continuum_kms=[[-6000, -3200], [5800, 7800]]}]', "map.resamples=0"]\ncommands =`,
    ),
  );
  const out = join(folder, "sample-page");
  await runBatch(await readManifest(file), { folder: out });
  const svg = await Deno.readTextFile(join(out, "sample-page.svg"));
  assertEquals(panels(svg), ["map", "trail", "map", "trail", "map", "trail", "map", "trail"]);
  for (const star of ["VX-2401", "VX-2402", "VX-2403", "VX-2404"]) {
    assertMatch(svg, new RegExp(star));
  }
  assert(Math.abs(size(svg)[0] - 174) < 0.01);
  assertReadable(svg);
});
