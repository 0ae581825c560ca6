import { assertAlmostEquals, assertEquals } from "@std/assert";
import { randomStream } from "../../engine/numerics/mod.ts";
import { makeGrid, type Sampling } from "../../engine/trail/mod.ts";

function sampling(count: number, phase: (i: number) => number): Sampling {
  const pixels = 41;
  const rows = Array.from({ length: count }, (_, i) => i);
  return {
    count,
    phase: Float64Array.from(rows, phase),
    cycle: new Float64Array(count),
    phase_width: new Float64Array(count).fill(0.03),
    start: Uint32Array.from({ length: count + 1 }, (_, i) => pixels * i),
    velocity_kms: Float64Array.from(
      rows.flatMap((i) => Array.from({ length: pixels }, (_, k) => 50 * (k - 20) + 7 * i)),
    ),
    pixel_kms: new Float64Array(pixels * count).fill(50),
    profile_sigma_kms: new Float64Array(count).fill(40),
  };
}

const OPTIONS = { reach_kms: 800, step_kms: 35 };

Deno.test("makeGrid() says the errors and covariances that repeated noise shows, single and binned", () => {
  const where = sampling(6, (i) => i < 3 ? 0.1 + 0.01 * i : 0.6 + 0.01 * i);
  const error = new Float64Array(where.velocity_kms.length).fill(1).map((_, k) =>
    1 + 0.3 * Math.sin(k)
  );
  for (const phase_bins of [0, 4]) {
    const said = makeGrid(where, { flux: error.map(() => 0), error }, { ...OPTIONS, phase_bins });
    assertEquals(said.rows, phase_bins === 0 ? 6 : 2);
    const random = randomStream(3);
    const trials = 1000;
    const square = new Float64Array(said.flux.length);
    const next = new Float64Array(said.flux.length);
    for (let n = 0; n < trials; n++) {
      const { flux } = makeGrid(where, { flux: error.map((e) => e * random.normal()), error }, {
        ...OPTIONS,
        phase_bins,
      });
      flux.forEach((f, k) => {
        square[k]! += f * f / trials;
        next[k]! += f * (flux[k + 1] ?? 0) / trials;
      });
    }
    let [seen, told, shared, promised] = [0, 0, 0, 0];
    for (let r = 0; r < said.rows; r++) {
      for (let j = 0; j < said.columns - 1; j++) {
        const k = r * said.columns + j;
        seen += square[k]!;
        told += said.error[k]! ** 2;
        shared += next[k]!;
        promised += said.covariance_next[k]!;
      }
    }
    // Sums over 90 to 270 bins of variances from 1000 trials, each known to 4.5 %.
    assertAlmostEquals(seen / told, 1, 0.02);
    assertAlmostEquals(shared / promised, 1, 0.05);
  }
});

Deno.test("makeGrid() centres a bin on zero and leaves empty phase bins out", () => {
  const where = sampling(2, (i) => 0.1 + 0.5 * i);
  const flux = where.velocity_kms.map(() => 1);
  const grid = makeGrid(where, { flux, error: flux }, { ...OPTIONS, phase_bins: 10 });
  assertEquals([grid.rows, grid.columns % 2], [2, 1]);
  assertAlmostEquals(grid.first_kms + grid.step_kms * (grid.columns - 1) / 2, 0, 1e-9);
  assertEquals([...grid.phase].map((p) => Math.round(p * 100)), [15, 65]);
  // A bin of a tenth and exposures of 0.03: their variances add.
  assertAlmostEquals(grid.phase_width[0]!, Math.hypot(0.1, 0.03), 1e-12);
});

Deno.test("makeGrid() marks what no sample covers", () => {
  const where = sampling(1, () => 0.2);
  const flux = where.velocity_kms.map(() => 1);
  const error = where.velocity_kms.map((v) => v > 300 ? Infinity : 1);
  const grid = makeGrid(where, { flux, error }, OPTIONS);
  const last = grid.columns - 1;
  assertEquals([grid.error[last], Number.isNaN(grid.flux[last]!)], [Infinity, true]);
  assertEquals(grid.covariance_next[last], 0);
});
