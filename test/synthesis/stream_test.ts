import { assertAlmostEquals, assertGreater, assertLess, assertThrows } from "@std/assert";
import { InputError } from "@millrace/millrace/errors";
import { ballisticStream, streamVelocities } from "@millrace/millrace/binary";
import { modelMap, type StreamModel, synthesize } from "@millrace/millrace/synthesis";
import { binary, evenSampling, moments, orbit } from "./samplings.ts";

/** Flux-weighted mean of the map, km/s. */
function mapCentre(stream: StreamModel): [vx: number, vy: number, light: number] {
  const { map } = modelMap({ parts: ["stream"], stream }, {
    binary,
    pixels: 201,
    half_width_kms: 2000,
  });
  let light = 0, x = 0, y = 0;
  for (let j = 0; j < 201; j++) {
    for (let i = 0; i < 201; i++) {
      const value = map.intensity[j * 201 + i]! * 400;
      light += value;
      x += value * (20 * i - 2000);
      y += value * (20 * j - 2000);
    }
  }
  return [x / light, y / light, light];
}

/** The same by a plain sum over many points of the path. */
function plainCentre(index: number, from: number, to: number): [number, number] {
  const stream = ballisticStream(binary.mass_ratio, { points: 20_000 });
  const { vx_kms, vy_kms } = streamVelocities(stream, binary);
  let light = 0, x = 0, y = 0;
  for (let k = 1; k < stream.points.length; k++) {
    const a = stream.points[k - 1]!, b = stream.points[k]!;
    const radius = (a.radius_over_a + b.radius_over_a) / 2;
    if (radius > from || radius < to) continue;
    const share = Math.hypot(b.x - a.x, b.y - a.y) * radius ** -index;
    light += share;
    x += share * (vx_kms[k]! + vx_kms[k - 1]!) / 2;
    y += share * (vy_kms[k]! + vy_kms[k - 1]!) / 2;
  }
  return [x / light, y / light];
}

Deno.test("synthesize() of a stream is light along the ballistic path by its brightness law", () => {
  for (const [brightness_index, from] of [[0, 0.6], [2, 0.6], [-3, 0.45]] as const) {
    const [vx, vy, light] = mapCentre({ brightness_index, from_radius_over_a: from });
    const [x, y] = plainCentre(brightness_index, from, 0.3);
    assertAlmostEquals(light, 150, 0.01);
    // 20 000 steps along the path: below 0.1 km/s.
    assertAlmostEquals(vx, x, 0.1);
    assertAlmostEquals(vy, y, 0.1);
  }
});

Deno.test("synthesize() of a stream follows the mean of its points", () => {
  const phases = orbit(6);
  const sampling = evenSampling(phases, { step_kms: 10 });
  const flux = synthesize({ parts: ["stream"], stream: { from_radius_over_a: 0.6 } }, {
    binary,
    sampling,
  });
  const [vx, vy] = plainCentre(0, 0.6, 0.3);
  for (const [i, phase] of phases.entries()) {
    const { mean, light } = moments(flux, sampling, i);
    const angle = 2 * Math.PI * phase;
    assertAlmostEquals(mean, -vx * Math.cos(angle) + vy * Math.sin(angle), 0.1);
    assertAlmostEquals(light, 150, 0.01);
  }
});

Deno.test("synthesize() of a stream that overflows goes on beyond the rim", () => {
  const [vx0] = mapCentre({});
  const [vx1, , light] = mapCentre({ overflow: 0.5 });
  assertLess(vx1, vx0 - 100);
  assertAlmostEquals(light, 150, 0.5);
  const [, vy1] = mapCentre({ overflow: 0.5, overflow_radius_over_a: 0.2 });
  assertGreater(vy1, mapCentre({ overflow: 0.5 })[1]);
});

Deno.test("synthesize() names a stream that has no path to shine on", () => {
  assertThrows(
    () => modelMap({ parts: ["stream"], stream: { from_radius_over_a: 0.25 } }, { binary }),
    InputError,
    "the stream must begin outside the disc's rim, unless it flows over it",
  );
});
