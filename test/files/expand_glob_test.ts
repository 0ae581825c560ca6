import { assertEquals, assertRejects } from "@std/assert";
import { join } from "@std/path";
import { InputError } from "@millrace/millrace/errors";
import { expandGlob } from "@millrace/millrace/files";
import { inFolder } from "./support.ts";

const FILES = [
  "night1/b10.fits",
  "night1/b2.fits",
  "night1/b2.txt",
  "night1/.hidden.fits",
  "night2/c1.fits",
  "night2/deep/d1.fits",
  "night[3]/e1.fits",
  "log.csv",
];

async function inTree(body: (expand: (pattern: string) => Promise<string[]>) => Promise<void>) {
  await inFolder(async (base) => {
    for (const file of FILES) {
      await Deno.mkdir(join(base, file, ".."), { recursive: true });
      await Deno.writeTextFile(join(base, file), "");
    }
    // A circle of links and a link to a file.
    await Deno.symlink(base, join(base, "night2", "up"));
    await Deno.symlink(join(base, "log.csv"), join(base, "night2", "c0.fits"));
    await Deno.symlink(join(base, "gone"), join(base, "night2", "c9.fits"));
    await body(async (pattern) =>
      (await expandGlob(pattern, { base })).map((path) => path.slice(base.length + 1))
    );
  });
}

Deno.test("expandGlob() finds and sorts", () =>
  inTree(async (expand) => {
    assertEquals(await expand("night1/*.fits"), ["night1/b10.fits", "night1/b2.fits"]);
    assertEquals(await expand("night?/*.fits"), [
      "night1/b10.fits",
      "night1/b2.fits",
      "night2/c0.fits",
      "night2/c1.fits",
    ]);
    assertEquals(await expand("night1/b[0-9].{fits,txt}"), ["night1/b2.fits", "night1/b2.txt"]);
    assertEquals(await expand("{log.csv,night2/deep/*}"), ["log.csv", "night2/deep/d1.fits"]);
    assertEquals(await expand("**/d*.fits"), ["night2/deep/d1.fits"]);
    assertEquals(await expand("night1/.h*"), ["night1/.hidden.fits"]);
  }));

Deno.test("expandGlob() takes a name to the letter when there is such a file", () =>
  inTree(async (expand) => {
    assertEquals(await expand("log.csv"), ["log.csv"]);
    assertEquals(await expand("night[3]/e1.fits"), ["night[3]/e1.fits"]);
  }));

Deno.test("expandGlob() takes absolute patterns and parents", () =>
  inTree(async (expand) => {
    await expand("log.csv");
    await inFolder(async (folder) => {
      await Deno.mkdir(join(folder, "sub"));
      await Deno.writeTextFile(join(folder, "a.txt"), "");
      assertEquals(await expandGlob(`${folder}/*.txt`), [join(folder, "a.txt")]);
      assertEquals(await expandGlob("../*.txt", { base: join(folder, "sub") }), [
        join(folder, "a.txt"),
      ]);
    });
  }));

Deno.test("expandGlob() names pattern, file and key when nothing matches", () =>
  inTree(async (expand) => {
    for (const pattern of ["night1/*.dat", "no/*.fits", "missing.fits", ""]) {
      await assertRejects(() => expand(pattern), InputError);
    }
    const error = await assertRejects(
      () => expandGlob("no/*.fits", { file: "star.toml", key: "exposures.files" }),
      InputError,
      "must match at least one file",
    );
    assertEquals([error.file, error.key, error.value], [
      "star.toml",
      "exposures.files",
      "no/*.fits",
    ]);
  }));
