/// <reference lib="dom" />
import {
  assert,
  assertAlmostEquals,
  assertEquals,
  assertMatch,
  assertNotEquals,
} from "@std/assert";
import type { Browser, Page } from "playwright-core";
import { ACCENT, reportPage } from "../../../engine/figures/mod.ts";
import { darkCentre, decodePng } from "../decode.ts";
import { exampleContent } from "../example_content.ts";
import { exampleReport } from "../example_report.ts";

/** The browser that the checks are made in. */
export const BROWSER = "/usr/bin/chromium";
// Sizes and frames of the page's drawings, pt.
const MAP = { width: 292, height: 300, middle: [163, 147], unit: 106 / 2010 };
const TRAIL = { width: 360, height: 300, left: 42, right: 140, top: 34, bottom: 270 };
const TRAIL_LOW_KMS = -81.5 * 30;
const TRAIL_WIDE_KMS = 163 * 30;

let shared: Promise<Browser> | undefined;

async function launch(): Promise<Browser> {
  const { chromium } = await import("playwright-core");
  const args = ["--no-sandbox", "--disable-gpu"];
  return chromium.launch({ executablePath: BROWSER, args });
}

let usual: string | undefined;

/** The page that most checks open. */
function usualPage(): string {
  return usual ??= reportPage(exampleReport());
}

/** Opens the page in a browser and fails on any error or request. */
async function withPage(
  html: string,
  act: (page: Page) => Promise<void>,
  view: Parameters<Browser["newPage"]>[0] = {},
): Promise<void> {
  const folder = await Deno.makeTempDir();
  const file = `${folder}/report.html`;
  await Deno.writeTextFile(file, html);
  const browser = await (shared ??= launch());
  const faults: string[] = [];
  const page = await browser.newPage({ viewport: { width: 1180, height: 1400 }, ...view });
  try {
    page.on("console", (message) => {
      if (message.type() === "error" || message.type() === "warning") faults.push(message.text());
    });
    page.on("pageerror", (error) => faults.push(error.message));
    page.on("request", (request) => {
      if (!/^(file|data|blob):/.test(request.url())) faults.push(request.url());
    });
    await page.goto(`file://${file}`);
    await page.waitForSelector("html[data-ready]");
    await act(page);
    assertEquals(faults, []);
  } finally {
    await page.close();
    await Deno.remove(folder, { recursive: true });
  }
}

/** A check and what it shows. */
export interface BrowserCheck {
  readonly name: string;
  readonly run: () => Promise<void>;
}

/** The checks, in order. They need every permission, so a process of their own runs them. */
export const checks: BrowserCheck[] = [];

function check(name: string, run: () => Promise<void>): void {
  checks.push({ name, run });
}

/** Moves the pointer to a place of a drawing, pt, and waits until it is drawn. */
async function pointAt(
  page: Page,
  view: "map" | "trail",
  at: readonly [number, number],
): Promise<void> {
  const size = view === "map" ? MAP : TRAIL;
  const box = (await page.locator(`#${view}-view .stage`).boundingBox())!;
  await page.mouse.move(
    box.x + at[0] / size.width * box.width,
    box.y + at[1] / size.height * box.height,
  );
  await nextFrame(page);
}

async function nextFrame(page: Page): Promise<void> {
  await page.evaluate(
    "new Promise((done) => requestAnimationFrame(() => requestAnimationFrame(done)))",
  );
}

async function pointAtVelocity(page: Page, vx: number, vy: number): Promise<void> {
  await pointAt(page, "map", [MAP.middle[0]! + vx * MAP.unit, MAP.middle[1]! - vy * MAP.unit]);
}

/** Points of the accent-coloured paths of a layer, path by path. */
async function accents(page: Page, layer: string): Promise<[number, number][][]> {
  const paths = await page.locator(`#${layer} path[stroke="${ACCENT}"]`).evaluateAll((found) =>
    found.map((path) => path.getAttribute("d")!)
  );
  return paths.map((d) => {
    const numbers = d.match(/-?[\d.]+/g)!.map(Number);
    return Array.from(
      { length: numbers.length / 2 },
      (_, i) => [numbers[2 * i]!, numbers[2 * i + 1]!],
    );
  });
}

function readout(page: Page): Promise<string> {
  return page.locator("#readout").innerText();
}

check(
  "report page shows the S-wave of a pointed-at pixel on the trail",
  () =>
    withPage(usualPage(), async (page) => {
      await pointAtVelocity(page, 900, -500);
      assertMatch(
        await readout(page),
        /^Vx (89\d|90\d), Vy −(49\d|50\d) km\/s: an S-wave of 10\d\d km\/s/,
      );
      const curve = (await accents(page, "trail-over")).find((points) => points.length === 121)!;
      for (const [k, expected] of [[15, -500], [30, 900], [45, 500], [60, -900]] as const) {
        // V(φ) = γ − Vx cos 2πφ + Vy sin 2πφ, γ = 27 km/s; step k is phase k/60.
        const [x, y] = curve[k]!;
        const part = (x - TRAIL.left) / (TRAIL.right - TRAIL.left);
        // The pointer stands on whole pixels of the screen, 11 km/s each; so do the others' roundings.
        assertAlmostEquals(TRAIL_LOW_KMS + part * TRAIL_WIDE_KMS, 27 + expected, 12);
        assertAlmostEquals(y, TRAIL.bottom - k / 120 * (TRAIL.bottom - TRAIL.top), 0.01);
      }
    }),
);

