import { assertAlmostEquals, assertEquals, assertThrows } from "@std/assert";
import { InputError } from "@millrace/millrace/errors";
import {
  convolveReal,
  inverseRealFourier,
  randomStream,
  realFourier,
} from "@millrace/millrace/numerics";

function noise(n: number, seed: number): Float64Array {
  const stream = randomStream(seed);
  return Float64Array.from({ length: n }, () => stream.normal());
}

Deno.test("realFourier() equals the defining sum when lengths are powers of two", () => {
  for (const n of [2, 4, 16, 64]) {
    const values = noise(n, n);
    const { real, imaginary } = realFourier(values);
    for (let k = 0; k <= n / 2; k++) {
      let [re, im] = [0, 0];
      values.forEach((x, i) => {
        re += x * Math.cos(2 * Math.PI * k * i / n);
        im -= x * Math.sin(2 * Math.PI * k * i / n);
      });
      assertAlmostEquals(real[k]!, re, 1e-12);
      assertAlmostEquals(imaginary[k]!, im, 1e-12);
    }
  }
});

Deno.test("inverseRealFourier() returns the values when given their spectrum", () => {
  for (const n of [1, 3, 8, 100]) {
    const values = noise(n, n);
    const back = inverseRealFourier(realFourier(values));
    values.forEach((x, i) => assertAlmostEquals(back[i]!, x, 1e-13));
  }
});

Deno.test("convolveReal() equals the double loop when lengths differ", () => {
  for (const [n, m] of [[1, 1], [5, 3], [100, 17], [3, 200]] as const) {
    const [a, b] = [noise(n, 1), noise(m, 2)];
    const slow = new Float64Array(n + m - 1);
    a.forEach((x, i) => b.forEach((y, j) => slow[i + j]! += x * y));
    const fast = convolveReal(a, b);
    assertEquals(fast.length, slow.length);
    slow.forEach((x, i) => assertAlmostEquals(fast[i]!, x, 1e-11));
  }
  assertThrows(() => convolveReal([], [1]), InputError, "at least 1 value is needed");
});
