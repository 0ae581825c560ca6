import { assertEquals, assertRejects, assertStringIncludes } from "@std/assert";
import {
  drawPlate,
  mapKinds,
  type PanelName,
  panelNames,
  pictureRaster,
  pngFile,
  standardPlate,
  studyKinds,
} from "../../engine/figures/mod.ts";
import { compareSnapshot, differ } from "./compare_snapshot.ts";
import { exampleContent } from "./example_content.ts";
import { exampleSecondLine, exampleSubject } from "./example_subject.ts";

const inVelocity = [...Object.keys(mapKinds), ...Object.keys(studyKinds)] as PanelName[];
const maps = [...inVelocity, "sampling", "blend"] as PanelName[];
const trails = ["trail", "model", "residual"];
const plots = panelNames.filter((name) => !maps.includes(name) && !trails.includes(name));

Deno.test("standardPlate() looks as kept when it has one column", async () => {
  await compareSnapshot(standardPlate(exampleContent(), { width: "one-column" }), "one-column");
});

Deno.test("standardPlate() looks as kept when it has two columns", async () => {
  await compareSnapshot(standardPlate(exampleContent()), "two-column");
});

Deno.test("drawPlate() draws every panel in velocity space as kept", async () => {
  const rows = [];
  for (let i = 0; i < maps.length; i += 4) rows.push({ panels: maps.slice(i, i + 4) });
  const { picture } = drawPlate({ width: 260, rows, letters: true }, [exampleSubject()]);
  await compareSnapshot(picture, "map-panels");
});

Deno.test("drawPlate() draws every line plot as kept", async () => {
  const rows = [];
  for (let i = 0; i < plots.length; i += 3) {
    rows.push({ panels: plots.slice(i, i + 3), height_mm: 40 });
  }
  const { picture } = drawPlate({ width: 220, rows, letters: true }, [exampleSubject()]);
  await compareSnapshot(picture, "plot-panels");
});

Deno.test("drawPlate() draws two lines in rows with shared scales as kept", async () => {
  const { picture } = drawPlate({
    each_subject: true,
    letters: true,
    share: ["map"],
    stretch: "square-root",
    rows: [{ panels: ["map", "trail", "model", "residual"], height_mm: 45 }],
  }, [exampleSubject(), exampleSecondLine()]);
  await compareSnapshot(picture, "two-lines");
});

Deno.test("compareSnapshot() fails when there is no kept picture, and creates none", async () => {
  if (Deno.env.get("MILLRACE_KEEP_SNAPSHOTS") === "1") return;
  const picture = { width: 10, height: 10, items: [], title: "", description: "" };
  await assertRejects(() => compareSnapshot(picture, "no-such"), Error, "There is no kept picture");
  await assertRejects(() => Deno.stat(new URL("./snapshots/no-such.png", import.meta.url)));
});

Deno.test("differ() marks what differs and passes over faint differences", async () => {
  const square = { kind: "path", d: "M0,0L20,0L20,20L0,20Z" } as const;
  const draw = (fill: string) => {
    const items = [{ ...square, fill }];
    return pictureRaster({ width: 40, height: 40, items, title: "", description: "" }, { dpi: 72 });
  };
  const kept = pngFile(await draw("#808080"));
  assertEquals(differ(await draw("#888888"), kept), null);
  const difference = differ(await draw("#ff0000"), kept)!;
  assertStringIncludes(difference.text, "400 of 1600 pixels differ");
  assertEquals([...difference.picture!.rgb.subarray(0, 3)], [220, 0, 0]);
  assertEquals([...difference.picture!.rgb.subarray(-3)], [255, 255, 255]);
});