check(
  "report page shows the line of a pointed-at phase and velocity on the map",
  () =>
    withPage(usualPage(), async (page) => {
      const phase = 0.25;
      const x = TRAIL.left +
        (27 + 600 - TRAIL_LOW_KMS) / TRAIL_WIDE_KMS * (TRAIL.right - TRAIL.left);
      await pointAt(page, "trail", [x, TRAIL.bottom - phase / 2 * (TRAIL.bottom - TRAIL.top)]);
      const [line] = await accents(page, "map-over");
      // At phase 0.25 only Vy counts: the level line Vy = 600 km/s.
      // Its ends are 6000 km/s out, where half a screen pixel of phase (0.6°) is 60 km/s.
      for (const [, y] of line!) assertAlmostEquals((MAP.middle[1]! - y!) / MAP.unit, 600, 70);
      assertMatch(
        await readout(page),
        /^Phase 0\.2[45]\d, 6[123]\d km\/s: nearest exposure \d+ has/,
      );
    }),
);

check("report page draws a point source at (Vx, Vy), the right way up", async () => {
  const blobs = [{ vx: 900, vy: -500, sigma: 60, flux: 100 }];
  const { map, trail, model, residual, line } = exampleContent({ blobs, noise: 0 });
  const maps = [{ method: "none", map, model, residual, reduced_chi_square: null }];
  const report = { ...exampleReport(), binary: null };
  const subjects = [{ line, systemic_kms: 27, grid: trail.grid, maps }];
  await withPage(reportPage({ ...report, subjects }), async (page) => {
    const shot = decodePng(await page.locator("#map-view .stage").screenshot());
    const scale = shot.columns / MAP.width;
    const half = 40;
    const [x, y] = [MAP.middle[0]! + 900 * MAP.unit, MAP.middle[1]! + 500 * MAP.unit];
    const box = { x: x - half, y: y - half, width: 2 * half, height: 2 * half };
    const { u, v } = darkCentre(shot, box, 72 * scale);
    // A pixel of the screen is 11 km/s.
    assertAlmostEquals(900 + (u - 0.5) * 2 * half / MAP.unit, 900, 12);
    assertAlmostEquals(-500 + (v - 0.5) * 2 * half / MAP.unit, -500, 12);
  });
});

check(
  "report page is worked by keyboard alone",
  () =>
    withPage(usualPage(), async (page) => {
      const focused = () =>
        page.evaluate("document.activeElement.id || document.activeElement.name");
      const seen: unknown[] = [];
      for (let i = 0; i < 16; i++) {
        await page.keyboard.press("Tab");
        seen.push(await focused());
      }
      for (const id of ["line", "method", "stretch", "map-view", "trail-view", "exposure-slider"]) {
        assert(seen.includes(id), `${id} among ${seen}`);
      }
      await page.locator("#map-view").focus();
      const outline = await page.locator("#map-view").evaluate((node) =>
        getComputedStyle(node).outlineWidth
      );
      assertEquals(outline, "3px");
      await page.keyboard.press("Shift+ArrowRight");
      await page.keyboard.press("ArrowUp");
      assertMatch(await readout(page), /^Vx 200, Vy 20 km\/s/); // ten pixels of 20 km/s, and one
      await page.keyboard.press("Escape");
      assertMatch(await readout(page), /^Point at the map/);
      await page.locator("#trail-view").focus();
      await page.keyboard.press("ArrowRight");
      assertMatch(await readout(page), /^Phase 0\.900, 57 km\/s/);
    }),
);

check(
  "report page moves lobe and stream with the sliders, and back",
  () =>
    withPage(usualPage(), async (page) => {
      const marks = () => page.locator("#map-over").innerHTML();
      const start = await marks();
      for (const key of ["mass_ratio", "k_sum_kms", "phase_zero", "outer_radius_over_a"]) {
        const before = await marks();
        await page.locator(`#slider-${key}`).focus();
        await page.keyboard.press("ArrowRight");
        assertNotEquals(await marks(), before, key);
      }
      const stars = await page.locator("#trail-over").innerHTML();
      await page.locator("#slider-systemic_kms").focus();
      await page.keyboard.press("ArrowRight");
      assertNotEquals(await page.locator("#trail-over").innerHTML(), stars);
      assertEquals(await page.locator("#value-systemic_kms").innerText(), "27.5");
      await page.locator("#reset").click();
      assertEquals(await marks(), start);
    }),
);

