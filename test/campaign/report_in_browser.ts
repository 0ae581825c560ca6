// Opens a page given as the first argument in Debian's browser and tells, as one line of JSON, what a
// reader meets. It needs every permission, so tests run it as a process of its own.
import { BROWSER } from "../figures/page/browser_checks.ts";

/** What a reader meets on a page. */
export interface PageVisit {
  /** Console errors and warnings, thrown errors, requests that leave the file. */
  readonly faults: readonly string[];
  /** Methods on offer for the first line. */
  readonly methods: readonly string[];
  /** Lines on offer. */
  readonly lines: readonly string[];
  /** What is said when the pointer stands on the first feature. */
  readonly readout: string;
  /** What is shown after switching to the last method, and then to the last line. */
  readonly shown: readonly [first: string, method: string, line: string];
  /** The exposure before and after a step with the keyboard. */
  readonly exposures: readonly [before: string, after: string];
}

if (import.meta.main) {
  const [file, picture] = Deno.args as [string, string];
  const { chromium } = await import("playwright-core");
  const browser = await chromium.launch({
    executablePath: BROWSER,
    args: ["--no-sandbox", "--disable-gpu"],
  });
  const page = await browser.newPage({ viewport: { width: 1180, height: 1400 } });
  const faults: string[] = [];
  page.on("console", (message) => {
    if (message.type() === "error" || message.type() === "warning") faults.push(message.text());
  });
  page.on("pageerror", (error) => faults.push(error.message));
  page.on("request", (request) => {
    if (!/^(file|data|blob):/.test(request.url())) faults.push(request.url());
  });
  await page.goto(`file://${file}`);
  await page.waitForSelector("html[data-ready]");
  const words = (selector: string) => page.locator(selector).allInnerTexts();
  const shown = async () => (await page.locator("#shown-name").innerText()).trim();
  const methods = (await words("#methods label")).map((text) => text.trim());
  const lines = (await words('label:has(input[name="line"])')).map((text) => text.trim());
  const [first] = JSON.parse(await page.locator("#report-data").textContent() ?? "").lines;
  const { vx_kms, vy_kms } = first.maps[0].features[0];
  // From the middle of the map by the keyboard, a pixel of the map at a time.
  await page.locator("#map-view").focus();
  const step = 2 * first.maps[0].half_width_kms / (first.maps[0].pixels - 1);
  const press = async (key: string, distance: number) => {
    for (let i = 0; i < Math.round(Math.abs(distance) / step); i++) await page.keyboard.press(key);
  };
  await press(vx_kms < 0 ? "ArrowLeft" : "ArrowRight", vx_kms);
  await press(vy_kms < 0 ? "ArrowDown" : "ArrowUp", vy_kms);
  const readout = await page.locator("#readout").innerText();
  await page.screenshot({ path: picture, fullPage: true });
  const before = await page.locator("#exposure-name").innerText();
  await page.locator("#exposure-slider").focus();
  await page.keyboard.press("ArrowRight");
  const after = await page.locator("#exposure-name").innerText();
  const names: string[] = [await shown()];
  await page.locator('input[name="method"]').last().check();
  names.push(await shown());
  await page.locator('input[name="line"]').last().check();
  names.push(await shown());
  await browser.close();
  const visit: PageVisit = {
    faults,
    methods,
    lines,
    readout,
    shown: names as [string, string, string],
    exposures: [before, after],
  };
  console.log(JSON.stringify(visit));
  Deno.exit(0);
}
