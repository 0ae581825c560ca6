import { assertEquals, assertRejects, assertStringIncludes } from "@std/assert";
import { gzipSync } from "node:zlib";
import { InputError } from "@millrace/millrace/errors";
import { readBytes, readText } from "@millrace/millrace/files";
import { inFolder } from "./support.ts";

const utf8 = (text: string) => new TextEncoder().encode(text);

Deno.test("readBytes() names the file and a remedy when it is missing", async () => {
  const error = await assertRejects(() => readBytes("no/such.fits"), InputError);
  assertEquals(error.file, "no/such.fits");
  assertStringIncludes(error.message, "the file must exist");
  assertStringIncludes(error.remedy ?? "", "check the name");
});

Deno.test("readBytes() refuses a folder", () =>
  inFolder(async (folder) => {
    await assertRejects(() => readBytes(folder), InputError, "this is a folder");
  }));

Deno.test("readBytes() refuses a file larger than the limit without reading it", () =>
  inFolder(async (folder) => {
    await Deno.writeFile(`${folder}/a`, new Uint8Array(11));
    await assertRejects(() => readBytes(`${folder}/a`, { max_bytes: 10 }), InputError, "11 bytes");
    assertEquals((await readBytes(`${folder}/a`, { max_bytes: 11 })).length, 11);
  }));

Deno.test("readBytes() decompresses by content and not by name", () =>
  inFolder(async (folder) => {
    await Deno.writeFile(`${folder}/a.fits`, gzipSync(utf8("wheel")));
    await Deno.writeFile(`${folder}/b.gz`, utf8("wheel"));
    assertEquals(await readBytes(`${folder}/a.fits`), utf8("wheel"));
    assertEquals(await readBytes(`${folder}/b.gz`), utf8("wheel"));
    const raw = await readBytes(`${folder}/a.fits`, { decompress: false });
    assertEquals(raw[0], 0x1f);
  }));

Deno.test("readBytes() holds the limit for what comes out of gzip", () =>
  inFolder(async (folder) => {
    await Deno.writeFile(`${folder}/bomb.gz`, gzipSync(new Uint8Array(1_000_000)));
    const error = await assertRejects(
      () => readBytes(`${folder}/bomb.gz`, { max_bytes: 100_000 }),
      InputError,
      "no larger than the limit",
    );
    assertEquals(error.file, `${folder}/bomb.gz`);
  }));

Deno.test("readText() drops the byte order mark and refuses what is not UTF-8", () =>
  inFolder(async (folder) => {
    await Deno.writeFile(`${folder}/a`, new Uint8Array([0xef, 0xbb, 0xbf, 0x41]));
    assertEquals(await readText(`${folder}/a`), "A");
    await Deno.writeFile(`${folder}/b`, new Uint8Array([0x41, 0xe9, 0x42]));
    await assertRejects(() => readText(`${folder}/b`), InputError, "encoded as UTF-8");
  }));
