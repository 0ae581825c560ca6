import { assertEquals, assertLess } from "@std/assert";
import { randomStream } from "@millrace/millrace/numerics";
import { gatherLines, kernelAvailable, makeProjector } from "@millrace/millrace/tomography";
import { benchSampling, ragged } from "./samplings.ts";

function problems() {
  const random = randomStream(11);
  const small = benchSampling("small");
  return [
    {
      what: "a bench sampling",
      sampling: small.sampling,
      options: { pixels: small.pixels, half_width_kms: 1000, systemic_kms: 13.7 },
    },
    {
      what: "a ragged sampling",
      sampling: ragged(9, random.uniform),
      options: { pixels: 91, half_width_kms: 800, systemic_kms: -30 },
    },
    {
      what: "a map of three pixels",
      sampling: ragged(3, random.uniform),
      options: { pixels: 3, half_width_kms: 20, systemic_kms: 0 },
    },
    {
      what: "phases on the axes and between",
      sampling: {
        ...ragged(8, random.uniform),
        phase: Float64Array.of(0, 0.125, 0.25, 0.375, 0.5, 0.625, 0.75, 0.875),
        phase_width: new Float64Array(8),
      },
      options: { pixels: 61, half_width_kms: 500, systemic_kms: 0 },
    },
  ];
}

for (const { what, sampling, options } of problems()) {
  Deno.test(`makeProjector() gives the same bits in WebAssembly and TypeScript on ${what}`, () => {
    const random = randomStream(12);
    const kernel = makeProjector(sampling, options);
    const plain = makeProjector(sampling, { ...options, method: "plain" });
    assertEquals([kernel.code, plain.code], [kernelAvailable() ? "kernel" : "plain", "plain"]);
    const map = Float64Array.from({ length: options.pixels ** 2 }, random.normal);
    const data = Float64Array.from({ length: plain.sample_count }, random.normal);
    // Twice, in both orders: no state may be left behind.
    for (let round = 0; round < 2; round++) {
      assertEquals(kernel.forward(map), plain.forward(map));
      assertEquals(kernel.adjoint(data), plain.adjoint(data));
    }
  });

  Deno.test(`makeProjector() is near in single precision on ${what}`, () => {
    const random = randomStream(13);
    const single = makeProjector(sampling, { ...options, precision: "single" });
    const double = makeProjector(sampling, options);
    const map = Float64Array.from({ length: options.pixels ** 2 }, random.uniform);
    const data = Float64Array.from({ length: double.sample_count }, random.uniform);
    for (
      const [a, b] of [
        [single.forward(map), double.forward(map)],
        [single.adjoint(data), double.adjoint(data)],
      ] as const
    ) {
      const peak = b.reduce((most, x) => Math.max(most, Math.abs(x)), 0);
      // 2^-24 times the square root of the number of sums, with room: 1e-6 of the peak.
      a.forEach((x, k) => assertLess(Math.abs(x - b[k]!), 1e-6 * peak));
    }
  });
}

Deno.test("gatherLines() gives the same bits in WebAssembly and TypeScript, and is near in single precision", () => {
  const random = randomStream(14);
  for (const [rows, columns, pixels] of [[7, 90, 61], [4, 30, 3], [1, 50, 21]] as const) {
    const profiles = {
      rows,
      columns,
      step_kms: 25,
      first_kms: -12.5 * columns,
      phase: Float64Array.from({ length: rows }, random.uniform),
      flux: Float64Array.from({ length: rows * columns }, random.normal),
    };
    const options = { pixels, half_width_kms: 500 };
    const kernel = gatherLines(profiles, options);
    assertEquals(kernel, gatherLines(profiles, { ...options, plain: true }));
    const single = gatherLines(profiles, { ...options, precision: "single" });
    single.forEach((x, k) => assertLess(Math.abs(x - kernel[k]!), 1e-5));
  }
});
