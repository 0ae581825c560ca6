// Periods with one cycle more or less between nights.
import { assertAlmostEquals, assertEquals, assertLess } from "@std/assert";
import { cycleSlips, nightGaps } from "../../engine/campaign/studies/cycle_slips.ts";
import { scanParameter } from "../../engine/tomography/mod.ts";

function seen(orbits: readonly number[]) {
  return {
    cycle: Float64Array.from(orbits, Math.floor),
    phase: Float64Array.from(orbits, (o) => o - Math.floor(o)),
  };
}
const night = (from: number) => [0, 0.25, 0.5, 0.75, 1].map((o) => from + o);

Deno.test("nightGaps() gives each length of gap once, shortest first, whatever the order of exposures", () => {
  const orbits = [...night(0), ...night(10), ...night(20.3), ...night(320)];
  const found = nightGaps(seen(orbits.toReversed()), { period_d: 0.1 });
  assertEquals(found.length, 2);
  assertAlmostEquals(found[0]!, 10, 1e-9);
  assertAlmostEquals(found[1]!, 299.7, 1e-9);
  assertEquals(nightGaps(seen(night(0)), { period_d: 0.1 }), []);
  // Nights less than two cycles apart: another count of cycles is another period.
  assertEquals(nightGaps(seen([...night(0), ...night(1.9)]), { period_d: 0.9 }), []);
});

Deno.test("cycleSlips() finds both slipped periods where the curve has minima there", () => {
  // Cosine of the cycles over a gap of 1.02 d, whose middle is taken for 1 d, and a weak pull to 0.08 d.
  const objective = (p: number) => -5000 * Math.cos(2 * Math.PI * 1.02 / p) + 1e5 * (p - 0.08) ** 2;
  const period_d = 1.02 / 13;
  const slips = cycleSlips(1, {
    period_d,
    least: objective(period_d),
    scan: (values) => scanParameter(objective, values),
  });
  assertEquals(slips.map(({ cycles }) => cycles), [-1, 1]);
  slips.forEach(({ cycles, period_d: p, excess, gap_cycles }) => {
    assertAlmostEquals(p, 1.02 / (13 + cycles), 2e-5);
    assertLess(Math.abs(excess - (objective(p) - objective(period_d))), 0.5);
    assertAlmostEquals(gap_cycles, 1 / period_d, 1e-12);
  });
});
