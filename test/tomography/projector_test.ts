import { assert, assertAlmostEquals, assertEquals, assertLess, assertThrows } from "@std/assert";
import { InputError } from "@millrace/millrace/errors";
import { randomStream } from "@millrace/millrace/numerics";
import { makeProjector, type Projector, type ProjectorMethod } from "@millrace/millrace/tomography";
import radon from "../reference/radon.json" with { type: "json" };
import { benchSampling, gaussianMap, plainSampling, ragged } from "./samplings.ts";

const METHODS: readonly ProjectorMethod[] = ["reference", "plain", "fast"];

interface Blob {
  readonly id: string;
  readonly kind: string;
  readonly flux: number;
  readonly x0: number;
  readonly y0: number;
  readonly s1: number;
  readonly s2: number;
  readonly tilt_deg: number;
  readonly gamma: number;
  readonly s_lsf: number;
  readonly dphi: number;
  readonly velocities: number[];
  readonly rows: { readonly phi: number; readonly profile: number[] }[];
}
const blobs = radon.cases.filter((c) => c.kind === "blob") as unknown as Blob[];

/** The blob's own width is shared between the map and a wider profile, so that both are smooth. */
function blobProblem(
  blob: Blob,
  method: ProjectorMethod,
): { projector: Projector; map: Float64Array } {
  const borrowed = 0.6 * Math.min(blob.s1, blob.s2);
  const sampling = plainSampling({
    phases: blob.rows.map((row) => row.phi),
    bins: blob.velocities.length,
    first_kms: 0,
    step_kms: 1,
    sigma_kms: Math.hypot(blob.s_lsf, borrowed),
    phase_width: blob.dphi,
  });
  // The file adds γ; in this project it is a factor, so its velocities and widths are put there.
  const stretch = 1 + blob.gamma / 299792.458;
  const velocity_kms = sampling.velocity_kms.map((_, k) =>
    blob.gamma + (blob.velocities[k % blob.velocities.length]! - blob.gamma) * stretch
  );
  const profile_sigma_kms = sampling.profile_sigma_kms.map((s) => s * stretch);
  // A map step of half the narrowest width in the map: the sum over pixels is exact to 1e-8.
  const narrow = 0.8 * Math.min(blob.s1, blob.s2);
  const half_width_kms = 1200;
  const pixels = 2 * Math.ceil(half_width_kms / (0.6 * narrow)) + 1;
  const map = gaussianMap({ pixels, half_width_kms }, [{
    flux: blob.flux,
    vx: blob.x0,
    vy: blob.y0,
    s1: Math.sqrt(blob.s1 ** 2 - borrowed ** 2),
    s2: Math.sqrt(blob.s2 ** 2 - borrowed ** 2),
    tilt_deg: blob.tilt_deg,
  }]);
  const projector = makeProjector({ ...sampling, velocity_kms, profile_sigma_kms }, {
    pixels,
    half_width_kms,
    systemic_kms: blob.gamma,
    method,
  });
  return { projector, map };
}

// reference/radon.json kind blob: Gaussian in closed form, smearing by scipy's quad over phase.
// Its tolerance is 1e-10 for a closed form; a sum over pixels and a 1e-9 smearing rule give 2e-8.
// The fast ones' linear deposit is right on average over the lines that a source covers; one line is
// off by up to (grid step / σ)²/12, 5e-3 here, and these blobs cover about ten: 5e-4.
for (const method of METHODS) {
  for (const blob of blobs) {
    Deno.test(`forward() gives the profile of ${blob.id} when the method is ${method}`, () => {
      const { projector, map } = blobProblem(blob, method);
      const data = projector.forward(map);
      const expected = blob.rows.flatMap((row) => row.profile);
      const peak = Math.max(...expected);
      const tolerance = (method === "reference" ? 2e-8 : 5e-4) * peak;
      expected.forEach((value, k) => assertAlmostEquals(data[k]!, value, tolerance, `sample ${k}`));
    });
  }
}

function dot(a: Float64Array, b: Float64Array): number {
  return a.reduce((sum, x, k) => sum + x * b[k]!, 0);
}

for (const method of METHODS) {
  Deno.test(`adjoint() is the transpose of forward() to 1e-12 when the method is ${method}`, () => {
    const random = randomStream(4);
    const sampling = ragged(7, random.uniform);
    const projector = makeProjector(sampling, {
      pixels: 61,
      half_width_kms: 500,
      systemic_kms: -40,
      method,
    });
    const map = Float64Array.from({ length: 61 * 61 }, random.normal);
    const data = Float64Array.from({ length: projector.sample_count }, random.normal);
    const seen = projector.forward(map);
    const back = projector.adjoint(data);
    const size = Math.sqrt(dot(seen, seen) * dot(data, data));
    assertLess(Math.abs(dot(seen, data) - dot(map, back)) / size, 1e-12);
    assert(size > 0);
  });
}

Deno.test("forward() of the fast projector follows the reference when exposures and pixels are ragged", () => {
  const random = randomStream(5);
  const sampling = ragged(8, random.uniform);
  const options = { pixels: 101, half_width_kms: 800, systemic_kms: 25 };
  const map = Float64Array.from({ length: 101 * 101 }, random.uniform);
  const fast = makeProjector(sampling, options).forward(map);
  const exact = makeProjector(sampling, { ...options, method: "reference" }).forward(map);
  const off = fast.map((f, k) => f - exact[k]!);
  assertLess(Math.sqrt(dot(off, off) / dot(exact, exact)), 1e-4);
});

