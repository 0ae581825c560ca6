// What a damaged or lying file must lead to: an InputError that names file, HDU, byte or key. Each
// must come without allocating what the header promises; the sizes here would exhaust any machine.
import { assert, assertEquals, assertThrows } from "@std/assert";
import { gzipSync } from "node:zlib";
import { InputError } from "@millrace/millrace/errors";
import { parseFits } from "@millrace/millrace/fits";
import { bytesOf, card, extension, join, primary, tableCards, unit } from "./build.ts";
import { decodeAll } from "./reference.ts";

function refused(bytes: Uint8Array, rule: string): InputError {
  const error = assertThrows(
    () => parseFits(bytes, { file: "x.fits" }).hdus.forEach(decodeAll),
    InputError,
    rule,
  );
  assertEquals(error.file, "x.fits");
  return error;
}

const image = (
  bitpix: number,
  axes: readonly (number | string)[],
  data: Uint8Array = new Uint8Array(8),
) =>
  unit([
    card("SIMPLE", true),
    card("BITPIX", bitpix),
    card("NAXIS", axes.length),
    ...axes.map((length, k) => card(`NAXIS${k + 1}`, length)),
  ], data);

const table = (cards: readonly string[], data: Uint8Array = new Uint8Array(16)) =>
  extension("BINTABLE", cards, data);

const CASES: [name: string, bytes: Uint8Array, rule: string][] = [
  ["nothing", new Uint8Array(), "must not be empty"],
  ["a text", bytesOf("wavelength flux\n1 2\n"), "must begin with SIMPLE"],
  ["SIMPLE = F", unit([card("SIMPLE", false)]), "SIMPLE must be T"],
  ["half a header", primary().subarray(0, 200), "file ends before it"],
  ["zeros after one card", join(bytesOf(card("SIMPLE", true)), new Uint8Array(2850)), "END"],
  ["a gzip stream cut off", new Uint8Array(gzipSync(primary())).subarray(0, 60), "must be whole"],
  ["no BITPIX", unit([card("SIMPLE", true), card("NAXIS", 0)]), "BITPIX must be one of"],
  ["BITPIX 12", image(12, [1]), "BITPIX must be one of"],
  ["no NAXIS", unit([card("SIMPLE", true), card("BITPIX", 8)]), "be there and be a whole number"],
  ["NAXIS -1", unit([card("SIMPLE", true), card("BITPIX", 8), card("NAXIS", -1)]), "0 or more"],
  ["NAXIS 1e9", unit([card("SIMPLE", true), card("BITPIX", 8), card("NAXIS", 1e9)]), "999 axes"],
  ["NAXIS 1.5", unit([card("SIMPLE", true), card("BITPIX", 8), card("NAXIS", 1.5)]), "whole"],
  [
    "no NAXIS2",
    unit([
      card("SIMPLE", true),
      card("BITPIX", 8),
      card("NAXIS", 2),
      card("NAXIS1", 2),
    ]),
    "be there",
  ],
  ["NAXIS1 = 1e12", image(-64, [1e12]), "data must end within the file"],
  ["NAXIS1 = 1e300", image(-64, ["1E300"]), "data must end within the file"],
  ["NAXIS1 beyond 64 bits", image(8, ["99999999999999999999999"]), "whole number"],
  ["axes whose product is no number", image(8, Array(99).fill(1e15).concat(0)), "within the file"],
  ["a negative axis", image(8, [-5]), "0 or more"],
  [
    "PCOUNT in an image",
    extension("IMAGE", [
      card("BITPIX", 8),
      card("NAXIS", 1),
      card("NAXIS1", 1),
      card("PCOUNT", 5),
      card("GCOUNT", 1),
    ], new Uint8Array(10)),
    "PCOUNT must be 0",
  ],
  [
    "GCOUNT 0 in an image",
    extension("IMAGE", [
      card("BITPIX", 8),
      card("NAXIS", 1),
      card("NAXIS1", 100),
      card("PCOUNT", 0),
      card("GCOUNT", 0),
    ], new Uint8Array(10)),
    "GCOUNT must be 1",
  ],
  [
    "BSCALE that is no number",
    unit([
      card("SIMPLE", true),
      card("BITPIX", 8),
      card("NAXIS", 1),
      card("NAXIS1", 1),
      card("BSCALE", "'two'"),
    ], new Uint8Array(1)),
    "readable as a number",
  ],
  [
    "PCOUNT = 1e15",
    table([...tableCards(2, 2, 1, 1e15), card("TFORM1", "'I'")]),
    "within the file",
  ],
  ["PCOUNT = -1", table([...tableCards(2, 2, 1, -1), card("TFORM1", "'I'")]), "0 or more"],
  ["NAXIS2 = 1e14", table([...tableCards(2, 1e14, 1), card("TFORM1", "'I'")]), "within the file"],
  ["TFIELDS = 1e9", table(tableCards(2, 2, 1e9)), "at most 999 columns"],
  ["TFIELDS = -1", table(tableCards(2, 2, -1)), "0 or more"],
  ["TFIELDS too many", table([...tableCards(2, 2, 2), card("TFORM1", "'I'")]), "column format"],
  ["TFIELDS too few", table([...tableCards(2, 2, 0), card("TFORM1", "'I'")]), "fill the row"],
  ["a format Z", table([...tableCards(2, 2, 1), card("TFORM1", "'2Z'")]), "letters LXBIJKAEDCMPQ"],
  ["a format of a number", table([...tableCards(2, 2, 1), card("TFORM1", 2)]), "column format"],
  [
    "a repeat of 1e14",
    table([...tableCards(2, 2, 1), card("TFORM1", "'99999999999999D'")]),
    "fill",
  ],
  [
    "a repeat beyond",
    table([...tableCards(2, 2, 1), card("TFORM1", "'9999999999999999D'")]),
    "column",
  ],
  ["2PE", table([...tableCards(16, 1, 1), card("TFORM1", "'2PE(3)'")]), "varying length"],
  ["PZ", table([...tableCards(8, 2, 1), card("TFORM1", "'PZ'")]), "varying length"],
  [
    "BITPIX 16 in a table",
    table([
      card("BITPIX", 16),
      ...tableCards(2, 2, 1).slice(1),
      card("TFORM1", "'I'"),
    ]),
    "BITPIX must be 8",
  ],
  [
    "one axis in a table",
    table([
      card("BITPIX", 8),
      card("NAXIS", 1),
      card("NAXIS1", 2),
      card("TFIELDS", 1),
    ]),
    "NAXIS must be 2",
  ],
  ["rows without bytes", table([...tableCards(0, 1e12, 1), card("TFORM1", "'0A'")]), "100000 rows"],
  [
    "descriptors without bytes",
    table([
      ...tableCards(0, 1e12, 1),
      card("TFORM1", "'0PE'"),
    ]),
    "100000 rows",
  ],
  [
    "THEAP = -8",
    table([
      ...tableCards(8, 2, 1),
      card("TFORM1", "'PE'"),
      card("THEAP", -8),
    ]),
    "0 or more",
  ],
];

