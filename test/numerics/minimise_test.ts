import { assert, assertAlmostEquals, assertEquals, assertThrows } from "@std/assert";
import { Matrix } from "ml-matrix";
import { InputError } from "@millrace/millrace/errors";
import { minimise, randomStream } from "@millrace/millrace/numerics";
import { trustRegionStep } from "../../engine/numerics/trust_region_step.ts";

const of = (...values: number[]) => Float64Array.of(...values);
const range = (n: number, f: (i: number) => number) =>
  Float64Array.from({ length: n }, (_, i) => f(i));

type Problem = [f: (x: Float64Array) => Float64Array, start: number[], least: number];

// Moré, Garbow & Hillstrom (1981, ACM Trans. Math. Software 7, 17): functions, starts and least sums of
// squares, from memory; each is met to the six digits printed there.
const PROBLEMS: Record<string, Problem> = {
  "Rosenbrock": [([x, y]) => of(10 * (y! - x! ** 2), 1 - x!), [-1.2, 1], 0],
  "Freudenstein and Roth": [
    ([x, y]) => of(-13 + x! + ((5 - y!) * y! - 2) * y!, -29 + x! + ((y! + 1) * y! - 14) * y!),
    [0.5, -2],
    48.9842,
  ],
  "Powell badly scaled": [
    ([x, y]) => of(1e4 * x! * y! - 1, Math.exp(-x!) + Math.exp(-y!) - 1.0001),
    [0, 1],
    0,
  ],
  "Brown badly scaled": [([x, y]) => of(x! - 1e6, y! - 2e-6, x! * y! - 2), [1, 1], 0],
  "Jennrich and Sampson": [
    ([x, y]) => range(10, (i) => 4 + 2 * i - Math.exp((i + 1) * x!) - Math.exp((i + 1) * y!)),
    [0.3, 0.4],
    124.362,
  ],
  "Bard": [
    ([x, y, z]) => {
      const data = [14, 18, 22, 25, 29, 32, 35, 39, 37, 58, 73, 96, 134, 210, 439];
      return range(15, (i) => {
        const [u, v] = [i + 1, 15 - i];
        return data[i]! / 100 - (x! + u / (v * y! + Math.min(u, v) * z!));
      });
    },
    [1, 1, 1],
    8.21487e-3,
  ],
  "Meyer": [
    ([x, y, z]) => {
      // deno-fmt-ignore
      const data = [34780, 28610, 23650, 19630, 16370, 13720, 11540, 9744, 8261, 7030, 6005, 5147, 4427, 3820, 3307, 2872];
      return range(16, (i) => x! * Math.exp(y! / (50 + 5 * i + z!)) - data[i]!);
    },
    [0.02, 4000, 250],
    87.9458,
  ],
  "Powell singular": [
    ([a, b, c, d]) =>
      of(
        a! + 10 * b!,
        Math.sqrt(5) * (c! - d!),
        (b! - 2 * c!) ** 2,
        Math.sqrt(10) * (a! - d!) ** 2,
      ),
    [3, -1, 0, 1],
    0,
  ],
  "Kowalik and Osborne": [
    ([a, b, c, d]) => {
      const data = [1957, 1947, 1735, 1600, 844, 627, 456, 342, 323, 235, 246];
      const at = [4, 2, 1, 0.5, 0.25, 0.167, 0.125, 0.1, 0.0833, 0.0714, 0.0625];
      return range(11, (i) => {
        const u = at[i]!;
        return data[i]! / 1e4 - a! * (u * u + u * b!) / (u * u + u * c! + d!);
      });
    },
    [0.25, 0.39, 0.415, 0.39],
    3.07505e-4,
  ],
};

for (const [name, [f, start, least]] of Object.entries(PROBLEMS)) {
  Deno.test(`minimise() reaches the published least sum when the problem is ${name}`, () => {
    for (const differences of ["forward", "central"] as const) {
      const fit = minimise(f, Float64Array.from(start), { differences });
      assert(fit.converged, `${name}, ${differences}`);
      assertAlmostEquals(fit.chi_square, least, 1e-18 + 3e-6 * least);
    }
  });
}

Deno.test("minimise() needs no differences when given the Jacobian", () => {
  const [f, start] = PROBLEMS["Rosenbrock"]!;
  const calls: number[] = [];
  const fit = minimise(
    (p) => (calls.push(1), f(p)),
    Float64Array.from(start),
    { jacobian: ([x]) => of(-20 * x!, 10, -1, 0) },
  );
  assertAlmostEquals(fit.parameters[1]!, 1, 1e-12);
  assertEquals(calls.length, fit.evaluations);
  assert(fit.evaluations < 30, `${fit.evaluations}`);
});

