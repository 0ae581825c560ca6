import { assert, assertEquals, assertRejects, assertStringIncludes } from "@std/assert";
import { join } from "@std/path";
import { InputError, WorkError } from "@millrace/millrace/errors";
import { checkReplaceable, readText, writeFileAtomically } from "@millrace/millrace/files";
import { inFolder, namesIn } from "./support.ts";

const OURS = '{"schema": "map/1", "version": "0.1.0"}';

Deno.test("writeFileAtomically() leaves the file and nothing else when all goes well", () =>
  inFolder(async (folder) => {
    const path = join(folder, "map.json");
    const data = new TextEncoder().encode(OURS);
    await writeFileAtomically(path, data);
    assertEquals(await readText(path), OURS);
    assertEquals(await namesIn(folder), ["map.json"]);
    assertEquals(data, new TextEncoder().encode(OURS));
  }));

Deno.test("writeFileAtomically() gives the file the usual permissions", () =>
  inFolder(async (folder) => {
    await Deno.writeTextFile(join(folder, "plain"), "");
    await writeFileAtomically(join(folder, "ours"), "");
    const mode = async (name: string) => (await Deno.stat(join(folder, name))).mode;
    assertEquals(await mode("ours"), await mode("plain"));
  }));

Deno.test("writeFileAtomically() replaces a file that Millrace wrote", () =>
  inFolder(async (folder) => {
    const path = join(folder, "map.json");
    await writeFileAtomically(path, OURS);
    await writeFileAtomically(path, "{}");
    assertEquals(await readText(path), "{}");
  }));

Deno.test("writeFileAtomically() refuses another's file unless told to overwrite", () =>
  inFolder(async (folder) => {
    const path = join(folder, "notes.txt");
    await Deno.writeTextFile(path, "mine");
    const error = await assertRejects(() => writeFileAtomically(path, "x"), InputError);
    assertEquals(error.file, path);
    assertStringIncludes(error.message, "a file that Millrace did not write");
    assertStringIncludes(error.remedy ?? "", "--overwrite");
    assertEquals(await readText(path), "mine");
    await writeFileAtomically(path, "x", { overwrite: true });
    assertEquals(await readText(path), "x");
  }));

Deno.test("writeFileAtomically() refuses a folder even when told to overwrite", () =>
  inFolder(async (folder) => {
    const path = join(folder, "map.json");
    await Deno.mkdir(path);
    await assertRejects(
      () => writeFileAtomically(path, "x", { overwrite: true }),
      InputError,
      "taken by a folder",
    );
  }));

Deno.test("writeFileAtomically() names file and reason when the folder is missing", () =>
  inFolder(async (folder) => {
    const path = join(folder, "no", "map.json");
    const error = await assertRejects(() => writeFileAtomically(path, "x"), WorkError);
    assertEquals(error.file, path);
    assertEquals(error.reason, "the folder does not exist");
  }));

Deno.test("writeFileAtomically() names the reason when a part of the path is a file", () =>
  inFolder(async (folder) => {
    await Deno.writeTextFile(join(folder, "file"), "");
    await assertRejects(
      () => writeFileAtomically(join(folder, "file", "map.json"), "x"),
      WorkError,
      "not a folder",
    );
  }));

// A full disc, as the operating system reports it, after the first 1000 bytes.
async function onFullDisc(body: () => Promise<void>): Promise<void> {
  const open = Deno.open;
  Deno.open = async (...args: Parameters<typeof Deno.open>) => {
    const file = await open(...args);
    let left = 1000;
    return new Proxy(file, {
      get(target, key) {
        if (key === "write") {
          return async (bytes: Uint8Array) => {
            if (left === 0) throw Object.assign(new Error("os error 28"), { code: "ENOSPC" });
            const written = await target.write(bytes.subarray(0, left));
            left -= written;
            return written;
          };
        }
        const value = Reflect.get(target, key);
        return typeof value === "function" ? value.bind(target) : value;
      },
    });
  };
  try {
    await body();
  } finally {
    Deno.open = open;
  }
}