for (const [name, bytes, rule] of CASES) {
  Deno.test(`parseFits() refuses the file when it holds ${name}`, () => {
    refused(bytes, rule);
  });
}

// One row, an array of `count` values from byte `from` of a heap of 16 bytes.
function descriptor(format: string, count: number | bigint, from: number | bigint): Uint8Array {
  const wide = format.includes("Q");
  const row = wide ? 16 : 8;
  const data = new Uint8Array(row + 16);
  const view = new DataView(data.buffer);
  if (wide) {
    view.setBigInt64(0, BigInt(count));
    view.setBigInt64(8, BigInt(from));
  } else {
    view.setUint32(0, Number(count));
    view.setUint32(4, Number(from));
  }
  return table([...tableCards(row, 1, 1, 16), card("TFORM1", `'${format}'`)], data);
}

Deno.test("parseFits() refuses arrays that leave the heap, and reads those that just fit", () => {
  const fits = (bytes: Uint8Array) => parseFits(bytes).hdus[1]!.numbers(1, { row: 0 }).length;
  for (const format of ["PE", "QE"]) {
    assertEquals(fits(descriptor(format, 4, 0)), 4);
    assertEquals(fits(descriptor(format, 1, 12)), 1);
    assertEquals(fits(descriptor(format, 0, 4_000_000_000)), 0);
    for (
      const [count, from] of [[5, 0], [1, 13], [4_294_967_295, 0], [1, 4_294_967_295]] as const
    ) {
      const error = refused(descriptor(format, count, from), "within the heap");
      assert(error.message.includes("HDU 1, byte 5760"), error.message);
    }
  }
  const most = 2n ** 63n - 1n;
  for (
    const [count, from] of [[-1n, 0n], [1n, -1n], [most, 0n], [1n, most], [-1n, -most]] as const
  ) {
    refused(descriptor("QD", count, from), "within the heap");
  }
});

