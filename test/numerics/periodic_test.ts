import { assert, assertAlmostEquals, assertEquals } from "@std/assert";
import { circularMean, phaseDifference, wrapPhase } from "@millrace/millrace/numerics";

Deno.test("wrapPhase() lands in [0, 1) when phases are negative, whole, tiny or huge", () => {
  for (const phase of [-3, -0.5, -1e-300, -1e-17, -0, 0, 0.999999, 1, 17.25, -1e9 - 0.5, 1e15]) {
    const wrapped = wrapPhase(phase);
    assert(wrapped >= 0 && wrapped < 1, `${phase} gave ${wrapped}`);
    assert(!Object.is(wrapped, -0));
  }
  assertEquals(wrapPhase(17.25), 0.25);
  assert(Number.isNaN(wrapPhase(NaN)));
});

Deno.test("phaseDifference() takes the short way when phases straddle zero", () => {
  assertAlmostEquals(phaseDifference(0.9, 0.1), -0.2, 1e-15);
  assertEquals(phaseDifference(0.5, 0), -0.5);
  assertEquals(phaseDifference(5.25, -3), 0.25);
});

Deno.test("circularMean() averages across zero and says when it means nothing", () => {
  assertAlmostEquals(phaseDifference(circularMean([0.99, 0.01]).phase, 0), 0, 1e-15);
  assertAlmostEquals(circularMean([0, 0.25, 0.5, 0.75]).length, 0, 1e-15);
  assertAlmostEquals(circularMean([0.3, 0.3]).length, 1, 1e-15);
  assertEquals(circularMean([]).length, 0);
});