Deno.test("minimise() gives the linear answer and its covariance when the model is linear", () => {
  // y = a + b x at x = 0, 1, 2 with errors 0.5: covariance 0.25 (XᵀX)⁻¹.
  const fit = minimise(
    ([a, b]) => of(a! - 1, a! + b! - 3, a! + 2 * b! - 5).map((r) => r / 0.5),
    of(0, 0),
    { differences: "central" },
  );
  assertAlmostEquals(fit.parameters[0]!, 1, 1e-9);
  assertAlmostEquals(fit.covariance.get(0, 0), 0.25 * 5 / 6, 1e-9);
  assertAlmostEquals(fit.covariance.get(0, 1), -0.25 / 2, 1e-9);
  assertAlmostEquals(fit.covariance.get(1, 1), 0.25 / 2, 1e-9);
});

Deno.test("minimise() has honest errors when the noise is known", () => {
  // 200 seeds: the truth lies within one error about 68 times in a hundred (binomial ± 3.3 %, three of them).
  let within = 0;
  for (let seed = 1; seed <= 200; seed++) {
    const stream = randomStream(seed);
    const noise = range(40, () => stream.normal());
    const model = (p: Float64Array, i: number) =>
      p[0]! * Math.exp(-0.5 * ((i - p[1]!) / p[2]!) ** 2);
    const data = noise.map((n, i) => model(of(20, 19.3, 4), i) + n);
    const fit = minimise((p) => data.map((d, i) => d - model(p, i)), of(10, 18, 6));
    if (Math.abs(fit.parameters[1]! - 19.3) < Math.sqrt(fit.covariance.get(1, 1))) within++;
  }
  assert(Math.abs(within / 200 - 0.683) < 0.1, `${within} of 200`);
});

Deno.test("minimise() ends on the bound when the minimum lies beyond it", () => {
  const bowl = ([x, y]: Float64Array) => of(x! - 3, 2 * (y! + 1), 0.5 * (x! + y!));
  const fit = minimise(bowl, of(0, 0), { upper: [1, Infinity], lower: [-Infinity, -5] });
  assertEquals(fit.parameters[0], 1);
  assertEquals(fit.at_bound, ["upper", null]);
  // With x = 1: minimise 4 (y + 1)² + (1 + y)²/4.
  assertAlmostEquals(fit.parameters[1]!, -1, 1e-8);
  assertEquals(fit.covariance.get(0, 0), 0);
  assertAlmostEquals(fit.covariance.get(1, 1), 1 / 4.25, 1e-6);
  assert(fit.converged);
});

Deno.test("minimise() leaves a bound again when the way leads off it", () => {
  const fit = minimise(([x, y]) => of(10 * (y! - x! ** 2), 1 - x!), of(-1.2, 1), {
    lower: [-1.2, -Infinity],
    upper: [Infinity, 1.5],
  });
  assertAlmostEquals(fit.parameters[0]!, 1, 1e-7);
  assertEquals(fit.at_bound, [null, null]);
});

Deno.test("minimise() never leaves the bounds when it looks for differences", () => {
  const f = ([x]: Float64Array) => {
    assert(x! >= 0 && x! <= 1, `evaluated at ${x}`);
    return of(Math.sqrt(x!) - 0.001, x! - 0.1);
  };
  for (const differences of ["forward", "central"] as const) {
    const fit = minimise(f, of(0), { lower: [0], upper: [1], differences, typical: [1e-6] });
    // Where the derivative of the sum of squares vanishes: √x = 0.001/(0.8 + 2x). The
    // tolerance of 1e-10 in the sum of squares, 0.01, leaves 1e-6 in √x.
    assertAlmostEquals(fit.parameters[0]!, 1.562488e-6, 2.5e-9);
  }
});

Deno.test("minimise() looks inwards for differences when it starts on the upper bound", () => {
  for (const differences of ["forward", "central"] as const) {
    const f = ([x]: Float64Array) => {
      assert(x! <= 1, `evaluated at ${x}`);
      return of(x! - 0.25, 2 * x! - 0.5);
    };
    const fit = minimise(f, of(1), { upper: [1], differences });
    assertAlmostEquals(fit.parameters[0]!, 0.25, 1e-9);
  }
});

Deno.test("trustRegionStep() reaches the constrained minimum of a coupled model at once", () => {
  // ‖R p + c‖² with p1 held at 1 by its bound: then p0 = −(c0 + 2)/1 and the second row is fixed.
  const model = { triangle: new Matrix([[1, 2], [0, 3]]), target: of(4, -9) };
  const gradient = of(4, 2 * 4 - 27);
  const { step, cut } = trustRegionStep(model, of(0, 0), {
    scale: of(1, 1),
    radius: 100,
    bounds: { lower: of(-Infinity, -Infinity), upper: of(Infinity, 1) },
    gradient,
  });
  assertAlmostEquals(step[0]!, -6, 1e-12);
  assertEquals([step[1], cut], [1, false]);
});

