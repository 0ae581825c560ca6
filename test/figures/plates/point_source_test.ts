import { assertAlmostEquals } from "@std/assert";
import {
  type Box,
  type Item,
  pdfBytes,
  type Picture,
  pngBytes,
  standardPlate,
  svgText,
} from "../../../engine/figures/mod.ts";
import { darkCentre, decodePng, type Pixels, toolExists } from "../decode.ts";
import { exampleContent } from "../example_content.ts";

const VX = 900;
const VY = -500;
const DPI = 300;

/** A plate of one bright point, nothing marked on it. */
function pointPlate(): { picture: Picture; window: Box; observed: Box } {
  const blobs = [{ vx: VX, vy: VY, sigma: 50, flux: 100 }];
  const content = exampleContent({ blobs, noise: 0, orbits: 1 });
  const subject = { ...content, binary: null, features: [], systemic_kms: 0 };
  const picture = standardPlate(subject);
  return { picture, window: imageIn(picture, "map"), observed: imageIn(picture, "trail") };
}

/** The image of a named panel. */
function imageIn(picture: Picture, name: string): Box {
  const find = (items: readonly Item[], inside: boolean): Box | undefined => {
    for (const item of items) {
      if (item.kind === "image" && inside) return item;
      if (item.kind !== "group") continue;
      const found = find(item.items, inside || item.name === name);
      if (found) return found;
    }
    return undefined;
  };
  return find(picture.items, false)!;
}

function checkMap(pixels: Pixels): void {
  const { window } = pointPlate();
  const { u, v } = darkCentre(pixels, inner(window), DPI);
  // The inner half of the window: −1005 to 1005 km/s. A page pixel is 12 km/s.
  assertAlmostEquals(-1005 + 2010 * u, VX, 13);
  assertAlmostEquals(-1005 + 2010 * v, VY, 13);
}

/** The middle half of a box. */
function inner(box: Box): Box {
  const { x, y, width, height } = box;
  return { x: x + width / 4, y: y + height / 4, width: width / 2, height: height / 2 };
}

function checkTrail(pixels: Pixels): void {
  const { observed } = pointPlate();
  for (const [phase, expected] of [[0.25, VY], [0.5, VX], [0.75, -VY], [1, -VX]] as const) {
    // V(φ) = γ − Vx cos 2πφ + Vy sin 2πφ, γ = 27 km/s in the example's trail.
    const height = observed.height / 40;
    const y = observed.y + observed.height * (1 - phase / 2) - height / 2;
    const { u } = darkCentre(pixels, { ...observed, y: y - 4, height: height + 8 }, DPI);
    const width = 163 * 30;
    // A page pixel is 18 km/s across; one up is 13 km/s at the steepest.
    assertAlmostEquals(-width / 2 + width * u - 27, expected, 36);
  }
}

Deno.test("standardPlate() puts a point source at (Vx, Vy), the right way up, in PNG", async () => {
  const pixels = decodePng(await pngBytes(pointPlate().picture, { dpi: DPI }));
  checkMap(pixels);
  checkTrail(pixels);
});

Deno.test("standardPlate() puts a point source at (Vx, Vy), the right way up, in SVG", () => {
  const svg = svgText(pointPlate().picture);
  const image = svg.match(
    /data-name="map"[\s\S]*?<image x="([\d.]+)" y="([\d.]+)" width="([\d.]+)" height="([\d.]+)"[^>]*base64,([^"]+)"/,
  )!;
  const [x, y, width, height] = image.slice(1, 5).map(Number) as [number, number, number, number];
  const { window } = pointPlate();
  assertAlmostEquals(x, window.x, 0.001);
  assertAlmostEquals(y, window.y, 0.001);
  assertAlmostEquals(width, height, 1e-9);
  const pixels = decodePng(Uint8Array.from(atob(image[5]!), (c) => c.charCodeAt(0)));
  const box = { x: 0, y: 0, width: pixels.columns, height: pixels.rows };
  const { u, v } = darkCentre(pixels, box, 72);
  // Cells are 20 km/s wide.
  assertAlmostEquals(-2010 + 4020 * u, VX, 10);
  assertAlmostEquals(-2010 + 4020 * v, VY, 10);
});

Deno.test({
  name: "standardPlate() puts a point source at (Vx, Vy), the right way up, in PDF",
  ignore: !toolExists("/usr/bin/pdftoppm"),
  async fn() {
    const folder = await Deno.makeTempDir();
    try {
      await Deno.writeFile(`${folder}/p.pdf`, await pdfBytes(pointPlate().picture));
      const args = ["-r", String(DPI), "-png", "-singlefile", `${folder}/p.pdf`, `${folder}/p`];
      await new Deno.Command("/usr/bin/pdftoppm", { args }).output();
      const pixels = decodePng(await Deno.readFile(`${folder}/p.png`));
      checkMap(pixels);
      checkTrail(pixels);
    } finally {
      await Deno.remove(folder, { recursive: true });
    }
  },
});
