import { assert, assertAlmostEquals, assertEquals, assertThrows } from "@std/assert";
import { InputError } from "@millrace/millrace/errors";
import { randomStream } from "@millrace/millrace/numerics";
import {
  falseAlarm,
  falseAlarmByResampling,
  fitSinusoid,
  lombScargle,
  phaseDispersion,
  searchPeriod,
  spectralWindow,
  type TimeSeries,
} from "@millrace/millrace/orbit";
import { casesOf } from "./reference.ts";

// reference/periodogram.json: astropy LombScargle, direct least squares and PDM (numpy);
// Zechmeister & Kürster 2009, Stellingwerf 1978, Baluev 2008
const cases = casesOf("periodogram").map((c) => ({
  ...c,
  series: {
    time: Float64Array.from(c.t),
    value: Float64Array.from(c.y),
    error: Float64Array.from(c.dy),
  } as TimeSeries,
  // deno-lint-ignore no-explicit-any
  frequency: Float64Array.from(c.rows, (row: any) => row.f),
}));

Deno.test("lombScargle() and fitSinusoid() give the reference powers and coefficients", () => {
  for (const { id, series, frequency, rows, chi2_0 } of cases) {
    const one = lombScargle(series, frequency);
    const two = lombScargle(series, frequency, { harmonics: 2 });
    assertAlmostEquals(one.chi_square_constant / chi2_0, 1, 1e-8, id);
    // deno-lint-ignore no-explicit-any
    rows.forEach((row: any, k: number) => {
      const where = `${id} f ${row.f}`;
      assertAlmostEquals(one.power[k]!, row.power, 1e-8, where);
      assertAlmostEquals(two.power[k]!, row.power_2_harmonics, 1e-8, where);
      const { power, coefficients } = fitSinusoid(series, row.f);
      assertAlmostEquals(power * one.chi_square_constant / row.chi2_reduction, 1, 1e-8, where);
      const amplitude = Math.hypot(row.fit_c_A_B[1], row.fit_c_A_B[2]);
      coefficients.forEach((value, j) =>
        assertAlmostEquals(value, row.fit_c_A_B[j], 1e-8 * Math.max(amplitude, 1), where)
      );
    });
  }
});

Deno.test("lombScargle() on a uniform grid equals the fit at each frequency", () => {
  for (const { id, series } of cases) {
    const frequency = Float64Array.from({ length: 1500 }, (_, k) => 0.05 + 0.017 * k);
    const { power } = lombScargle(series, frequency);
    for (let k = 0; k < frequency.length; k += 37) {
      assertAlmostEquals(power[k]!, fitSinusoid(series, frequency[k]!).power, 1e-8, id);
    }
  }
});

Deno.test("phaseDispersion() gives the reference thetas", () => {
  for (const { id, series, frequency, rows } of cases) {
    for (const [bins, covers] of [[5, 2], [10, 1], [8, 3]] as const) {
      const theta = phaseDispersion(series, frequency, { bins, covers });
      // deno-lint-ignore no-explicit-any
      rows.forEach((row: any, k: number) =>
        assertAlmostEquals(theta[k]!, row[`pdm_theta_${bins}_${covers}`], 1e-10, `${id} ${row.f}`)
      );
    }
  }
});

Deno.test("falseAlarm() gives the reference probabilities", () => {
  for (const c of cases) {
    // The library that made the number moves the highest frequency onto its own grid (spacing
    // 1/(5 span), from half a step) before it applies the formula: the same is done here.
    const step = 1 / (5 * (Math.max(...c.t) - Math.min(...c.t)));
    const maximum_frequency = step / 2 + step * Math.round(c.fap_maximum_frequency / step - 0.5);
    const { single, searched } = falseAlarm(c.highest_listed_power, c.series, {
      maximum_frequency,
    });
    const relative = (value: number, expected: number) =>
      assertAlmostEquals(value, expected, 1e-6 * Math.abs(expected) + 1e-300, c.id);
    relative(single, c.fap_single_at_highest);
    relative(searched, c.fap_baluev_at_highest);
  }
});

Deno.test("false alarms by formula and by resampling agree on noise", () => {
  const { series } = cases.find((c) => c.kind === "noise")!;
  const frequency = Float64Array.from({ length: 400 }, (_, k) => 0.0225 * (k + 1));
  const power = 0.4;
  const formula = falseAlarm(power, series, { maximum_frequency: 9 }).searched;
  const dealt = falseAlarmByResampling(power, series, {
    frequency,
    random: randomStream(5),
    trials: 400,
  });
  // 400 trials know a probability p to √(p/400); the formula is an upper bound, good where small.
  assert(
    Math.abs(dealt - formula) < 4 * Math.sqrt(formula / 400) + 0.2 * formula,
    `${dealt} ${formula}`,
  );
});

Deno.test("searchPeriod() finds the period, its aliases and their beats", () => {
  const { series } = cases.find((c) => c.kind === "nightly")!;
  const found = searchPeriod(series, {
    period_range_d: [0.04, 0.5],
    random: randomStream(1),
    trials: 99,
  });
  const [best, ...others] = found.candidates;
  assertAlmostEquals(best!.frequency_per_d, 13.42, 0.01); // put in by reference/gen_periodogram.py
  assert(others.some((one) => Math.abs(Math.abs(one.beat_per_d) - 1) < 0.1), "one cycle a day");
  assertEquals(best!.delta_chi_square, 0);
  others.forEach((one) => assert(one.delta_chi_square >= 0));
  // One cycle a day is a peak of the window of nightly data.
  const window = spectralWindow(series.time, Float64Array.of(0, 0.5, 1));
  assertAlmostEquals(window[0]!, 1, 1e-12);
  assert(window[2]! > 0.5 && window[1]! < 0.3);
  assertEquals(found.false_alarm_resampled, 0.01);
  assert(found.false_alarm.searched < 1e-3);
});

Deno.test("searchPeriod() says when the count of cycles is open", () => {
  // Two short nights ten days apart: the peaks 0.1 per day apart are equally good.
  const random = randomStream(4);
  const time = Float64Array.from({ length: 40 }, (_, k) => 0.004 * (k % 20) + (k < 20 ? 0 : 10));
  const value = time.map((t) => 100 * Math.sin(2 * Math.PI * t / 0.083) + 30 * random.normal());
  const found = searchPeriod({ time, value, error: time.map(() => 30) }, {
    period_range_d: [0.06, 0.12],
  });
  assert(found.ambiguous);
  assertAlmostEquals(Math.abs(found.candidates[1]!.cycles_over_span), 1, 0.15);
});

Deno.test("searchPeriod() refuses empty ranges and too few velocities", () => {
  const { series } = cases[0]!;
  for (const range of [[0.3, 0.05], [0.1, 0.1], [0, 1], [NaN, 1], [0.1, Infinity]] as const) {
    const error = assertThrows(() => searchPeriod(series, { period_range_d: range }), InputError);
    assertEquals(error.key, "period_range_d");
  }
  const few = {
    time: series.time.slice(0, 4),
    value: series.value.slice(0, 4),
    error: series.error.slice(0, 4),
  };
  assertThrows(() => searchPeriod(few, { period_range_d: [0.1, 1] }), InputError, "at least 5");
  const broken = { ...series, error: series.error.map(() => 0) };
  assertThrows(() => searchPeriod(broken, { period_range_d: [0.1, 1] }), InputError, "positive");
  const wide = { ...series, time: series.time.map((t: number) => 1e5 * t) };
  assertThrows(() => searchPeriod(wide, { period_range_d: [0.01, 1] }), InputError, "narrow");
});
