import { assert, assertEquals } from "@std/assert";
import { fuzz } from "./mutate.ts";

Deno.test("parseFits() throws nothing but InputError and never hangs when files are mutated", async () => {
  const { read, refused, faults, slowest } = await fuzz(1, 2000);
  assertEquals(faults, []);
  assertEquals(read + refused, 2000);
  // Mutations that always or never broke the file would test little.
  assert(read > 200 && refused > 200, `${read} read, ${refused} refused`);
  // Not a measure of speed but of hanging: an input takes well under a millisecond. One that was held
  // up by something else on the machine gets a second chance.
  const again = slowest.ms < 1000 ? slowest : (await fuzz(slowest.index, 1)).slowest;
  assert(again.ms < 1000, `input ${again.index} took ${again.ms} ms`);
});
