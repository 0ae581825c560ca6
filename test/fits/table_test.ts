// FITS Standard 4.0, sections 7.2 and 7.3: cases that reference/fits.json does not hold.
import { assert, assertEquals, assertThrows } from "@std/assert";
import { InputError } from "@millrace/millrace/errors";
import { parseFits } from "@millrace/millrace/fits";
import type { FitsColumn } from "@millrace/millrace/fits";
import { bytesOf, card, extension, join, tableCards } from "./build.ts";

function binary(format: string, data: Uint8Array, cards: readonly string[] = [], rows = 1) {
  const row = data.length / rows;
  const all = [...tableCards(row, rows, 1), card("TFORM1", `'${format}'`), ...cards];
  return parseFits(extension("BINTABLE", all, data)).hdus[1]!.column(1);
}

const dataOf = (column: FitsColumn) => column.kind === "variable" ? [] : [...column.data];

Deno.test("Hdu.column() reads unsigned and signed integers of every width exactly", () => {
  const ones = new Uint8Array(8).fill(255);
  const zero = (value: string) => [card("TZERO1", value)];
  const one = (format: string, width: number, value: string) => {
    const column = binary(format, ones.subarray(0, width), zero(value));
    assert(column.kind === "number");
    return column;
  };
  assertEquals(one("B", 1, "-128.0").data, new Int8Array([127]));
  assertEquals(one("I", 2, "32768").data, new Uint16Array([32767]));
  assertEquals(one("J", 4, "2147483648").data, new Uint32Array([2147483647]));
  assertEquals(one("K", 8, "9223372036854775808").data, new BigUint64Array([2n ** 63n - 1n]));
  assertEquals(one("K", 8, "0").data, new BigInt64Array([-1n]));
  assertEquals(one("I", 2, "32769").data, new Float64Array([32768]));
});

Deno.test("Hdu.column() marks TNULL in plain, shifted, scaled and 64-bit integers", () => {
  const data = new Uint8Array([0x80, 0, 0, 5]);
  const plain = binary("I", data, [card("TNULL1", -32768)], 2);
  assert(plain.kind === "number");
  assertEquals([[...plain.data], [...plain.missing!]], [[-32768, 5], [1, 0]]);
  const shifted = binary("I", data, [card("TNULL1", -32768), card("TZERO1", 32768)], 2);
  assert(shifted.kind === "number");
  assertEquals([shifted.data, shifted.missing], [
    new Uint16Array([0, 32773]),
    new Uint8Array([1, 0]),
  ]);
  const scaled = binary("I", data, [card("TNULL1", -32768), card("TSCAL1", 0.5)], 2);
  assertEquals(dataOf(scaled), [NaN, 2.5]);
  const wide = binary("K", new Uint8Array([0x80, 0, 0, 0, 0, 0, 0, 0]), [
    card("TNULL1", "-9223372036854775808"),
  ]);
  assert(wide.kind === "number");
  assertEquals(wide.missing, new Uint8Array([1]));
  const none = binary("I", data, [card("TNULL1", 7)], 2);
  assert(none.kind === "number");
  assertEquals(none.missing, null);
});

Deno.test("Hdu.column() reads logical values and marks what is neither T nor F", () => {
  const column = binary("4L", bytesOf("TF\0x"));
  assert(column.kind === "logical");
  assertEquals([[...column.data], [...column.missing!]], [[1, 0, 0, 0], [0, 0, 1, 1]]);
});

Deno.test("Hdu.column() reads bits, most significant first, each cell from a new byte", () => {
  const column = binary("3X", new Uint8Array([0b10111111, 0b01000000]), [], 2);
  assertEquals(dataOf(column), [1, 0, 1, 0, 1, 0]);
  assertEquals([column.width, column.rows], [3, 2]);
});

Deno.test("Hdu.column() parts strings within a cell by TDIM or by the format", () => {
  const text = bytesOf("ab c\0xd ");
  const texts = (format: string, ...cards: string[]) => {
    const column = binary(format, text, cards);
    return [dataOf(column), column.shape];
  };
  assertEquals(texts("8A"), [["ab c"], []]);
  assertEquals(texts("8A", card("TDIM1", "'(2,4)'")), [["ab", " c", "", "d"], [4]]);
  assertEquals(texts("8A", card("TDIM1", "'(2,2,2)'")), [["ab", " c", "", "d"], [2, 2]]);
  assertEquals(texts("8A2"), [["ab", " c", "", "d"], [4]]);
  assertEquals(texts("8A3"), [["ab", "c"], [2]]);
  // Three letters do not divide eight: what is left over in each cell belongs to no string.
  assertEquals(dataOf(binary("4A3", text, [], 2)), ["ab", ""]);
});

Deno.test("Hdu.column() takes a cell as one row of values when TDIM does not agree", () => {
  for (const dim of ["(2,2)", "(3", "(1e9,0)", "", "(-1,-3)", "()"]) {
    assertEquals(binary("3B", bytesOf("abc"), [card("TDIM1", `'${dim}'`)]).shape, [3], dim);
  }
  assertEquals(binary("6B", bytesOf("abcdef"), [card("TDIM1", "'(2, 3)'")]).shape, [2, 3]);
});

