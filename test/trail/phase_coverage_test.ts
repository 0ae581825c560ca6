import { assertAlmostEquals, assertEquals } from "@std/assert";
import { phaseCoverage } from "../../engine/trail/mod.ts";

const at = (phases: number[], width: number) => ({
  phase: Float64Array.from(phases),
  phase_width: new Float64Array(phases.length).fill(width),
});

Deno.test("phaseCoverage() counts overlapping exposures once and joins across phase zero", () => {
  const coverage = phaseCoverage(at([0.98, 0.02, 0.03], 0.1));
  assertAlmostEquals(coverage.covered_fraction, 0.15, 1e-12);
  assertAlmostEquals(coverage.largest_gap, 0.85, 1e-12);
  assertAlmostEquals(coverage.largest_gap_from!, 0.08, 1e-12);
});

Deno.test("phaseCoverage() fills half an orbit's gap from the other half", () => {
  const coverage = phaseCoverage(at([0.05, 0.15, 0.75, 0.85, 0.95], 0.1));
  assertAlmostEquals(coverage.covered_half_fraction, 1, 1e-9);
  assertAlmostEquals(coverage.covered_fraction, 0.5, 1e-9);
  assertEquals(coverage.largest_half_gap < 1e-9, true);
});

Deno.test("phaseCoverage() says nothing is covered without exposures, and all by one of a whole orbit", () => {
  assertEquals(phaseCoverage(at([], 0)).largest_gap, 1);
  const whole = phaseCoverage(at([0.3], 1.2));
  assertEquals([whole.covered_fraction, whole.largest_gap, whole.largest_gap_from], [1, 0, null]);
});
