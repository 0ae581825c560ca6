import { assert, assertAlmostEquals, assertEquals, assertThrows } from "@std/assert";
import { InputError } from "@millrace/millrace/errors";
import {
  median,
  quantile,
  randomStream,
  robustSigma,
  weightedMean,
} from "@millrace/millrace/numerics";

Deno.test("quantile() interpolates between order statistics when p falls between", () => {
  // numpy.quantile([1, 2, 4, 8], [0, .25, .5, .9, 1]), its default definition 7.
  const values = [8, 1, 4, 2];
  assertEquals([0, 0.25, 0.5, 1].map((p) => quantile(values, p)), [1, 1.75, 3, 8]);
  assertAlmostEquals(quantile(values, 0.9), 6.8, 1e-14);
  assertEquals(values, [8, 1, 4, 2]);
});

Deno.test("median() survives NaN, infinities and outliers when they are few", () => {
  assertEquals(median([NaN, 3, Infinity, 1, 2, -Infinity, NaN]), 2);
  assertEquals(quantile([1, Infinity, Infinity], 1), Infinity);
  assertEquals(quantile([Infinity, Infinity], 0.5), Infinity);
  assertThrows(() => median([NaN]), InputError, "at least 1 value is needed");
  assertThrows(() => quantile([1], -0.1), InputError, "p must be from 0 to 1");
});

Deno.test("robustSigma() finds the scatter when a tenth of the values is wild", () => {
  const stream = randomStream(4);
  const values = Float64Array.from(
    { length: 5000 },
    (_, i) => i % 10 === 0 ? 1e6 : 3 * stream.normal() + 50,
  );
  // A tenth of outliers on one side raises the MAD by about 13 %.
  assert(robustSigma(values) > 2.8 && robustSigma(values) < 3.8);
  assertAlmostEquals(robustSigma(values.filter((v) => v < 1e5)), 3, 0.15);
});

Deno.test("weightedMean() has chi-square near its degrees of freedom when errors are true", () => {
  const stream = randomStream(8);
  const errors = Float64Array.from({ length: 400 }, (_, i) => 1 + i % 3);
  const values = errors.map((error) => 7 + error * stream.normal());
  const { mean, error, chi_square, count } = weightedMean(values, errors);
  assert(Math.abs(mean - 7) < 4 * error);
  assert(Math.abs(chi_square - 399) < 4 * Math.sqrt(2 * 399));
  assertEquals(count, 400);
});

Deno.test("weightedMean() refuses errors that are none", () => {
  assertThrows(() => weightedMean([1, 2], [1]), InputError, "values and errors");
  assertThrows(() => weightedMean([1], [0]), InputError, "errors must be positive");
  assertThrows(() => weightedMean([1], [NaN]), InputError, "errors must be positive");
  assertThrows(
    () => weightedMean([1], [Infinity]),
    InputError,
    "at least one value must be unmasked",
  );
});
