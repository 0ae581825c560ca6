import { assert, assertEquals, assertRejects, assertStringIncludes } from "@std/assert";
import { join } from "@std/path";
import { WorkError } from "@millrace/millrace/errors";
import { withLock } from "@millrace/millrace/files";
import { inFolder, namesIn } from "./support.ts";

Deno.test("withLock() gives the result and removes the file", () =>
  inFolder(async (folder) => {
    const path = join(folder, ".lock");
    assertEquals(await withLock(path, () => Promise.resolve(7)), 7);
    assertEquals(await namesIn(folder), []);
  }));

Deno.test("withLock() removes the file when the action fails", () =>
  inFolder(async (folder) => {
    const path = join(folder, ".lock");
    await assertRejects(() => withLock(path, () => Promise.reject(new Error("no"))), Error, "no");
    assertEquals(await namesIn(folder), []);
    assertEquals(await withLock(path, () => 1), 1);
  }));

Deno.test("withLock() tells the second holder who the first is", () =>
  inFolder(async (folder) => {
    const path = join(folder, ".lock");
    await withLock(path, async () => {
      const error = await assertRejects(() => withLock(path, () => 0), WorkError);
      assertStringIncludes(error.reason, `millrace map star.toml (process ${Deno.pid})`);
      assertEquals(error.file, path);
    }, { owner: "millrace map star.toml" });
  }));

Deno.test("withLock() says why when the lock file cannot be made", () =>
  inFolder(async (folder) => {
    await assertRejects(
      () => withLock(join(folder, "no", ".lock"), () => 0),
      WorkError,
      "the folder does not exist",
    );
  }));

Deno.test("withLock() takes over a file left behind and tells whose it was", () =>
  inFolder(async (folder) => {
    const path = join(folder, ".lock");
    await Deno.writeTextFile(path, "millrace weigh star.toml (process 4711)\n");
    const told: string[] = [];
    await withLock(path, () => 0, { onStale: (owner) => told.push(owner) });
    assertEquals(told, ["millrace weigh star.toml (process 4711)"]);
    assertEquals(await namesIn(folder), []);
  }));

Deno.test("withLock() is held against another process, and free once that is killed", () =>
  inFolder(async (folder) => {
    const path = join(folder, ".lock");
    const script = join(folder, "hold.ts");
    const room = new URL("../../engine/files/mod.ts", import.meta.url).href;
    await Deno.writeTextFile(
      script,
      `import { withLock } from ${JSON.stringify(room)};
await withLock(${JSON.stringify(path)}, async () => {
  console.log("held");
  await new Promise((resolve) => setTimeout(resolve, 60_000));
}, { owner: "the child" });`,
    );
    const config = new URL("../../deno.json", import.meta.url).pathname;
    const child = new Deno.Command(Deno.execPath(), {
      args: ["run", "--no-prompt", "--allow-read", "--allow-write", "--config", config, script],
      stdout: "piped",
      stderr: "null",
    }).spawn();
    const reader = child.stdout.getReader();
    await reader.read();
    await assertRejects(() => withLock(path, () => 0), WorkError, "the child");
    child.kill("SIGKILL");
    await child.status;
    await reader.cancel();
    const told: string[] = [];
    await withLock(path, () => 0, { onStale: (owner) => told.push(owner) });
    assert(told[0]?.startsWith("the child"));
  }));

Deno.test("withLock() lets one at a time through when many come at once", () =>
  inFolder(async (folder) => {
    const path = join(folder, ".lock");
    let inside = 0;
    let done = 0;
    const attempt = async (): Promise<void> => {
      try {
        await withLock(path, async () => {
          assertEquals(++inside, 1);
          await new Promise((resolve) => setTimeout(resolve, 1));
          inside--;
          done++;
        });
      } catch (error) {
        assert(error instanceof WorkError, String(error));
        await new Promise((resolve) => setTimeout(resolve, 1));
        return attempt();
      }
    };
    await Promise.all(Array.from({ length: 20 }, attempt));
    assertEquals(done, 20);
  }));