Deno.test("forward() of the fast projector stays within 1e-4 when a pixel is half the resolution", () => {
  const { sampling, pixels } = benchSampling("small"); // FWHM of two map pixels
  const options = { pixels, half_width_kms: 1000, systemic_kms: 13.7 };
  const random = randomStream(6);
  const map = Float64Array.from({ length: pixels * pixels }, random.uniform);
  const fast = makeProjector(sampling, options).forward(map);
  const exact = makeProjector(sampling, { ...options, method: "reference" }).forward(map);
  const off = fast.map((f, k) => f - exact[k]!);
  assertLess(Math.sqrt(dot(off, off) / dot(exact, exact)), 1e-4);
});

Deno.test("forward() keeps the flux when the samples cover the line", () => {
  const sampling = plainSampling({
    phases: [0, 0.13, 0.41, 0.77],
    bins: 151,
    first_kms: -1500,
    step_kms: 20,
    sigma_kms: 40,
    phase_width: 0.03,
  });
  const shape = { pixels: 61, half_width_kms: 900 };
  const map = gaussianMap(shape, [{ flux: 3, vx: 300, vy: -200, s1: 60, s2: 60 }]);
  for (const method of METHODS) {
    const data = makeProjector(sampling, { ...shape, systemic_kms: 0, method }).forward(map);
    for (let i = 0; i < 4; i++) {
      const flux = data.subarray(151 * i, 151 * (i + 1)).reduce((a, b) => a + b, 0) * 20;
      assertAlmostEquals(flux, 3, 3e-4);
    }
  }
});

Deno.test("forward() mirrors a profile about the systemic velocity when half an orbit passes", () => {
  const sampling = plainSampling({
    phases: [0.2, 0.7],
    bins: 201,
    first_kms: -1000,
    step_kms: 10,
    sigma_kms: 25,
  });
  const shape = { pixels: 101, half_width_kms: 700 };
  const map = gaussianMap(shape, [{ flux: 1, vx: 400, vy: 100, s1: 70, s2: 70 }]);
  const data = makeProjector(sampling, { ...shape, systemic_kms: 0 }).forward(map);
  for (let k = 0; k < 201; k++) assertAlmostEquals(data[k]!, data[401 - k]!, 1e-6 * 0.005);
});

Deno.test("forward() does not change its map or sampling and can write into a given array", () => {
  const { sampling, pixels } = benchSampling("small");
  const before = structuredClone(sampling);
  const projector = makeProjector(sampling, { pixels, half_width_kms: 1000, systemic_kms: 0 });
  const map = new Float64Array(pixels * pixels).fill(2);
  const into = new Float64Array(projector.sample_count).fill(9);
  assert(projector.forward(map, into) === into);
  assertEquals(into, projector.forward(map));
  const back = new Float64Array(pixels * pixels).fill(9);
  assertEquals(projector.adjoint(into, back), projector.adjoint(into));
  assertEquals(map, new Float64Array(pixels * pixels).fill(2));
  assertEquals(sampling, before);
});

Deno.test("forward() shows a blend's member where its rest wavelength puts it", () => {
  const sampling = plainSampling({
    phases: [0.3],
    bins: 401,
    first_kms: -2000,
    step_kms: 10,
    sigma_kms: 30,
  });
  const shape = { pixels: 101, half_width_kms: 600 };
  const map = gaussianMap(shape, [{ flux: 1, vx: 0, vy: 0, s1: 50, s2: 50 }]);
  const rest_ratio = 1.003;
  const data = makeProjector(sampling, { ...shape, systemic_kms: 60, rest_ratio }).forward(map);
  const mean = data.reduce((sum, d, k) => sum + d * sampling.velocity_kms[k]!, 0) /
    data.reduce((a, b) => a + b, 0);
  // λ = λ0 × ratio × (1 + γ/c), so V/c = ratio (1 + γ/c) − 1.
  assertAlmostEquals(mean, 299792.458 * (rest_ratio * (1 + 60 / 299792.458) - 1), 0.01);
});

const one = plainSampling({ phases: [0.1], bins: 3, first_kms: -10, step_kms: 10, sigma_kms: 20 });
const shape = { pixels: 101, half_width_kms: 500, systemic_kms: 0 };

for (
  const [what, sampling, options, message] of [
    [
      "the number of pixels is even",
      one,
      { ...shape, pixels: 100 },
      "Cannot make velocity map as the number of pixels along a side must be odd and at least 3: " +
      "current value is 100 (key map.pixels); an odd number puts the middle pixel at (0, 0)",
    ],
    [
      "the half-width is negative",
      one,
      { ...shape, half_width_kms: -5 },
      "Cannot make velocity map as half-width must be positive: current value is -5 km/s (key map.half_width_kms)",
    ],
    [
      "the systemic velocity is not a number",
      one,
      { ...shape, systemic_kms: NaN },
      "Cannot bring velocities to the system's frame as systemic velocity must be a number below the " +
      "speed of light: current value is NaN km/s",
    ],
    [
      "a pixel is over half the resolution",
      one,
      { ...shape, pixels: 21 },
      "Cannot make velocity map as a map pixel must be at most half the resolution, 23.55 km/s: " +
      "current value is 50 km/s (key map.pixels); use at least 45 pixels",
    ],
    [
      "a resolution is unknown",
      { ...one, profile_sigma_kms: Float64Array.of(NaN) },
      shape,
      "Cannot make projector as the resolution of exposure 1 must be known: current value is NaN km/s; " +
      "state it in the target file, as resolution_angstrom, resolution_kms or resolving_power",
    ],
    [
      "an exposure lasts an orbit",
      { ...one, phase_width: Float64Array.of(1) },
      shape,
      "Cannot make projector as exposure 1 must be shorter than one orbit: current value is 1 cycles",
    ],
  ] as const
) {
  Deno.test(`makeProjector() refuses when ${what}`, () => {
    const error = assertThrows(() => makeProjector(sampling, options), InputError);
    assertEquals(error.message, message);
  });
}