Deno.test("Hdu.column() reads arrays of varying length of every type", () => {
  const heap = new Uint8Array(32).fill(0x41);
  const cell = (format: string, count: number) => {
    const data = join(new Uint8Array([0, 0, 0, count, 0, 0, 0, 0]), heap);
    const cards = [...tableCards(8, 1, 1, 32), card("TFORM1", `'${format}'`)];
    const column = parseFits(extension("BINTABLE", cards, data)).hdus[1]!.column(1);
    assert(column.kind === "variable");
    return column.cells[0]!;
  };
  assertEquals(cell("PA(9)", 3).data, ["AAA"]);
  assertEquals(cell("1PL", 2).data, new Uint8Array([0, 0]));
  assertEquals(cell("PX", 10).data, new Uint8Array([0, 1, 0, 0, 0, 0, 0, 1, 0, 1]));
  assertEquals(cell("PB", 2).data, new Uint8Array([65, 65]));
  assertEquals(cell("PI", 2).data, new Int16Array([0x4141, 0x4141]));
  assertEquals(cell("PK", 1).data, new BigInt64Array([0x4141414141414141n]));
  assertEquals(cell("PC", 1).data.length, 2);
  assertEquals(cell("PM", 2).data.length, 4);
});

Deno.test("Hdu.column() honours THEAP, a gap between rows and heap", () => {
  const data = join(new Uint8Array([0, 0, 0, 1, 0, 0, 0, 1]), new Uint8Array(4), bytesOf("xy"));
  const cards = [...tableCards(8, 1, 1, 6), card("TFORM1", "'PB'"), card("THEAP", 12)];
  const hdu = parseFits(extension("BINTABLE", cards, data)).hdus[1]!;
  assertEquals([...hdu.numbers(1, { row: 0 })], [0x79]);
});

Deno.test("Hdu.columns lists names, units and descriptions", () => {
  const cards = [
    ...tableCards(3, 1, 2),
    "TTYPE1  = 'VEL     '           / radial velocity",
    card("TFORM1", "'I'"),
    card("TUNIT1", "'km/s'"),
    card("TDISP1", "'I6'"),
    card("TFORM2", "'B'"),
  ];
  const { columns } = parseFits(extension("BINTABLE", cards, new Uint8Array(3))).hdus[1]!;
  assertEquals(columns, [
    {
      name: "VEL",
      number: 1,
      format: "I",
      unit: "km/s",
      description: "radial velocity",
      display: "I6",
      width: 1,
      shape: [],
    },
    {
      name: "",
      number: 2,
      format: "B",
      unit: null,
      description: "",
      display: null,
      width: 1,
      shape: [],
    },
  ]);
});

function ascii(format: string, fields: readonly string[], cards: readonly string[] = []) {
  const row = fields[0]!.length;
  const all = [
    ...tableCards(row, fields.length, 1),
    card("TBCOL1", 1),
    card("TFORM1", `'${format}'`),
    ...cards,
  ];
  return parseFits(extension("TABLE", all, bytesOf(fields.join("")))).hdus[1]!.column(1);
}

Deno.test("Hdu.column() reads the fields of ASCII tables by Fortran's rules", () => {
  const one = (format: string, field: string) => dataOf(ascii(format, [field]))[0];
  assertEquals(one("A6", " ab c "), " ab c");
  assertEquals(one("I5", "  -42"), -42);
  assertEquals(one("I5", "     "), 0);
  assertEquals(one("F6.2", "  3.14"), 3.14);
  assertEquals(one("F6.2", "   314"), 3.14);
  assertEquals(one("E8.1", " 1.5E+03"), 1500);
  assertEquals(one("D8.1", " 1.5D-03"), 0.0015);
  assertEquals(one("E8.3", "  15+3  "), 15);
  assertEquals(one("E8.1", "   .5e2 "), 50);
});

Deno.test("Hdu.column() marks TNULL in ASCII tables and scales", () => {
  const column = ascii("I3", ["***", " 10"], [card("TNULL1", "'***'"), card("TSCAL1", 0.5)]);
  assert(column.kind === "number");
  assertEquals([[...column.data], [...column.missing!]], [[NaN, 5], [1, 0]]);
});

Deno.test("Hdu.column() names byte and text when a field of an ASCII table is no number", () => {
  for (
    const [format, field] of [["I5", "1.5  "], ["F5.1", "1,5  "], ["E5.1", "abc  "], [
      "I5",
      "1e3  ",
    ]]
  ) {
    const error = assertThrows(() => ascii(format!, [field!]), InputError, "HDU 1, byte 5760");
    assertEquals(error.value, field);
  }
});

Deno.test("Hdu.column() refuses fields of ASCII tables that lie outside the row", () => {
  for (const [format, start] of [["A4", 1], ["A1", 4], ["A1", 0], ["L1", 1], ["F", 1]] as const) {
    const cards = [...tableCards(3, 1, 1), card("TBCOL1", start), card("TFORM1", `'${format}'`)];
    const hdu = parseFits(extension("TABLE", cards, bytesOf("abc"))).hdus[1]!;
    assertThrows(() => hdu.column(1), InputError, "lie in its row");
  }
});
