// reference/fits.json: files made by astropy.io.fits, whose decoded values were asserted equal to
// the arrays that went in; FITS Standard 4.0 (2018). Everything is exact but scaled values (1e-12).
import { assert, assertAlmostEquals, assertEquals, assertThrows } from "@std/assert";
import { InputError } from "@millrace/millrace/errors";
import { findHdu, parseFits } from "@millrace/millrace/fits";
import type { FitsValues, Hdu } from "@millrace/millrace/fits";
import { bytesOfCase, cases, wild } from "./reference.ts";
import type { ReferenceCase, ReferenceHdu, Wild } from "./reference.ts";

async function open(file: string) {
  return parseFits(await bytesOfCase(file), { file });
}

function assertSame(actual: Wild, expected: Wild, where: string): void {
  if (Array.isArray(expected)) {
    assert(Array.isArray(actual) && actual.length === expected.length, `${where}: length`);
    expected.forEach((value, k) => assertSame((actual as Wild[])[k]!, value, `${where}[${k}]`));
  } else assertEquals(actual, expected, where);
}

function assertCards(hdu: Hdu, expected: ReferenceHdu, where: string): void {
  if (expected.cards === undefined) return;
  const found = hdu.header.cards.filter(({ commentary }) => !commentary);
  assertEquals(found.map(({ keyword }) => keyword), expected.cards.map(([keyword]) => keyword));
  expected.cards.forEach(([keyword, value, comment], k) => {
    const card = found[k]!;
    assertEquals(wild(card.value), value, `${where}: ${keyword}`);
    // LONGQUOT: the file's author notes that astropy 5.2.1 mangles this comment.
    if (keyword !== "LONGQUOT") assertEquals(card.comment, comment, `${where}: ${keyword}`);
  });
  assertEquals(hdu.header.all("COMMENT").map(wild), [...expected.comment ?? []], where);
  assertEquals(hdu.header.all("HISTORY").map(wild), [...expected.history ?? []], where);
}

// Values as the reference writes them: one entry per row, vectors and arrays as lists.
function flatten(values: FitsValues): Wild[] {
  if (values.kind === "variable") return values.cells.map(flatten);
  if (values.kind === "text") return [...values.data];
  if (values.kind === "complex") {
    const pairs = Array.from({ length: values.data.length / 2 }, (_, k) => k);
    return pairs.map((k) => [wild(values.data[2 * k]), wild(values.data[2 * k + 1])]);
  }
  const missing = values.kind === "bit" ? null : values.missing;
  return Array.from(values.data as ArrayLike<number>, (value, k) => {
    const absent = missing?.[k] === 1;
    if (values.kind === "logical") return absent ? null : value === 1;
    if (values.kind === "number" && absent && !(values.data instanceof Float64Array)) return null;
    return wild(value);
  });
}

function assertColumns(hdu: Hdu, expected: ReferenceHdu, where: string): void {
  for (const { name, tform, unit, values } of expected.columns ?? []) {
    const column = hdu.column(name);
    assertEquals([column.format, column.unit], [tform, unit], name);
    assertEquals(column.rows, values.length);
    const flat = flatten(column);
    const { width } = column;
    const vector = Array.isArray(values[0]) && column.kind !== "complex" &&
      column.kind !== "variable";
    const rows = vector ? values.map((_, r) => flat.slice(r * width, (r + 1) * width)) : flat;
    assertSame(rows, values, `${where}: ${name}`);
  }
}

function assertImage(hdu: Hdu, expected: ReferenceHdu, { id, kind }: ReferenceCase): void {
  if (expected.data === undefined) return;
  assertEquals(hdu.shape, expected.shape_naxis);
  if (expected.data === null) {
    assertEquals(hdu.kind, "empty");
    return;
  }
  const { data, missing } = hdu.exactImage();
  const image = hdu.image();
  assertEquals(image.shape, expected.shape_naxis);
  const wanted = expected.data;
  assertEquals(data.length, wanted.length);
  wanted.forEach((value, k) => {
    const where = `${id} [${k}]`;
    if (kind === "image_scaled" && typeof value === "number") {
      assertAlmostEquals(Number(data[k]), value, 1e-12 * Math.abs(value), where);
    } else if (missing?.[k] === 1) {
      assert(value === "NaN" || value === null, where);
    } else assertEquals(wild(data[k]), value, where);
    const double = value === null ? NaN : Number(value);
    if (!Number.isNaN(double)) assertEquals(image.data[k], Number(wild(data[k])));
    else assert(Number.isNaN(image.data[k]));
  });
}

for (const each of cases.filter(({ kind }) => kind !== "bad")) {
  Deno.test(`parseFits() finds what is in the file when it reads ${each.id} (${each.kind})`, async () => {
    const { hdus, warnings } = await open(each.file);
    assertEquals(hdus.length, each.hdus.length);
    each.hdus.forEach((expected, index) => {
      const hdu = hdus[index]!;
      const where = `${each.id} HDU ${index}`;
      assertCards(hdu, expected, where);
      assertImage(hdu, expected, each);
      assertColumns(hdu, expected, where);
      const { data, hdu: whole } = hdu.checksums();
      if (each.kind === "checksum") {
        assertEquals({ data, whole }, { data: expected.data_ok, whole: expected.header_ok }, where);
      } else assertEquals({ data, whole }, { data: null, whole: null });
    });
    if (each.kind !== "checksum") assertEquals(warnings, []);
  });
}

