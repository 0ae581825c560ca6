import { InputError } from "@millrace/millrace/errors";
import { kolmogorovSmirnov } from "@millrace/millrace/numerics";
import {
  calibrate,
  fitHypothesis,
  fitPair,
  joinNullTables,
  noiseBank,
  nullKey,
  prepareProblem,
  runNullTable,
  type SimulateTrailOptions,
  trialJob,
  weighingData,
} from "@millrace/millrace/weighing";
import {
  assert,
  assertEquals,
  assertGreater,
  assertLess,
  assertNotEquals,
  assertRejects,
  assertThrows,
} from "@std/assert";
import { runTrials } from "../../engine/weighing/pair_trials.ts";
import { binary, quick, spotted, WIDTH } from "./made.ts";
import type { Model } from "@millrace/millrace/synthesis";

const disc = ["disc"] as const;
const spot = ["disc", "spot"] as const;

function jobOf(model: Model, options: Partial<SimulateTrailOptions>, seed = 1) {
  const data = weighingData(quick(model, options));
  const { problem, richest, line_scale } = prepareProblem(data, { binary }, { sets: [disc, spot] });
  const bank = noiseBank(problem, richest, { line_scale });
  const fit = fitHypothesis(problem, { hypothesis: disc });
  const job = trialJob(problem, { fit, second: spot, bank, seed });
  return { job, observed: fitPair(problem, job).statistic };
}

Deno.test("runNullTable() gives the same bytes on two workers, and in parts that are joined", async () => {
  const { job } = jobOf(spotted(0), { seed: 1, exposures: 16, pixel_kms: 100 });
  const whole = await runNullTable(job, { from: 0, to: 24 });
  const shared = await runNullTable(job, { from: 0, to: 24, workers: 2 });
  assertEquals(shared, whole);
  const late = await runNullTable(job, { from: 13, to: 24 });
  const early = await runNullTable(job, { from: 0, to: 13 });
  assertEquals(joinNullTables([late, early]), whole);
  assertEquals(new Set(whole.statistics).size, 24);
});

Deno.test("joinNullTables() stops at a gap and refuses tables of another configuration", () => {
  const table = (first: number, ...values: number[]) => ({
    key: "k",
    first,
    statistics: Float64Array.from(values),
  });
  assertEquals(joinNullTables([table(0, 1, 2), table(1, 2, 3), table(9, 9)]), table(0, 1, 2, 3));
  assertThrows(
    () => joinNullTables([table(0, 1), { ...table(1, 2), key: "other" }]),
    InputError,
    "all of one configuration",
  );
});

Deno.test("calibrate() does not run trials again that a kept table holds", async () => {
  const { job, observed } = jobOf(spotted(0), { seed: 2 });
  const first = await calibrate(job, { observed, trials: 12 });
  let ran = 0;
  const second = await calibrate(job, {
    observed,
    trials: 12,
    tables: [first.table],
    progress: () => ran++,
  });
  assertEquals(second, first);
  assertEquals(ran, 0);
  const more = await calibrate(job, { observed, trials: 14, tables: [first.table] });
  assertEquals(more.table.statistics.subarray(0, 12), first.table.statistics);
  // Another seed, another configuration.
  const other = jobOf(spotted(0), { seed: 2 }, 9).job;
  assertNotEquals((await runNullTable(other, { from: 0, to: 1 })).key, first.table.key);
});

Deno.test("calibrate() counts as it says, and ends early when ten trials gained as much", async () => {
  const { job } = jobOf(spotted(0), { seed: 3, exposures: 16, pixel_kms: 100 });
  const never = await calibrate(job, { observed: 1e9, trials: 20 });
  assertEquals([never.exceeding, never.value], [0, 1 / 21]);
  assertEquals(never.error, Math.sqrt(never.value * (1 - never.value) / 21));
  // A kept table of a hundred trials, all of which gained as much.
  const tables = [{ key: nullKey(job), first: 0, statistics: new Float64Array(100) }];
  const always = await calibrate(job, { observed: -1, trials: 150, tables });
  assertEquals(always.trials, 100);
  assertEquals(always.stopping_points, [100, 150]);
  assertEquals(always.value, 1);
  await assertRejects(() => calibrate(job, { observed: 1, trials: 0 }), InputError, "weigh.trials");
});

Deno.test("calibrate() can be ended from outside", async () => {
  const { job } = jobOf(spotted(0), { seed: 3, exposures: 16, pixel_kms: 100 });
  const stop = new AbortController();
  await assertRejects(() =>
    calibrate(job, {
      observed: 1,
      trials: 90,
      signal: stop.signal,
      progress: () => stop.abort(),
    })
  );
});

Deno.test("calibrate() finds a 3 % spot and not one that is absent", () => {
  const real = jobOf(spotted(0.03), { seed: 5, flicker_rms: 0.05 });
  assertGreater(real.observed, 3 * Math.max(...runTrials(real.job, { from: 0, to: 20 })));
});

// The short form; the long one is test/bench/weighing_null.ts. Seeds 1 to 20: half of the discs are
// round and quiet, half asymmetric and flickering, all with errors of the fitted continuum.
Deno.test("calibrate() gives uniform rates when there is no spot", () => {
  const rates: number[] = [];
  for (let seed = 1; seed <= 20; seed++) {
    const wild = seed % 2 === 0;
    const model: Model = {
      parts: ["disc"],
      disc: {
        equivalent_width_kms: WIDTH,
        one_armed_amplitude: wild ? 0.3 : 0,
        one_armed_deg: (40 * seed) % 360,
        two_armed_amplitude: wild ? 0.2 : 0,
        two_armed_deg: (77 * seed) % 360,
      },
    };
    const flicker_rms = wild ? 0.06 : 0;
    const options = { seed, flicker_rms, continuum_error: 0.01, exposures: 20, pixel_kms: 80 };
    const { job, observed } = jobOf(model, options, seed);
    const trials = runTrials(job, { from: 0, to: 9 });
    // The middle of a rank, which is one of ten.
    rates.push((trials.filter((gain) => gain >= observed).length + 0.5) / 10);
  }
  // Kolmogorov–Smirnov: a true null fails this once in a hundred sets of seeds.
  assertGreater(kolmogorovSmirnov(rates).probability, 0.01);
  // One rank in ten: 7 or more of 20 come by chance in 0.2 %.
  assertLess(rates.filter((rate) => rate <= 0.05).length, 7);
  assert(rates.some((rate) => rate > 0.5));
});
