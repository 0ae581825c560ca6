import { assertEquals, assertThrows } from "@std/assert";
import { gzipSync } from "node:zlib";
import { InputError } from "@millrace/millrace/errors";
import { gunzip, isGzip } from "@millrace/millrace/files";

const utf8 = (text: string) => new TextEncoder().encode(text);
const joined = (...parts: Uint8Array[]) => new Uint8Array(parts.flatMap((part) => [...part]));
const zipped = gzipSync(utf8("wheel ".repeat(50)));

Deno.test("gunzip() reads several members in a row, and zeros after them", () => {
  const two = joined(zipped, gzipSync(utf8("race")));
  const expected = utf8("wheel ".repeat(50) + "race");
  assertEquals(gunzip(two), expected);
  assertEquals(gunzip(joined(two, new Uint8Array(700))), expected);
});

Deno.test("gunzip() refuses a stream that is cut off at any place", () => {
  for (let length = 3; length < zipped.length; length++) {
    assertThrows(() => gunzip(zipped.subarray(0, length)), InputError, "must be whole");
  }
});

Deno.test("gunzip() refuses a stream whose check value is wrong", () => {
  const damaged = joined(zipped);
  damaged[damaged.length - 6]! ^= 1;
  const error = assertThrows(() => gunzip(damaged, { file: "a.fits.gz" }), InputError);
  assertEquals(error.file, "a.fits.gz");
});

Deno.test("gunzip() stops at the size limit, over all members together", () => {
  const members = joined(zipped, zipped, zipped);
  assertEquals(gunzip(members, { max_bytes: 900 }).length, 900);
  assertThrows(() => gunzip(members, { max_bytes: 899 }), InputError, "no larger than the limit");
});

Deno.test("isGzip() is false when there are fewer than three bytes", () => {
  assertEquals(isGzip(new Uint8Array([0x1f, 0x8b])), false);
});
