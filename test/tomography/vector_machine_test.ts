import { assertAlmostEquals, assertEquals } from "@std/assert";
import { randomStream } from "@millrace/millrace/numerics";
import {
  borrowMachine,
  kernelAvailable,
  mapBlur,
  maximumEntropy,
  type VectorMachine,
  vectorMachine,
} from "@millrace/millrace/tomography";
import { benchProblem } from "./bench_problem.ts";

const LENGTHS = [1, 2, 7, 512, 513, 1500];

/** All that a machine gives on the same random vectors. */
function results(machine: VectorMachine, length: number) {
  const random = randomStream(length);
  const make = (draw: () => number) => {
    const v = machine.vector(length);
    for (let i = 0; i < length; i++) v[i] = draw();
    return v;
  };
  const positive = () => 0.1 + random.uniform();
  const [a, b, c, d, e] = [1, 2, 3, 4, 5].map(() => make(random.normal)) as [
    Float64Array,
    Float64Array,
    Float64Array,
    Float64Array,
    Float64Array,
  ];
  const weight = make(positive), image = make(positive), out = make(positive);
  const list = [a, b, c, d, e, a];
  const chi = machine.residuals({ model: a, flux: b, weight, residual: out });
  const residual = out.slice();
  const gradients = { metric: weight, slope: c, pull: d };
  const norms = machine.norms(gradients);
  const square = machine.direction({ ...gradients, step: out }, 0.7);
  const direction = out.slice();
  machine.scale(out, 1.3);
  const scaled = out.slice();
  machine.invert(weight, out);
  const inverse = out.slice();
  const gram = machine.gram(list, weight);
  const dots = machine.dots(a, list), weighted = machine.weightedDots(a, weight, list);
  machine.combine(list, Float64Array.of(1, -2, 0.5, 3, 0.1, 7), out);
  const combined = out.slice();
  const held = machine.advance(image, out, 0.2);
  const free = machine.advance(image, e, -1);
  machine.add(image, b);
  return {
    ...{ chi, residual, norms, square, direction, scaled, inverse, gram, dots, weighted },
    ...{ combined, held, free, step: out.slice(), image: image.slice() },
  };
}

for (const length of LENGTHS) {
  Deno.test(`vectorMachine() gives the same bits in WebAssembly and TypeScript for ${length} elements`, () => {
    const kernel = vectorMachine(8 * 12 * (length + 8)), plain = vectorMachine(0, { plain: true });
    assertEquals([kernel.code, plain.code], [kernelAvailable() ? "kernel" : "plain", "plain"]);
    assertEquals(results(kernel, length), results(plain, length));
  });
}

Deno.test("vectorMachine() does what its names say", () => {
  for (const plain of [false, true]) {
    const machine = vectorMachine(1000, { plain });
    const a = machine.vector(3), b = machine.vector(3), w = machine.vector(3);
    a.set([1, 2, 3]);
    b.set([4, -1, 0]);
    w.set([1, 2, 0.5]);
    assertEquals(machine.gram([a, b], w), Float64Array.of(13.5, 0, 0, 18));
    assertEquals(machine.dots(a, [a, b]), Float64Array.of(14, 2));
    machine.combine([a, b], Float64Array.of(2, 1), w);
    assertEquals([...w], [6, 3, 6]);
    assertEquals(machine.advance(a, b, 0.6), 1);
    assertEquals([...a], [5, 1.2, 3]);
    assertAlmostEquals(b[1]!, -0.8, 1e-15);
  }
});

for (const pixels of [3, 8, 41]) {
  Deno.test(`mapBlur() gives the same bits in WebAssembly and TypeScript on ${pixels} pixels`, () => {
    const random = randomStream(pixels);
    const values = Float64Array.from({ length: pixels * pixels }, random.normal);
    const options = { pixels, half_width_kms: 100, fwhm_kms: 50 };
    assertEquals(mapBlur(options)(values), mapBlur({ ...options, plain: true })(values));
  });
}

Deno.test("maximumEntropy() gives the same bits in WebAssembly and TypeScript", () => {
  const { trail, shape } = benchProblem("small", { signal_to_noise: 30 });
  const options = { ...shape, prior: { kind: "blurred", fwhm_kms: 80 } } as const;
  const kernel = maximumEntropy(trail, options);
  const plain = maximumEntropy(trail, { ...options, method: "plain", plain: true });
  assertEquals(kernel, plain);
});

Deno.test("borrowMachine() lends its memory again, cleared, and never to two at once", () => {
  const first = borrowMachine(1000, {}), second = borrowMachine(1000, {});
  const a = first.machine.vector(5), b = second.machine.vector(5);
  a.fill(1);
  b.fill(2);
  assertEquals(a, new Float64Array(5).fill(1));
  second.giveBack();
  const third = borrowMachine(1000, {});
  assertEquals(third.machine, second.machine);
  assertEquals(third.machine.vector(5), new Float64Array(5));
  assertEquals(a, new Float64Array(5).fill(1));
});
