import { assert, assertEquals } from "@std/assert";
import { join } from "@std/path";
import { keepResults, KEPT_FOLDER } from "../../engine/campaign/batch/keep_results.ts";
import { inFolder, namesIn } from "../files/support.ts";

Deno.test("keepResults() gives back what was kept, bit for bit", () =>
  inFolder(async (folder) => {
    const value = {
      map: Float64Array.of(0.1, -0, NaN, Infinity, 5e-324),
      index: Uint32Array.of(1, 2 ** 32 - 1),
      list: [{ name: "Hβ", none: null, absent: undefined }],
    };
    await keepResults(folder, "a").keep("map", () => Promise.resolve(value));
    const again = await keepResults(folder, "a").keep<typeof value>(
      "map",
      () => Promise.reject(new Error("made again")),
    );
    assertEquals(again, value);
    assertEquals(
      new Uint8Array(again.map.slice().buffer),
      new Uint8Array(value.map.buffer),
    );
    assert(Object.is(again.map[1], -0));
  }));

Deno.test("keepResults() makes again what another key, a damaged file or a class stands for", () =>
  inFolder(async (folder) => {
    let made = 0;
    const make = () => Promise.resolve(++made);
    const ask = (key: string) => keepResults(folder, key).keep("n", make);
    assertEquals([await ask("a"), await ask("a"), await ask("b"), await ask("a")], [1, 1, 2, 3]);
    const [name] = await namesIn(join(folder, KEPT_FOLDER)) as [string];
    const path = join(folder, KEPT_FOLDER, name);
    const bytes = await Deno.readFile(path);
    bytes[bytes.length - 1]! ^= 1;
    await Deno.writeFile(path, bytes);
    assertEquals(await ask("a"), 4);
    await Deno.truncate(path, 40);
    assertEquals(await ask("a"), 5);

    class Matrix {}
    const keeper = keepResults(folder, "c");
    for (const value of [new Matrix(), { deep: [new Matrix()] }, { f: () => 0 }]) {
      await keeper.keep("class", () => Promise.resolve(value));
      assertEquals(await keeper.keep("class", () => Promise.resolve(7 as unknown)), 7);
      await keeper.clear();
    }
    assertEquals(await namesIn(folder), []);
    await keeper.clear();
  }));