Deno.test("parseFits() holds the size limit when many rows share one array", () => {
  const rows = 10_000;
  const heap = 100_000;
  const data = new Uint8Array(rows * 8 + heap);
  const view = new DataView(data.buffer);
  for (let r = 0; r < rows; r++) view.setUint32(r * 8, heap);
  const bytes = table([...tableCards(8, rows, 1, heap), card("TFORM1", "'PB'")], data);
  refused(bytes, "at most 1073741824 bytes once decoded");
  const small = parseFits(bytes, { max_bytes: 1e6 }).hdus[1]!;
  assertThrows(() => small.column(1), InputError, "at most 1000000 bytes");
});

Deno.test("parseFits() holds the size limit for images and fixed columns", () => {
  const bytes = image(8, [1000], new Uint8Array(1000));
  assertEquals(parseFits(bytes, { max_bytes: 8000 }).hdus[0]!.image().data.length, 1000);
  const hdu = parseFits(bytes, { max_bytes: 7999 }).hdus[0]!;
  assertThrows(() => hdu.image(), InputError, "at most 7999 bytes once decoded");
  const bits = table([...tableCards(1000, 1, 1), card("TFORM1", "'8000X'")], new Uint8Array(1000));
  const column = parseFits(bits, { max_bytes: 1000 }).hdus[1]!;
  assertThrows(() => column.column(1), InputError, "once decoded");
});

Deno.test("parseFits() holds the size limit for gzipped files", () => {
  const bomb = new Uint8Array(gzipSync(join(primary(), new Uint8Array(5_000_000))));
  assertThrows(() => parseFits(bomb, { max_bytes: 1e6 }), InputError, "no larger than the limit");
});

Deno.test("parseFits() refuses what it does not decode with a remedy, and reads the rest", () => {
  const compressed = join(
    table([...tableCards(8, 1, 1), card("TFORM1", "'PB'"), card("ZIMAGE", true)]),
    unit([
      card("XTENSION", "'IMAGE   '"),
      card("BITPIX", 8),
      card("NAXIS", 1),
      card("NAXIS1", 1),
      card("PCOUNT", 0),
      card("GCOUNT", 1),
    ], bytesOf("A")),
  );
  const [, first, second] = parseFits(compressed).hdus;
  assertEquals(first!.kind, "compressed-image");
  const error = assertThrows(() => first!.image(), InputError, "compressed within a table");
  assert(error.remedy?.includes("decompress"));
  assertThrows(() => first!.column(1), InputError, "compressed within a table");
  assertEquals([...second!.image().data], [65]);

  const groups = unit([
    card("SIMPLE", true),
    card("BITPIX", 16),
    card("NAXIS", 2),
    card("NAXIS1", 0),
    card("NAXIS2", 3),
    card("GROUPS", true),
    card("PCOUNT", 2),
    card("GCOUNT", 4),
  ], new Uint8Array(2 * 4 * (2 + 3)));
  const { hdus } = parseFits(join(
    groups,
    unit([
      card("XTENSION", "'FOREIGN '"),
      card("BITPIX", 8),
      card("NAXIS", 0),
      card("PCOUNT", 0),
      card("GCOUNT", 1),
    ]),
  ));
  assertEquals(hdus.map(({ kind }) => kind), ["random-groups", "other"]);
  assertEquals(hdus[0]!.data_bytes, 40);
  assertThrows(() => hdus[0]!.image(), InputError, "random groups are not read");
  assertThrows(() => hdus[1]!.image(), InputError, '"FOREIGN"');
});

Deno.test("parseFits() reads a file whose last block is not filled up, with a warning", () => {
  const whole = image(8, [10], bytesOf("0123456789"));
  const { hdus, warnings } = parseFits(whole.subarray(0, 2890));
  assertEquals(hdus[0]!.image().data[9], 0x39);
  assertEquals(warnings.map(({ code }) => code), ["fits-block-short"]);
  assertEquals(parseFits(whole).warnings, []);
});

Deno.test("parseFits() warns of what follows the last HDU unless it is filling", () => {
  const filling = join(primary(), new Uint8Array(2880), new Uint8Array(10).fill(0x20));
  assertEquals(parseFits(filling).warnings, []);
  const { hdus, warnings } = parseFits(join(primary(), bytesOf("something else")));
  assertEquals([hdus.length, warnings[0]?.code], [1, "fits-bytes-left"]);
  assert(warnings[0]?.text.startsWith("14 bytes from byte 2880"));
});