Deno.test("trustRegionStep() is as long as the radius when that cuts it", () => {
  const model = { triangle: new Matrix([[1, 2], [0, 3]]), target: of(4, -9) };
  const { step, cut } = trustRegionStep(model, of(0, 0), {
    scale: of(2, 1),
    radius: 0.5,
    bounds: { lower: of(-9, -9), upper: of(9, 9) },
    gradient: of(4, -19),
  });
  assert(cut);
  assertAlmostEquals(Math.hypot(2 * step[0]!, step[1]!), 0.5, 0.05);
});

Deno.test("minimise() agrees with an exhaustive search when bounds cut Rosenbrock's valley", () => {
  const [f] = PROBLEMS["Rosenbrock"]!;
  const fit = minimise(f, of(-1, 0.2), { lower: [-2, 0], upper: [0.5, 2] });
  // On x = 0.5 the least value is at y = 0.25: (1 − 0.5)².
  assertAlmostEquals(fit.chi_square, 0.25, 1e-10);
  assertEquals(fit.at_bound, ["upper", null]);
});

Deno.test("minimise() holds a parameter when its bounds are equal", () => {
  const fit = minimise(([x, y]) => of(x! + y! - 5, x! - y!), of(1, 0), {
    lower: [1, -9],
    upper: [1, 9],
  });
  assertEquals(fit.parameters[0], 1);
  assertAlmostEquals(fit.parameters[1]!, 2.5, 1e-8);
  assertEquals(fit.at_bound, ["lower", null]);
});

Deno.test("minimise() says infinite when the data do not determine a parameter", () => {
  const fit = minimise(([a, b, c]) => of(a! + b! - 2, 2 * (a! + b!) - 4, c! - 7), of(0, 0.5, 0));
  assertEquals(fit.rank, 2);
  assertEquals(fit.covariance.get(0, 0), Infinity);
  assertEquals(fit.covariance.get(1, 1), Infinity);
  assertAlmostEquals(fit.covariance.get(2, 2), 1, 1e-6);
  assertAlmostEquals(fit.chi_square, 0, 1e-15);
});

Deno.test("minimise() steps back when a trial point is not finite", () => {
  const fit = minimise(([x]) => of(Math.log(x!), 0.01 * (x! - 1)), of(20));
  assertAlmostEquals(fit.parameters[0]!, 1, 1e-8);
  const far = minimise(([x]) => of(x! > 3 ? NaN : x! - 4), of(0));
  assert(far.parameters[0]! <= 3 && far.parameters[0]! > 2.9);
});

Deno.test("minimise() admits it when the iterations run out or the Jacobian lies", () => {
  const [f, start] = PROBLEMS["Meyer"]!;
  const short = minimise(f, Float64Array.from(start), { max_iterations: 3 });
  assertEquals([short.converged, short.iterations], [false, 3]);
  const lied = minimise(([x]) => of(x! - 3, 1), of(0), { jacobian: () => of(-1, 0) });
  assertEquals(lied.converged, false);
});

Deno.test("minimise() changes neither start nor bounds when it runs", () => {
  const start = of(-1.2, 1);
  const lower = of(-2, -2);
  minimise(PROBLEMS["Rosenbrock"]![0], start, { lower });
  assertEquals([start, lower], [of(-1.2, 1), of(-2, -2)]);
});

Deno.test("minimise() names the rule when the start is wrong", () => {
  const f = ([x]: Float64Array) => of(x!);
  assertThrows(
    () => minimise(f, of(2), { upper: [1] }),
    InputError,
    "within its bounds [-Infinity, 1]",
  );
  assertThrows(() => minimise(f, of(NaN)), InputError, "must be finite");
  assertThrows(() => minimise(f, of(1), { lower: [1, 2] }), InputError, "the same in number");
  assertThrows(() => minimise(() => of(NaN), of(1)), InputError, "finite residuals at their start");
  assertThrows(() => minimise(f, of()), InputError, "there must be parameters");
});

Deno.test("minimise() ends when a step would cross several bounds and setting all of them would climb", () => {
  // The free minimum is at (50, −50), far along a valley that both bounds cut off.
  let calls = 0;
  const fit = minimise(
    ([x, y]) => {
      assert(++calls < 1000);
      return Float64Array.of(x! + y!, 0.01 * y! + 0.5);
    },
    Float64Array.of(1, 0.5),
    { lower: [0, -0.1], upper: [10, 1] },
  );
  assert(fit.converged);
  assertAlmostEquals(fit.parameters[1]!, -0.1, 1e-12);
  assertAlmostEquals(fit.parameters[0]!, 0.1, 1e-6);
});
