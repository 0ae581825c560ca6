import { assert, assertAlmostEquals, assertThrows } from "@std/assert";
import { InputError } from "@millrace/millrace/errors";
import {
  lagrangePoints,
  lobeOutline,
  lobeOutlineVelocity,
  lobeRadius,
  lobeRadiusEggleton,
  lobeRadiusPaczynski,
  lobeSurface,
  rocheGradient,
  rochePotential,
} from "@millrace/millrace/binary";
import { casesOf } from "./reference.ts";

// reference/roche.json: Roche potential by quadrature and root finding (numpy, scipy)
const cases = casesOf("roche");

Deno.test("lagrangePoints() gives L1 and its potential of all reference binaries", () => {
  for (const c of cases) {
    const points = lagrangePoints(c.q);
    assertAlmostEquals(points.l1_over_a, c.L1_from_accretor, 1e-12, c.id);
    assertAlmostEquals(points.l1_potential, c.phi_L1, 1e-12, c.id);
  }
});

Deno.test("lagrangePoints() orders potentials when the donor is the lighter star", () => {
  for (const q of [0.05, 0.3, 0.9]) {
    const { l1_over_a, l2_over_a, l3_over_a } = lagrangePoints(q);
    const at = (x: number) => rochePotential({ x, y: 0 }, q);
    assert(at(l1_over_a) < at(l2_over_a) && at(l2_over_a) < at(l3_over_a));
    for (const x of [l1_over_a, l2_over_a, l3_over_a]) {
      assertAlmostEquals(rocheGradient({ x, y: 0 }, q)[0], 0, 1e-9);
    }
  }
});

Deno.test("lagrangePoints() mirrors when the stars change places", () => {
  for (const q of [0.05, 0.3, 0.9]) {
    const there = lagrangePoints(q), back = lagrangePoints(1 / q);
    assertAlmostEquals(there.l1_over_a, 1 - back.l1_over_a, 1e-14);
    assertAlmostEquals(there.l2_over_a, 1 - back.l3_over_a, 1e-13);
  }
});

Deno.test("rocheGradient() is the slope of rochePotential() off the plane", () => {
  const h = 1e-5; // central differences: error about h² plus 1e-16/h
  const at = { x: 0.7, y: 0.2, z: -0.1 };
  const slope = rocheGradient(at, 0.4);
  (["x", "y", "z"] as const).forEach((axis, k) => {
    const up = rochePotential({ ...at, [axis]: at[axis] + h }, 0.4);
    const down = rochePotential({ ...at, [axis]: at[axis] - h }, 0.4);
    assertAlmostEquals(slope[k]!, (up - down) / (2 * h), 1e-7);
  });
});

Deno.test("lobeRadius() gives the exact volume radii of both stars", () => {
  for (const c of cases) {
    assertAlmostEquals(lobeRadius(c.q) / c.donor_R_vol, 1, 1e-7, c.id);
    const accretor = lobeRadius(c.q, { star: "accretor" });
    assertAlmostEquals(accretor / c.accretor_R_vol, 1, 1e-7, c.id);
  }
});

Deno.test("lobeRadiusEggleton() and lobeRadiusPaczynski() are the published formulas", () => {
  for (const c of cases) {
    assertAlmostEquals(lobeRadiusEggleton(c.q), c.eggleton_donor, 1e-12, c.id);
    assertAlmostEquals(lobeRadiusEggleton(1 / c.q), c.eggleton_accretor, 1e-12, c.id);
    assertAlmostEquals(lobeRadiusPaczynski(c.q), c.paczynski_donor, 1e-12, c.id);
    // Eggleton 1983 states 1 %
    assertAlmostEquals(lobeRadiusEggleton(c.q) / lobeRadius(c.q), 1, 0.01, c.id);
  }
});

Deno.test("lobeSurface() reaches pole, side and back of all reference lobes", () => {
  for (const c of cases) {
    const lobe = lobeSurface(c.q);
    assertAlmostEquals(lobe.radius([0, 0, 1]), c.donor_R_pole, 1e-10, c.id);
    assertAlmostEquals(lobe.radius([0, 1, 0]), c.donor_R_side, 1e-10, c.id);
    assertAlmostEquals(lobe.radius([1, 0, 0]), c.donor_R_back, 1e-10, c.id);
    assertAlmostEquals(lobe.l1_distance, c.L1_from_donor, 1e-12, c.id);
  }
});

Deno.test("lobeOutline() and lobeOutlineVelocity() draw all reference lobes", () => {
  for (const c of cases) {
    const { x, y } = lobeOutline(c.q, { points: 32 });
    // Speeds that add up to one make km/s the file's unit.
    const speeds = { mass_ratio: c.q, k_accretor_kms: c.mu, k_donor_kms: 1 - c.mu };
    const { vx_kms, vy_kms } = lobeOutlineVelocity(speeds, { points: 32 });
    for (let k = 0; k < 32; k++) {
      const where = `${c.id} point ${k}`;
      assertAlmostEquals(x[k]!, c.outline_x[k], 1e-10, where);
      assertAlmostEquals(y[k]!, c.outline_y[k], 1e-10, where);
      assertAlmostEquals(vx_kms[k]!, c.outline_Vx[k], 1e-10, where);
      assertAlmostEquals(vy_kms[k]!, c.outline_Vy[k], 1e-10, where);
    }
  }
});

Deno.test("lobeOutline() of the accretor is the donor's of the inverse ratio, mirrored", () => {
  const accretor = lobeOutline(0.3, { star: "accretor", points: 24 });
  const donor = lobeOutline(1 / 0.3, { points: 24 });
  for (let k = 0; k < 24; k++) {
    const mirrored = (36 - k) % 24; // angle π − θ
    assertAlmostEquals(accretor.x[k]!, 1 - donor.x[mirrored]!, 1e-12);
    assertAlmostEquals(accretor.y[k]!, donor.y[mirrored]!, 1e-12);
  }
});

Deno.test("lobe functions refuse a mass ratio that is not one", () => {
  for (const q of [0, -0.3, NaN, Infinity, 1e3]) {
    assertThrows(() => lobeRadius(q), InputError, "mass ratio M2/M1");
    assertThrows(() => lobeRadiusEggleton(q), InputError, `current value is ${q}`);
    assertThrows(() => lobeOutline(q), InputError, "key mass_ratio");
  }
  assertThrows(() => lobeOutline(0.3, { points: 2.5 }), InputError, "current value is 2.5");
});