for (const each of cases.filter(({ kind }) => kind === "bad")) {
  Deno.test(`parseFits() names file, byte and rule when it reads ${each.id} (${each.error})`, async () => {
    const bytes = await bytesOfCase(each.file);
    const error = assertThrows(() => parseFits(bytes, { file: each.file }), InputError);
    assertEquals(error.file, each.file);
    const expected: Record<string, RegExp> = {
      "data end before NAXIS says":
        /data must end within the file \(HDU 0, byte 7880\): current value is "12000 bytes of data from byte 2880 in a file of 7880 bytes"/,
      "no END card": /must end with an END card .*byte 2880/,
      "does not start with SIMPLE": /must begin with SIMPLE = T \(HDU 0, byte 0\).*wavelength flux/,
    };
    assert(expected[each.error!]!.test(error.message), error.message);
  });
}

Deno.test("parseFits() does not change the bytes it is given", async () => {
  for (const { file, kind } of cases) {
    if (kind === "bad") continue;
    const bytes = await bytesOfCase(file);
    const before = bytes.slice();
    for (const hdu of parseFits(bytes).hdus) {
      if (hdu.kind === "image") hdu.image().data.fill(0);
      for (const { number } of hdu.columns) hdu.column(number);
    }
    assertEquals(bytes, before);
  }
});

Deno.test("parseFits() reads bytes that do not begin at an aligned address", async () => {
  const bytes = await bytesOfCase("fits/img_types.fits");
  const shifted = new Uint8Array(bytes.length + 3);
  shifted.set(bytes, 3);
  const moved = parseFits(shifted.subarray(3)).hdus;
  parseFits(bytes).hdus.slice(1).forEach((hdu, k) => {
    assertEquals(moved[k + 1]!.exactImage(), hdu.exactImage());
  });
});

Deno.test("parseFits() warns of wrong checksums, fails when asked, and is silent when told", async () => {
  const good = await bytesOfCase("fits/checksum_good.fits");
  const data = await bytesOfCase("fits/checksum_bad_data.fits");
  const header = await bytesOfCase("fits/checksum_bad_header.fits");
  assertEquals(parseFits(good, { checksum: "fail" }).warnings, []);
  assertEquals(parseFits(data).warnings, [{
    code: "fits-datasum-wrong",
    text: "HDU 1: DATASUM does not agree with the data",
  }]);
  assertEquals(parseFits(header).warnings, [{
    code: "fits-checksum-wrong",
    text: "HDU 3: CHECKSUM does not agree with header and data",
  }]);
  assertThrows(() => parseFits(data, { checksum: "fail" }), InputError, "DATASUM does not agree");
  assertThrows(() => parseFits(header, { checksum: "fail" }), InputError, "CHECKSUM does not");
  assertEquals(parseFits(data, { checksum: "ignore" }).warnings, []);
});

Deno.test("findHdu() finds by name, version and number", async () => {
  const fits = await open("fits/multi.fits");
  assertEquals(findHdu(fits, "sci").index, 1);
  assertEquals(findHdu(fits, "SCI", { version: 2 }).index, 2);
  assertEquals(findHdu(fits, 3).name, "EVENTS");
  const error = assertThrows(
    () => findHdu(fits, "EVENT"),
    InputError,
    "0, SCI, SCI, EVENTS, ASCII",
  );
  assertEquals(error.remedy, "the nearest name is EVENTS");
  assertThrows(() => findHdu(fits, "SCI", { version: 3 }), InputError, "SCI, version 3");
  assertThrows(() => findHdu(fits, 5), InputError);
});

Deno.test("Hdu.column() finds by number and by name without regard to case", async () => {
  const table = findHdu(await open("fits/multi.fits"), "EVENTS");
  assertEquals(table.column("n"), table.column(2));
  const error = assertThrows(() => table.column("TT"), InputError, "it has T, N");
  assertEquals(error.remedy, "the nearest name is T");
  assertThrows(() => table.column(0), InputError);
  assertThrows(() => table.column(3), InputError);
});

Deno.test("Hdu.numbers() gives one row of arrays of varying length", async () => {
  const table = (await open("fits/table_varlen.fits")).hdus[1]!;
  const cells = cases.find(({ kind }) => kind === "table_varlen")!.hdus[1]!.columns![1]!.values;
  cells.forEach((cell, row) => {
    assertEquals([...table.numbers("VF", { row })], cell as number[]);
  });
  assertThrows(() => table.numbers("VF"), InputError, "read row by row");
  assertThrows(() => table.numbers("VF", { row: 4 }), InputError, "from 0 to 3");
});

Deno.test("Hdu.numbers() and Hdu.texts() refuse columns of another kind", async () => {
  const table = findHdu(await open("fits/table_types.fits"), "TYPES");
  for (const name of ["NAME", "CPLX"]) {
    assertThrows(() => table.numbers(name), InputError, "must hold numbers");
  }
  assertThrows(() => table.texts("INT"), InputError, "must hold strings");
  assertEquals(table.texts("NAME"), ["", "a", "line 12", "trailing", "  lead"]);
  assertEquals(table.numbers("LOGIC").length, 5);
  assertEquals(table.column("MATRIX").shape, [2, 3]);
});

Deno.test("Hdu.image() and Hdu.column() refuse an HDU of another kind", async () => {
  const [primary, image, , table] = (await open("fits/multi.fits")).hdus;
  assertThrows(() => primary!.image(), InputError, "holds no data");
  assertThrows(() => table!.image(), InputError, "an image is needed");
  assertThrows(() => image!.column(1), InputError, "a table is needed");
  assertEquals([image!.rows, image!.columns], [0, []]);
});