check(
  "report page turns the donor to Vx > 0 when phase zero is a quarter later",
  () =>
    withPage(usualPage(), async (page) => {
      await page.locator("#slider-phase_zero").evaluate((node) => {
        (node as HTMLInputElement).value = "0.25";
        node.dispatchEvent(new Event("input"));
      });
      // What recedes fastest a quarter after the new zero is seen at phase 0.5 of the old one: +Vx.
      const label = page.locator("#map-over text", { hasText: "donor" });
      const x = Number(await label.getAttribute("x"));
      assert(x > MAP.middle[0]! + 300 * MAP.unit, `${x}`);
    }),
);

check(
  "report page switches line, method and stretch, and steps through exposures",
  () =>
    withPage(usualPage(), async (page) => {
      const drawings = async () => {
        const ids = ["map-drawing", "trail-drawing", "exposure-drawing"];
        return await Promise.all(ids.map((id) => page.locator(`#${id}`).innerHTML()));
      };
      const first = await drawings();
      await page.locator('input[name="stretch"][value="asinh"]').check();
      const bent = await drawings();
      assertNotEquals(bent[0], first[0]);
      assertEquals(bent[2], first[2]);
      await page.locator('input[name="method"][value="1"]').check();
      assertMatch(await page.locator("#shown-name").innerText(), /back-projection, χ²\/N = 1\.32$/);
      await page.locator('input[name="line"][value="1"]').check();
      assertMatch(await page.locator("#shown-name").innerText(), /^He II 4686, .*maximum entropy/);
      assertEquals(await page.locator("#methods input").count(), 1);
      const before = await drawings();
      await page.locator("#exposure-slider").focus();
      await page.keyboard.press("ArrowRight");
      assertMatch(await page.locator("#exposure-name").innerText(), /^2 of 60, phase 0\.922/);
      const after = await drawings();
      assertNotEquals(after[2], before[2]);
      assertEquals(after[0], before[0]);
    }),
);

check(
  "report page holds a clicked place, and shows the clicked exposure",
  () =>
    withPage(usualPage(), async (page) => {
      const box = (await page.locator("#trail-view .stage").boundingBox())!;
      const y = TRAIL.bottom - 0.5 / 2 * (TRAIL.bottom - TRAIL.top);
      await page.mouse.click(
        box.x + 90 / TRAIL.width * box.width,
        box.y + y / TRAIL.height * box.height,
      );
      await nextFrame(page);
      assertMatch(await page.locator("#exposure-name").innerText(), /phase 0\.(49|50)\d/);
      const held = await readout(page);
      await pointAtVelocity(page, 0, 0);
      assertEquals(await readout(page), held);
    }),
);

check(
  "report page saves its view as SVG with fonts and as PNG at 300 dots per inch",
  () =>
    withPage(usualPage(), async (page) => {
      const save = async (button: string) => {
        const [download] = await Promise.all([
          page.waitForEvent("download"),
          page.locator(button).click(),
        ]);
        return {
          name: download.suggestedFilename(),
          bytes: await Deno.readFile(await download.path()),
        };
      };
      const svg = await save("#save-svg");
      const text = new TextDecoder().decode(svg.bytes);
      assertEquals(svg.name, "H-beta-view.svg");
      assertMatch(text, /@font-face/);
      assertMatch(text, /donor/);
      const png = await save("#save-png");
      assertEquals(decodePng(png.bytes).columns, Math.round(652 * 300 / 72));
    }),
);

check(
  "report page fits a narrow screen, and prints without controls",
  () =>
    withPage(usualPage(), async (page) => {
      const wide = await page.evaluate("document.documentElement.scrollWidth - innerWidth");
      assertEquals(wide, 0);
      await page.emulateMedia({ media: "print" });
      assertEquals(await page.locator(".sliders").isVisible(), false);
      assertEquals(await page.locator("#checklist").isVisible(), true);
    }, { viewport: { width: 360, height: 700 } }),
);

check(
  "report page has dark paper and light ink when the reader wants it",
  () =>
    withPage(usualPage(), async (page) => {
      const colour = (property: string) =>
        page.evaluate(`getComputedStyle(document.body).${property}`) as Promise<string>;
      const light = (text: string) =>
        text.match(/\d+/g)!.slice(0, 3).reduce((sum, part) => sum + Number(part), 0) / 3;
      assert(light(await colour("backgroundColor")) < 50);
      assert(light(await colour("color")) > 200);
    }, { colorScheme: "dark" }),
);

check(
  "report page sets its text in the family that it brings along",
  () =>
    withPage(usualPage(), async (page) => {
      await page.evaluate("document.fonts.ready.then(() => true)");
      const loaded = await page.evaluate("[...document.fonts].map((face) => face.status)");
      assertEquals(loaded, ["loaded", "loaded"]);
    }),
);

check(
  "report page works without a binary and without features",
  () =>
    withPage(reportPage({ ...exampleReport(), binary: null }), async (page) => {
      await pointAtVelocity(page, 100, 100);
      assertEquals(await page.locator(".sliders").count(), 0);
      assertMatch(await readout(page), /^Vx/);
    }),
);

if (import.meta.main) {
  for (const { name, run } of checks) {
    const fault = await run().then(() => null, (error) => String(error?.stack ?? error));
    console.log(JSON.stringify({ name, fault }));
  }
  await (await shared)?.close();
  Deno.exit(0);
}
