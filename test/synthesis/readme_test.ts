import { assertEquals } from "@std/assert";
import { modelParameters } from "@millrace/millrace/synthesis";

const readme = await Deno.readTextFile(
  new URL("../../engine/synthesis/README.md", import.meta.url),
);

/** Rows of the README's tables of keys, by section. */
function rowsOf(section: string): string[][] {
  const [, after = ""] = readme.split(`key of \`[model.${section}]\``);
  const lines = after.split("\n").slice(2);
  const end = lines.findIndex((line) => !line.startsWith("|"));
  return lines.slice(0, end).map((line) => line.split("|").slice(1, -1).map((cell) => cell.trim()));
}

const number = (text: string) => Number(text.replace("−", "-"));

Deno.test("README.md lists every parameter of a model with symbol, unit, range and default", () => {
  const sections = new Set(modelParameters.map(({ section }) => section));
  for (const section of sections) {
    const rows = rowsOf(section);
    const known = modelParameters.filter((parameter) => parameter.section === section);
    assertEquals(rows.map(([key]) => key), known.map(({ key }) => `\`${key}\``), section);
    for (const [k, { symbol, unit, low, high, default: value }] of known.entries()) {
      const [, shown, of, range = "", preset = ""] = rows[k]!;
      assertEquals([shown, of], [symbol, unit === "" ? "–" : unit]);
      assertEquals(range.split(" to ").map(number), [low, high]);
      assertEquals(preset === "null" ? null : number(preset), value);
    }
  }
});
