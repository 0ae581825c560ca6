import { assert, assertAlmostEquals, assertGreater } from "@std/assert";
import {
  discBinMean,
  discProfile,
  discTotal,
  pixelMeans,
  ringBinMean,
  ringProfile,
  rotationBinMean,
  rotationProfile,
  shearStrength,
  type VelocitySource,
} from "@millrace/millrace/synthesis";
import { bins, numbers, profileCases } from "./reference.ts";

// reference/profiles.json: scipy quadrature of the published integrals; Smak 1969, 1981; Horne &
// Marsh 1986; Gray. Tolerance "F, f by quadrature": 1e-8 relative.
const QUADRATURE = 1e-8;
// Same file, "ring, rotation, pixel_gauss": 1e-10.
const CLOSED_FORM = 1e-10;

function assertRelative(actual: number, expected: number, tolerance: number, what: string) {
  assertAlmostEquals(actual, expected, tolerance * Math.abs(expected) + 1e-15, what);
}

Deno.test("discProfile() gives every thin and thick reference profile", () => {
  for (const c of profileCases("disc_thin", "disc_thick")) {
    const shear = c.kind === "disc_thick" ? shearStrength(Number(c.i_deg), Number(c.k)) : 0;
    const disc = {
      inner_over_outer: Number(c.r_in),
      emissivity_index: Number(c.beta),
      shear,
    };
    if (c.kind === "disc_thick") assertAlmostEquals(shear, Number(c.kappa), 1e-11, c.id);
    const total = discTotal(disc);
    assertRelative(total, Number(c.total), QUADRATURE, `${c.id} total`);
    for (const [k, u] of numbers(c.u).entries()) {
      const f = discProfile(u, disc);
      assertRelative(f, numbers(c.f)[k]!, QUADRATURE, `${c.id} f(${u})`);
      assertRelative(f * total, numbers(c.F)[k]!, QUADRATURE, `${c.id} F(${u})`);
      assertAlmostEquals(discProfile(-u, disc), f, 0, `${c.id} even at ${u}`);
    }
  }
});

Deno.test("discProfile() of a thick disc peaks where and as high as the reference", () => {
  for (const c of profileCases("disc_thick")) {
    const disc = {
      inner_over_outer: Number(c.r_in),
      emissivity_index: Number(c.beta),
      shear: Number(c.kappa),
    };
    // Tolerance "peak_u_coarse": the grid's step; "peak_over_centre": 1e-3.
    const step = disc.inner_over_outer ** -0.5 / 1200;
    const peak = Number(c.peak_u_coarse);
    const height = discProfile(peak, disc);
    assertAlmostEquals(height / discProfile(0, disc), Number(c.peak_over_centre), 1e-3, c.id);
    assertGreater(height, discProfile(peak - step, disc));
    assertGreater(height, discProfile(peak + step, disc));
  }
});

Deno.test("discBinMean() gives every thin reference bin", () => {
  for (const c of profileCases("disc_thin")) {
    const disc = { inner_over_outer: Number(c.r_in), emissivity_index: Number(c.beta) };
    for (const [k, bin] of bins(c.bins).entries()) {
      assertRelative(discBinMean(bin, disc), numbers(c.bin_mean_f)[k]!, QUADRATURE, c.id);
    }
  }
});

Deno.test("ringProfile() and ringBinMean() give the reference ring", () => {
  for (const c of profileCases("ring")) {
    for (const [k, u] of numbers(c.u).entries()) {
      assertRelative(ringProfile(u), numbers(c.f)[k]!, CLOSED_FORM, c.id);
    }
    for (const [k, bin] of bins(c.bins).entries()) {
      assertRelative(ringBinMean(bin), numbers(c.bin_mean_f)[k]!, CLOSED_FORM, c.id);
    }
  }
});

Deno.test("rotationProfile() and rotationBinMean() give the reference kernel", () => {
  for (const c of profileCases("rotation")) {
    for (const [k, x] of numbers(c.x).entries()) {
      assertRelative(rotationProfile(x, Number(c.eps)), numbers(c.G)[k]!, CLOSED_FORM, c.id);
    }
    for (const [k, bin] of bins(c.bins).entries()) {
      const mean = rotationBinMean(bin, Number(c.eps));
      assertRelative(mean, numbers(c.bin_mean_G)[k]!, CLOSED_FORM, c.id);
    }
  }
});

Deno.test("pixelMeans() gives what pixels record of point, ring, disc and rotation", () => {
  let seen = 0;
  for (const c of profileCases("pixel_gauss", "pixel_ring", "pixel_disc", "pixel_rotation")) {
    const source: VelocitySource = c.kind === "pixel_gauss"
      ? { kind: "point", velocity_kms: Number(c.V0) }
      : c.kind === "pixel_ring"
      ? { kind: "ring", velocity_kms: Number(c.v), centre_kms: Number(c.gamma) }
      : c.kind === "pixel_disc"
      ? {
        kind: "disc",
        outer_kms: Number(c.v_out),
        centre_kms: Number(c.gamma),
        inner_over_outer: Number(c.r_in),
        emissivity_index: Number(c.beta),
      }
      : {
        kind: "rotation",
        vsini_kms: Number(c.vsini),
        centre_kms: Number(c.V0),
        limb_darkening: Number(c.eps),
      };
    const expected = numbers(c.pixel_mean);
    const means = pixelMeans(source, { edges_kms: numbers(c.edges), sigma_kms: Number(c.s) });
    // Tolerance "pixel_ring, pixel_disc, pixel_rotation": 1e-8 of the largest listed.
    const tolerance = c.kind === "pixel_gauss" ? CLOSED_FORM : 1e-8;
    const largest = Math.max(...expected);
    for (const [k, mean] of expected.entries()) {
      assertAlmostEquals(means[k]!, mean, tolerance * largest, `${c.id} pixel ${k}`);
    }
    seen++;
  }
  assert(seen > 0);
});
