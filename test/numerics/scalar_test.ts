import { assert, assertAlmostEquals, assertEquals, assertThrows } from "@std/assert";
import { InputError, NotConverged } from "@millrace/millrace/errors";
import { findRoot, gaussLegendre, minimiseScalar } from "@millrace/millrace/numerics";

Deno.test("findRoot() reaches rounding when functions are smooth, steep or flat", () => {
  const roots: [(x: number) => number, [number, number], number][] = [
    [(x) => Math.cos(x) - x, [0, 1], 0.7390851332151607],
    [(x) => Math.expm1(50 * (x - 0.3)), [0, 1], 0.3],
    [(x) => x, [-1, 3], 0],
    [(x) => Math.sign(x - 0.123) * Math.sqrt(Math.abs(x - 0.123)), [1, -1], 0.123],
  ];
  for (const [f, bracket, root] of roots) assertAlmostEquals(findRoot(f, bracket), root, 4e-16);
  // A ninth power is 0 to rounding over a stretch of some 1e-36 only, but flat for the interpolation.
  assertAlmostEquals(findRoot((x) => (x - 0.5) ** 9, [0, 2]), 0.5, 1e-15);
});

Deno.test("findRoot() is frugal and keeps to its tolerance when one is given", () => {
  let calls = 0;
  const root = findRoot((x) => (calls++, x ** 3 - 2 * x - 5), [2, 3], { tolerance: 1e-6 });
  assertAlmostEquals(root, 2.0945514815423265, 1e-6);
  assert(calls <= 9, `${calls} calls`);
});

Deno.test("findRoot() takes an end at once when it is a root", () => {
  assertEquals(findRoot((x) => x - 1, [1, 2]), 1);
  assertEquals(findRoot((x) => x - 2, [1, 2]), 2);
});

Deno.test("findRoot() refuses when there is no sign change and gives up when f is NaN", () => {
  assertThrows(() => findRoot((x) => x * x + 1, [-1, 1]), InputError, "must change its sign");
  assertThrows(() => findRoot(() => NaN, [-1, 1]), InputError, "must change its sign");
  const holed = (x: number) => x < -0.9 ? -1 : x > 0.9 ? 1 : NaN;
  assertThrows(() => findRoot(holed, [-1, 1]), NotConverged, "is not a number at");
});

Deno.test("minimiseScalar() finds minima when functions are smooth, cusped or at an end", () => {
  assertAlmostEquals(minimiseScalar((x) => (x - 2) ** 2 + 1, [-10, 10]).x, 2, 1e-7);
  assertAlmostEquals(minimiseScalar((x) => Math.abs(x - 0.3), [0, 1]).x, 0.3, 1e-7);
  assertAlmostEquals(minimiseScalar((x) => x, [5, 6]).x, 5, 1e-7);
  const { x, value } = minimiseScalar((t) => t < 1 ? NaN : (t - 1.5) ** 2, [0, 4]);
  assertAlmostEquals(x, 1.5, 1e-7);
  assertEquals(value, (x - 1.5) ** 2);
  assertThrows(() => minimiseScalar((t) => t, [1, 0]), InputError, "lower end first");
});

Deno.test("minimiseScalar() is frugal when the function is nearly a parabola", () => {
  // Golden sections alone need 40 calls for eight digits.
  for (const f of [Math.cos, (x: number) => -Math.exp(-((x - 2) ** 2) / 3)]) {
    let calls = 0;
    minimiseScalar((x) => (calls++, f(x)), [-3, 5]);
    assert(calls < 16, `${calls} calls`);
  }
});

Deno.test("gaussLegendre() is exact when the degree is 2n − 1 or less", () => {
  for (const n of [1, 2, 3, 8, 31, 64]) {
    const { nodes, weights } = gaussLegendre(n);
    for (let degree = 0; degree < 2 * n; degree++) {
      const sum = nodes.reduce((total, x, i) => total + weights[i]! * x ** degree, 0);
      assertAlmostEquals(sum, degree % 2 ? 0 : 2 / (degree + 1), 1e-14, `n ${n}, degree ${degree}`);
    }
    assert(nodes.every((x, i) => i === 0 || x > nodes[i - 1]!));
  }
  // Abramowitz & Stegun table 25.4, n = 3.
  assertAlmostEquals(gaussLegendre(3).nodes[2]!, 0.774596669241483, 1e-15);
  assertThrows(() => gaussLegendre(0), InputError, "from 1 to 10000");
});
