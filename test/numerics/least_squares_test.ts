import { assert, assertAlmostEquals, assertEquals, assertThrows } from "@std/assert";
import { Matrix } from "ml-matrix";
import { InputError } from "@millrace/millrace/errors";
import {
  nonNegativeLeastSquares,
  phaseDifference,
  randomStream,
  solveLeastSquares,
} from "@millrace/millrace/numerics";
import stats from "../reference/stats.json" with { type: "json" };

// reference/stats.json sine_fit: numpy.linalg.lstsq; 1e-9 relative to K, phi0 modulo 1.
Deno.test("solveLeastSquares() matches the reference when fitting a sine", () => {
  // deno-lint-ignore no-explicit-any
  const cases = (stats.cases as any[]).filter((one) => one.kind === "sine_fit");
  assertEquals(cases.length, 3);
  for (const one of cases) {
    const angles = one.x.map((x: number) => 2 * Math.PI * x);
    const design = new Matrix(angles.map((a: number) => [1, Math.sin(a), Math.cos(a)]));
    const fit = solveLeastSquares(design, one.v, { error: one.err });
    const [, a, b] = fit.parameters;
    const k = Math.hypot(a!, b!);
    assertAlmostEquals(k, one.K, 1e-9 * one.K, one.id);
    assertAlmostEquals(phaseDifference(Math.atan2(-b!, a!) / (2 * Math.PI), one.phi0), 0, 1e-9);
    assertAlmostEquals(fit.chi_square, one.chi2, 1e-9 * one.chi2, one.id);
    for (let i = 0; i < 3; i++) {
      assertAlmostEquals(fit.parameters[i]!, one.gamma_A_B[i], 1e-9 * one.K, one.id);
      for (let j = 0; j < 3; j++) {
        const scale = Math.sqrt(one.covariance[i][i] * one.covariance[j][j]);
        assertAlmostEquals(fit.covariance.get(i, j), one.covariance[i][j], 1e-9 * scale, one.id);
      }
    }
  }
});

Deno.test("solveLeastSquares() leaves out a sample when its error is infinite", () => {
  const design = new Matrix([[1], [1], [NaN]]);
  const { parameters, sample_count } = solveLeastSquares(design, [2, 4, NaN], {
    error: [1, 1, Infinity],
  });
  assertAlmostEquals(parameters[0]!, 3, 1e-14);
  assertEquals(sample_count, 2);
});

Deno.test("solveLeastSquares() takes the smallest solution when columns depend on each other", () => {
  const design = new Matrix([[1, 1, 0], [2, 2, 0], [0, 0, 1]]);
  const fit = solveLeastSquares(design, [2, 4, 5]);
  assertEquals(fit.rank, 2);
  assertAlmostEquals(fit.parameters[0]!, 1, 1e-14);
  assertAlmostEquals(fit.parameters[1]!, 1, 1e-14);
  assertAlmostEquals(fit.chi_square, 0, 1e-25);
});

Deno.test("solveLeastSquares() works when columns outnumber samples and units differ wildly", () => {
  const wide = solveLeastSquares(new Matrix([[1e-12, 0, 3e8]]), [6]);
  const back = 1e-12 * wide.parameters[0]! + 3e8 * wide.parameters[2]!;
  assertAlmostEquals(back, 6, 1e-13);
  assertEquals(wide.rank, 1);
});

Deno.test("solveLeastSquares() changes nothing when it solves", () => {
  const design = new Matrix([[1, 2], [3, 4], [5, 7]]);
  const data = Float64Array.of(1, 2, 3);
  const error = Float64Array.of(1, 2, 3);
  solveLeastSquares(design, data, { error });
  assertEquals(design.to2DArray(), [[1, 2], [3, 4], [5, 7]]);
  assertEquals([data, error], [Float64Array.of(1, 2, 3), Float64Array.of(1, 2, 3)]);
});

Deno.test("solveLeastSquares() names the rule when its input is wrong", () => {
  const one = new Matrix([[1], [1]]);
  assertThrows(() => solveLeastSquares(one, [1]), InputError, "rows and samples");
  assertThrows(() => solveLeastSquares(one, [1, NaN]), InputError, "must be finite");
  assertThrows(() => solveLeastSquares(one, [1, 1], { error: [1, -1] }), InputError, "positive");
  assertThrows(
    () => solveLeastSquares(one, [1, 1], { error: [Infinity, Infinity] }),
    InputError,
    "there must be an unmasked sample",
  );
});

Deno.test("nonNegativeLeastSquares() meets the Karush–Kuhn–Tucker conditions when problems are random", () => {
  for (let seed = 1; seed <= 200; seed++) {
    const stream = randomStream(seed);
    const n = 5 + stream.integer(40);
    const k = 1 + stream.integer(12);
    const offset = seed % 3;
    const design = new Matrix(
      Array.from({ length: n }, () => Array.from({ length: k }, () => stream.normal() + offset)),
    );
    if (seed % 7 === 0) { for (let i = 0; i < n; i++) design.set(i, 0, design.get(i, k - 1)); }
    const data = Float64Array.from({ length: n }, () => 100 * stream.normal());
    const solution = nonNegativeLeastSquares(design, data);
    const rest = Matrix.columnVector(Array.from(data)).sub(
      design.mmul(Matrix.columnVector(Array.from(solution))),
    );
    for (let j = 0; j < k; j++) {
      const column = design.getColumnVector(j);
      const push = column.dot(rest) / (column.norm() * Math.hypot(...data));
      assert(solution[j]! >= 0, `seed ${seed}`);
      assert(push < 1e-10, `seed ${seed}: parameter ${j} wants to grow by ${push}`);
      if (solution[j]! > 0) assert(push > -1e-10, `seed ${seed}: ${j} wants to shrink by ${push}`);
    }
  }
});

Deno.test("nonNegativeLeastSquares() is indifferent to units and to columns of zeros", () => {
  const design = new Matrix([[1, 0, 1e-9], [2, 0, 0], [1, 0, 2e-9]]);
  const solution = nonNegativeLeastSquares(design, [3e7, 2e7, 5e7]);
  assertEquals(solution[1], 0);
  assertAlmostEquals(solution[0]!, 1e7, 1);
  assertAlmostEquals(solution[2]! / 2e16, 1, 1e-9);
  assertEquals(nonNegativeLeastSquares(design, [0, 0, 0]), new Float64Array(3));
  assertThrows(() => nonNegativeLeastSquares(design, [1, NaN, 2]), InputError, "must be finite");
  assertThrows(() => nonNegativeLeastSquares(design, [1]), InputError, "rows and samples");
});
