import { assertEquals, assertThrows } from "@std/assert";
import { InputError } from "@millrace/millrace/errors";
import { csvNumbers, csvTexts, parseCsv } from "@millrace/millrace/files";

const refused = (text: string) => {
  const error = assertThrows(() => parseCsv(text, { file: "log.csv" }), InputError);
  return [error.file, error.line, error.rule.split(" (")[0]];
};

Deno.test("parseCsv() keeps the line of every row", () => {
  const text = '\uFEFFfile , mid\n\na.txt, 1\n# clouds, "unclosed\n"b,\nc.txt",2\n d.txt,3';
  assertEquals(parseCsv(text), {
    names: ["file", "mid"],
    rows: [
      { line: 3, cells: ["a.txt", "1"] },
      { line: 5, cells: ["b,\nc.txt", "2"] },
      { line: 7, cells: ["d.txt", "3"] },
    ],
  });
});

Deno.test("parseCsv() reads Windows line ends and other delimiters", () => {
  const table = parseCsv("file;mid\r\na.txt;1\r\n", { delimiter: ";" });
  assertEquals(table, { names: ["file", "mid"], rows: [{ line: 2, cells: ["a.txt", "1"] }] });
});

Deno.test("parseCsv() keeps a number sign within a cell", () => {
  assertEquals(parseCsv("file\nframe#12.txt\n").rows[0]?.cells, ["frame#12.txt"]);
});

Deno.test("parseCsv() names file and line when the table is not right", () => {
  assertEquals(refused(""), ["log.csv", undefined, refused("# only\n")[2]!]);
  assertEquals(refused("a,b,a\n"), ["log.csv", 1, "a column name must not come twice"]);
  assertEquals(refused("a,,c\n"), ["log.csv", 1, "a column must have a name"]);
  assertEquals(refused("a,b\n1,2\n3\n").slice(0, 2), ["log.csv", 3]);
  assertEquals(refused("a,b\n1,2\n3,4,5\n").slice(0, 2), ["log.csv", 3]);
  assertEquals(refused('a,b\n1,2\n"3,4\n').slice(0, 1), ["log.csv"]);
  assertEquals(refused('a,b\n1,2\n3,"4"x\n').slice(0, 2), ["log.csv", 3]);
});

Deno.test("csvNumbers() takes decimal numbers and nothing else", () => {
  const one = (cell: string) => csvNumbers(parseCsv(`x,y\n"${cell}",1\n`), "x")[0];
  for (const [cell, value] of [["1", 1], ["-2.5e-3", -2.5e-3], [".5", 0.5], ["+7.", 7]] as const) {
    assertEquals(one(cell), value);
  }
  for (const cell of ["", "abc", "0x10", "1e999", "Infinity", "NaN", "1,5", "1 2", "--1", "1e"]) {
    const error = assertThrows(() => one(cell), InputError, "finite decimal number");
    assertEquals([error.line, error.key, error.value], [2, "x", cell]);
  }
});

Deno.test("csvNumbers() gives NaN for an empty cell when that is allowed", () => {
  const table = parseCsv("x,y\n,1\n2,\n");
  assertEquals(csvNumbers(table, "x", { allow_empty: true }), new Float64Array([NaN, 2]));
});

Deno.test("csvTexts() names the nearest column when there is none of that name", () => {
  const table = parseCsv("file,exposure_s\na,1\n", { file: "log.csv" });
  const error = assertThrows(() => csvTexts(table, "exposures"), InputError, "exposure_s");
  assertEquals([error.file, error.value], ["log.csv", "exposures"]);
});
