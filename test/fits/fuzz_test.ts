import { assert, assertEquals } from "@std/assert";
import { fuzz } from "./mutate.ts";

Deno.test("parseFits() throws nothing but InputError and never hangs when files are mutated", async () => {
  const { read, refused, faults, slowest } = await fuzz(1, 2000);
  assertEquals(faults, []);
  assertEquals(read + refused, 2000);
  // Mutations that always or never broke the file would test little.
  assert(read > 200 && refused > 200, `${read} read, ${refused} refused`);
  // Not a measure of speed but of hanging: an input takes well under a millisecond.
  assert(slowest.ms < 1000, `input ${slowest.index} took ${slowest.ms} ms`);
});
