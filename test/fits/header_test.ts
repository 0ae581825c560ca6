import { assertEquals, assertThrows } from "@std/assert";
import { InputError } from "@millrace/millrace/errors";
import { parseFits } from "@millrace/millrace/fits";
import { primary } from "./build.ts";

const read = (...cards: string[]) => parseFits(primary(...cards), { file: "a.fits" });
const headerOf = (...cards: string[]) => read(...cards).hdus[0]!.header;

// FITS Standard 4.0, section 4: the value each card stands for, and its comment.
const CARDS: [card: string, keyword: string, value: unknown, comment: string][] = [
  ["A       = 'it''s'             / note", "A", "it's", "note"],
  ["A       = ''''", "A", "'", ""],
  ["A       = ''", "A", "", ""],
  ["A       = '  x  '", "A", "  x", ""],
  ["A       = 'a / b'/c", "A", "a / b", "c"],
  ["A       = '&'", "A", "&", ""],
  ["A       =                    T", "A", true, ""],
  ["A       = F / no", "A", false, "no"],
  ["A       = +007", "A", 7, ""],
  ["A       = -0", "A", -0, ""],
  ["A       = 9007199254740992", "A", 9007199254740992n, ""],
  ["A       = -9223372036854775808", "A", -9223372036854775808n, ""],
  ["A       = 1.", "A", 1, ""],
  ["A       = .5", "A", 0.5, ""],
  ["A       = 1E5", "A", 1e5, ""],
  ["A       = -1.5d-3/x", "A", -1.5e-3, "x"],
  ["A       = (1, -2.5E0) / z", "A", { re: 1, im: -2.5 }, "z"],
  ["A       =", "A", null, ""],
  ["A       =   / only a comment", "A", null, "only a comment"],
  ["A       =5", "A", 5, ""],
  ["a-b_9   = 5", "A-B_9", 5, ""],
  ["HIERARCH eso  DET.X = 'y' / z", "ESO DET.X", "y", "z"],
  ["HIERARCH X=1", "X", 1, ""],
];

for (const [text, keyword, value, comment] of CARDS) {
  Deno.test(`FitsHeader.card() is ${JSON.stringify(String(value))} when the card is ${text}`, () => {
    const card = headerOf(text).card(keyword);
    assertEquals([card?.value, card?.comment, card?.problem], [value, comment, undefined]);
  });
}

for (
  const value of [
    "2020-01-01",
    "'open",
    "(1,2",
    "(1)",
    "1 2",
    "1e999",
    "NaN",
    "t",
    "0x10",
    "1,5",
    "'",
  ]
) {
  Deno.test(`FitsHeader.card() has a problem when the value is ${value}`, () => {
    const { hdus, warnings } = read("OK      = 1", `BAD     = ${value}`);
    const { header } = hdus[0]!;
    assertEquals(header.number("OK"), 1);
    assertEquals(header.card("BAD")?.value, null);
    assertEquals(warnings.map(({ code }) => code), ["fits-card-unreadable"]);
    const error = assertThrows(() => header.number("BAD"), InputError, "HDU 0, byte 320");
    assertEquals([error.file, error.key, error.value], ["a.fits", "BAD", value]);
    // A text is given as it is written: a date without quotes is still a date.
    assertEquals(header.string("BAD"), value);
  });
}

Deno.test("parseFits() sums up many unreadable cards", () => {
  const { warnings } = read(...Array.from({ length: 30 }, (_, k) => `K${k}`.padEnd(8) + "= ?"));
  assertEquals(warnings.length, 11);
  assertEquals(warnings[10]?.text, "HDU 0: 20 more values cannot be read");
});

Deno.test("FitsHeader joins continued strings, blanks at the seams included", () => {
  const header = headerOf(
    "A       = 'one &'             / first",
    "CONTINUE  '  two&'",
    "CONTINUE  '' / last",
    "B       = 'ends with &'",
    "C       = 'no ampersand'",
    "CONTINUE  'lost'",
    "D       = 'a&'",
    "COMMENT between",
    "CONTINUE  'lost'",
  );
  assertEquals(header.string("A"), "one   two");
  assertEquals(header.comment("A"), "first last");
  assertEquals(header.string("B"), "ends with &");
  assertEquals(header.string("C"), "no ampersand");
  assertEquals(header.string("D"), "a&");
});

Deno.test("FitsHeader keeps duplicate keys, the first one counting", () => {
  const header = headerOf("A       = 1", "A       = 2", "HISTORY x", "HISTORY y = 2");
  assertEquals(header.number("a"), 1);
  assertEquals(header.all("A"), [1, 2]);
  assertEquals(header.all("HISTORY"), [" x", " y = 2"].map((text) => text.slice(1)));
  assertEquals(header.all("NONE"), []);
});

Deno.test("FitsHeader.number() reads numbers in quotes and refuses other texts", () => {
  const header = headerOf("A       = ' 1.5D2 '", "B       = '12h'", "C       = T", "D       = ''");
  assertEquals(header.number("A"), 150);
  for (const key of ["B", "C", "D"]) {
    assertThrows(() => header.number(key), InputError, "readable as a number");
  }
  assertEquals(header.number("MISSING"), undefined);
});

Deno.test("FitsHeader gives undefined for a key without value, and knows that it is there", () => {
  const header = headerOf("A       =");
  assertEquals(
    [header.has("A"), header.number("A"), header.string("A"), header.boolean("A")],
    [true, undefined, undefined, undefined],
  );
  assertEquals(header.has("B"), false);
});

Deno.test("FitsHeader.boolean() refuses what is neither T nor F", () => {
  const header = headerOf("A       = 1");
  assertThrows(() => header.boolean("A"), InputError, "readable as T or F");
});

Deno.test("FitsHeader.string() gives a value without quotes as it is written", () => {
  assertEquals(headerOf("OBJECT  = 0417").string("OBJECT"), "0417");
});

Deno.test("FitsHeader finds HIERARCH keys with and without that word", () => {
  const header = headerOf("HIERARCH ABC DET OUT1 GAIN = 1.25");
  assertEquals(header.number("HIERARCH ABC  DET OUT1 GAIN"), 1.25);
  assertEquals(header.number("abc det out1 gain"), 1.25);
});

Deno.test("parseFits() warns of letters that are not ASCII and reads on", () => {
  const { hdus, warnings } = read("OBJECT  = 'caf\xe9'");
  assertEquals(hdus[0]!.header.string("OBJECT"), "caf\xe9");
  assertEquals(warnings.map(({ code }) => code), ["fits-header-not-ascii"]);
});
