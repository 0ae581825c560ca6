import { assert, assertAlmostEquals, assertEquals, assertThrows } from "@std/assert";
import { InputError } from "../../engine/errors.ts";
import {
  facePieces,
  fontFace,
  labelRuns,
  readFontMetrics,
  textWidth,
} from "../../engine/figures/mod.ts";

Deno.test("readFontMetrics() finds the Latin, Greek and signs that labels use", () => {
  for (const character of "AVkmsÅ°±×−½γλφχσβαπ0123456789") {
    assert(fontFace("regular").metrics.has(character.codePointAt(0)!), character);
  }
  assert(!fontFace("regular").metrics.has("☉".codePointAt(0)!));
  assert(fontFace("fallback").metrics.has("☉".codePointAt(0)!));
});

Deno.test("readFontMetrics() gives all figures one width, as tables need", () => {
  const widths = [..."0123456789"].map((digit) => fontFace("regular").metrics.width(digit));
  assertEquals(new Set(widths).size, 1);
});

Deno.test("readFontMetrics() says what is missing when the file is no font", () => {
  assertThrows(
    () => readFontMetrics(new Uint8Array(100)),
    InputError,
    'it must have a table "head"',
  );
  assertThrows(() => readFontMetrics(new Uint8Array(3)), InputError, 'it must have a table "head"');
});

Deno.test("facePieces() keeps a character that no face has in the run's own face", () => {
  assertEquals(facePieces({ text: "a\u{10FFFD}b" }), [{ text: "a\u{10FFFD}b", face: "regular" }]);
});

Deno.test("textWidth() sets scripts smaller than the line", () => {
  const line = textWidth(labelRuns("22"), 10);
  assertAlmostEquals(textWidth(labelRuns("2^{2}"), 10), line * 0.85, 1e-9);
});
