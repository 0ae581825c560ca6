import { assertEquals, assertRejects } from "@std/assert";
import { join } from "@std/path";
import { WorkError } from "@millrace/millrace/errors";
import { makeFolder } from "@millrace/millrace/files";
import { inFolder, namesIn } from "./support.ts";

Deno.test("makeFolder() makes those above, and leaves one that is there as it is", () =>
  inFolder(async (folder) => {
    await makeFolder(join(folder, "a", "b"));
    await Deno.writeTextFile(join(folder, "a", "b", "c"), "");
    await makeFolder(join(folder, "a", "b"));
    assertEquals(await namesIn(join(folder, "a", "b")), ["c"]);
  }));

Deno.test("makeFolder() says so when a file is in the way", () =>
  inFolder(async (folder) => {
    const path = join(folder, "a");
    await Deno.writeTextFile(path, "");
    await assertRejects(() => makeFolder(path), WorkError, "in the way");
    await assertRejects(() => makeFolder(join(path, "b")), WorkError, "not a folder");
  }));
