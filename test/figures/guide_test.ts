import { assertEquals } from "@std/assert";
import { panelNames } from "../../engine/figures/mod.ts";

Deno.test("the guide to figures lists every panel, once, and no other", async () => {
  const guide = await Deno.readTextFile(new URL("../../engine/figures/README.md", import.meta.url));
  const table = guide.slice(guide.indexOf("## Panels"), guide.indexOf("## Reading the map"));
  const first = table.split("\n").filter((line) => line.startsWith("| `")).map((line) =>
    line.split("|")[1]!
  );
  const listed = first.flatMap((cell) =>
    [...cell.matchAll(/`([a-z-]+)`/g)].map((match) => match[1]!)
  );
  assertEquals(listed.toSorted(), [...panelNames].sort());
});
