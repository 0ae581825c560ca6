import { assertAlmostEquals, assertEquals } from "@std/assert";
import { randomStream } from "../../engine/numerics/mod.ts";
import { measureNoise } from "../../engine/trail/mod.ts";

function rows(make: (random: ReturnType<typeof randomStream>) => Float64Array, count = 30) {
  const random = randomStream(3);
  return Array.from({ length: count }, () => {
    const residual = make(random);
    return { velocity_kms: residual.map((_, i) => 30 * i), residual, parameters: 0 };
  });
}

const white = (random: ReturnType<typeof randomStream>) =>
  Float64Array.from({ length: 300 }, () => random.normal());

Deno.test("measureNoise() finds the scale of independent noise and no correlation", () => {
  const noise = measureNoise(rows((r) => white(r).map((z) => 1.7 * z)))!;
  assertAlmostEquals(noise.scale, 1.7, 3 * noise.scale_error);
  assertEquals([noise.lag_correlation, noise.correlation_length_pixels], [[], 1]);
});

Deno.test("measureNoise() finds the correlation that linear resampling by half a pixel leaves", () => {
  // The mean of two neighbours: variance 1/2, correlation 1/2 at lag one, none beyond.
  const noise = measureNoise(rows((r) => {
    const z = white(r);
    return z.map((x, i) => 0.5 * (x + (z[i + 1] ?? r.normal())));
  }))!;
  assertAlmostEquals(noise.scale, Math.SQRT1_2, 4 * noise.scale_error);
  assertEquals(noise.lag_correlation.length, 1);
  // 9000 samples: a correlation is known to 0.01.
  assertAlmostEquals(noise.correlation_length_pixels, 2, 0.08);
});

Deno.test("measureNoise() does not count structure that all exposures share", () => {
  const noise = measureNoise(rows((r) => white(r).map((z, i) => z + 2 * Math.sin(i / 5))))!;
  assertAlmostEquals(noise.scale, 1, 4 * noise.scale_error);
});

Deno.test("measureNoise() gives null for too few samples", () => {
  assertEquals(measureNoise(rows(() => Float64Array.of(1, 2, 3), 2)), null);
  assertEquals(measureNoise([]), null);
});

Deno.test("measureNoise() does not take the fit's own correlation for one of the noise", () => {
  // Residuals of 24 samples from a fitted straight line: they correlate by about −2/24 at lag one.
  const random = randomStream(7);
  const exposures = Array.from({ length: 1000 }, () => {
    const z = Float64Array.from({ length: 24 }, () => random.normal());
    const mean = z.reduce((a, b) => a + b, 0) / 24;
    const x = z.map((_, i) => i - 11.5);
    const slope = z.reduce((s, v, i) => s + v * x[i]!, 0) / x.reduce((s, v) => s + v * v, 0);
    return {
      velocity_kms: z.map((_, i) => 30 * i),
      residual: z.map((v, i) => v - mean - slope * x[i]!),
      parameters: 2,
    };
  });
  const noise = measureNoise(exposures)!;
  assertEquals(noise.lag_correlation, []);
  assertAlmostEquals(noise.scale, 1, 4 * noise.scale_error);
});