Deno.test("writeFileAtomically() removes its temporary file when the disc is full", () =>
  inFolder(async (folder) => {
    const path = join(folder, "map.json");
    await writeFileAtomically(path, OURS);
    await onFullDisc(async () => {
      const error = await assertRejects(
        () => writeFileAtomically(path, new Uint8Array(5000)),
        WorkError,
      );
      assertEquals(error.reason, "the disc is full");
      assertEquals(error.file, path);
    });
    assertEquals(await namesIn(folder), ["map.json"]);
    assertEquals(await readText(path), OURS);
  }));

// A file system of 64 KiB: only root may mount one.
async function mountSmall(folder: string): Promise<boolean> {
  try {
    const args = ["-t", "tmpfs", "-o", "size=64k", "none", folder];
    return (await new Deno.Command("mount", { args, stderr: "null" }).output()).success;
  } catch {
    return false;
  }
}

async function canMount(): Promise<boolean> {
  const folder = await Deno.makeTempDir();
  try {
    if (!await mountSmall(folder)) return false;
    await new Deno.Command("umount", { args: [folder] }).output();
    return true;
  } finally {
    await Deno.remove(folder);
  }
}

Deno.test({
  name: "writeFileAtomically() keeps the old file when a real disc is full",
  ignore: !await canMount(),
  fn: () =>
    inFolder(async (folder) => {
      assert(await mountSmall(folder));
      try {
        const path = join(folder, "map.json");
        await writeFileAtomically(path, OURS);
        const error = await assertRejects(
          () => writeFileAtomically(path, new Uint8Array(200_000)),
          WorkError,
        );
        assertEquals(error.reason, "the disc is full");
        assertEquals(await namesIn(folder), ["map.json"]);
        assertEquals(await readText(path), OURS);
      } finally {
        await new Deno.Command("umount", { args: [folder] }).output();
      }
    }),
});

Deno.test("writeFileAtomically() says so when a temporary name is taken", () =>
  inFolder(async (folder) => {
    // The next hundred temporary names exist already, as after a process of the same id was killed.
    for (let k = 0; k < 100; k++) {
      await Deno.writeTextFile(join(folder, `.millrace-${Deno.pid}-${k}.part`), "old");
    }
    await writeFileAtomically(join(folder, "map.json"), OURS);
    assertEquals(await readText(join(folder, "map.json")), OURS);
    assertEquals((await namesIn(folder)).length, 101);
  }));

Deno.test("writeFileAtomically() writes through a symbolic link", () =>
  inFolder(async (folder) => {
    await writeFileAtomically(join(folder, "real.json"), OURS);
    await Deno.symlink(join(folder, "real.json"), join(folder, "link.json"));
    await writeFileAtomically(join(folder, "link.json"), "{}");
    assertEquals(await readText(join(folder, "real.json")), "{}");
    assert((await Deno.lstat(join(folder, "link.json"))).isSymlink);
  }));

Deno.test("writeFileAtomically() never shows a half-written file to a reader", () =>
  inFolder(async (folder) => {
    const path = join(folder, "map.json");
    const content = (k: number) =>
      JSON.stringify({ schema: "map/1", version: `${k}`.repeat(9999) });
    await writeFileAtomically(path, content(0));
    let writing = true;
    const reader = (async () => {
      let reads = 0;
      while (writing) {
        JSON.parse(await Deno.readTextFile(path));
        reads++;
      }
      return reads;
    })();
    for (let k = 1; k < 30; k++) await writeFileAtomically(path, content(k % 10));
    writing = false;
    assert(await reader > 0);
  }));

Deno.test("checkReplaceable() looks only at the head of a very large file", () =>
  inFolder(async (folder) => {
    const path = join(folder, "cube.fits");
    const file = await Deno.open(path, { write: true, create: true });
    const cards = ["SIMPLE  =                    T", "CREATOR = 'Millrace'", "END"];
    await file.write(new TextEncoder().encode(cards.map((card) => card.padEnd(80)).join("")));
    await file.truncate(2 ** 27);
    file.close();
    await checkReplaceable(path);
  }));

Deno.test("checkReplaceable() reads a JSON file of some megabytes whole", () =>
  inFolder(async (folder) => {
    const path = join(folder, "weigh.json");
    const document = { schema: "weigh/1", residuals: "0".repeat(3e6), version: "0.1.0" };
    await Deno.writeTextFile(path, JSON.stringify(document));
    await checkReplaceable(path);
  }));
