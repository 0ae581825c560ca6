import { assert, assertAlmostEquals, assertEquals } from "@std/assert";
import { localResolution } from "../../engine/tomography/mod.ts";

const FWHM = Math.sqrt(8 * Math.LN2);

function grid(phases: readonly number[], width = 0, columns = 161) {
  const rows = phases.length;
  return {
    rows,
    columns,
    first_kms: -2000,
    step_kms: 25,
    phase: Float64Array.from(phases),
    phase_width: new Float64Array(rows).fill(width),
    flux: new Float64Array(rows * columns),
    error: new Float64Array(rows * columns).fill(1),
  };
}

const even = (count: number) => Array.from({ length: count }, (_, i) => i / count);

function options(rows: number, sigma = 60) {
  return {
    pixels: 81,
    half_width_kms: 1600,
    systemic_kms: 0,
    wiener: false,
    profile_sigma_kms: new Float64Array(rows).fill(sigma),
  };
}

Deno.test("localResolution() gives the instrument's width all over when exposures are short and many", () => {
  // A Gaussian profile at all phases back-projects to the Gaussian itself (Radon inversion).
  const ellipses = localResolution(grid(even(120)), options(120));
  assertEquals(ellipses.length, 13);
  for (const { major_kms, minor_kms } of ellipses) {
    assertAlmostEquals(major_kms / (FWHM * 60), 1, 0.02);
    assertAlmostEquals(minor_kms / (FWHM * 60), 1, 0.02);
  }
});

Deno.test("localResolution() lengthens the ellipse along the circle when exposures are long", () => {
  const places = [{ vx_kms: 1200, vy_kms: 0 }, { vx_kms: 0, vy_kms: 600 }];
  const width = 0.02;
  const [right, up] = localResolution(grid(even(120), width), { ...options(120), places });
  // A uniform arc of length 2πwV has the variance of its square over 12, added to the profile's.
  for (const [ellipse, speed] of [[right!, 1200], [up!, 600]] as const) {
    const arc = 2 * Math.PI * width * speed;
    const along = FWHM * Math.hypot(60, arc / Math.sqrt(12));
    assertAlmostEquals(ellipse.major_kms / along, 1, 0.05);
    assertAlmostEquals(ellipse.minor_kms / (FWHM * 60), 1, 0.05);
  }
  assertAlmostEquals(Math.abs(right!.angle_deg), 90, 1); // at (+V, 0) the circle runs along Vy
  assertAlmostEquals(up!.angle_deg, 0, 1);
});

Deno.test("localResolution() widens the point along the direction that no exposure measures", () => {
  // Phases about 0.25 measure Vy alone: Vx is left open.
  const phases = Array.from({ length: 60 }, (_, i) => 0.1 + 0.3 * i / 59);
  const places = [{ vx_kms: 0, vy_kms: 0 }];
  const [middle] = localResolution(grid(phases), { ...options(60), places });
  assert(middle!.major_kms > 1.3 * middle!.minor_kms, JSON.stringify(middle));
  assertAlmostEquals(middle!.angle_deg, 0, 2);
});

Deno.test("localResolution() takes over the filter that the noise of the data asks for", () => {
  const noisy = grid(even(60));
  const places = [{ vx_kms: 0, vy_kms: 0 }];
  noisy.flux.forEach((_, k) => {
    const v = noisy.first_kms + (k % noisy.columns) * noisy.step_kms;
    noisy.flux[k] = 2 * Math.exp(-0.5 * (v / 300) ** 2);
  });
  const wide = { ...options(60), wiener: true, places };
  const [loud] = localResolution(noisy, wide);
  const quiet = { ...noisy, error: noisy.error.map(() => 1e-4) };
  const [clean] = localResolution(quiet, wide);
  assert(loud!.major_kms > 1.2 * clean!.major_kms, `${loud!.major_kms} ${clean!.major_kms}`);
});

Deno.test("localResolution() leaves its input as it was and keeps masked bins out", () => {
  const masked = grid(even(40));
  for (let row = 0; row < 40; row += 3) {
    masked.flux[row * masked.columns + 80] = NaN;
    masked.error[row * masked.columns + 80] = Infinity;
  }
  const before = structuredClone(masked);
  const [middle] = localResolution(masked, {
    ...options(40),
    places: [{ vx_kms: 0, vy_kms: 0 }],
  });
  assertEquals(masked, before);
  assertAlmostEquals(middle!.major_kms / (FWHM * 60), 1, 0.05);
});
