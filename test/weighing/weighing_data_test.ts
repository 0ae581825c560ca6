import { InputError } from "@millrace/millrace/errors";
import { weighingData } from "@millrace/millrace/weighing";
import { assertAlmostEquals, assertEquals, assertThrows } from "@std/assert";
import { quick, spotted } from "./made.ts";

const trail = quick(spotted(0), { exposures: 6 });

Deno.test("weighingData() leaves masked samples and empty exposures out when there are some", () => {
  const error = trail.error.slice();
  const { start } = trail.sampling;
  for (let n = start[2]!; n < start[3]!; n++) error[n] = Infinity;
  error[0] = Infinity;
  const data = weighingData({ ...trail, error });
  assertEquals(data.sampling.count, 5);
  assertEquals(data.flux.length, start[6]! - (start[3]! - start[2]!) - 1);
  assertEquals(data.sampling.phase[2], trail.sampling.phase[3]);
  assertEquals(data.flux[0], trail.flux[1]);
});

Deno.test("weighingData() cuts the window when a reach is given", () => {
  const data = weighingData(trail, { reach_kms: 1000 });
  assertEquals(Math.max(...data.sampling.velocity_kms), 1000);
});

Deno.test("weighingData() turns a line in absorption over, and says so", () => {
  const flux = trail.flux.map((value) => -0.3 * value);
  const data = weighingData({ ...trail, flux });
  assertEquals(data.sign, -1);
  assertAlmostEquals(data.flux[10]!, 0.3 * trail.flux[10]!, 1e-15);
});

Deno.test("weighingData() refuses when hardly anything is left", () => {
  const error = trail.error.map((value, n) => n < trail.sampling.start[2]! ? value : Infinity);
  assertThrows(() => weighingData({ ...trail, error }), InputError, "at least three exposures");
});

Deno.test("weighingData() does not change its argument", () => {
  const before = structuredClone(trail);
  weighingData(trail, { reach_kms: 800 });
  assertEquals(trail, before);
});
