import { assert, assertAlmostEquals, assertEquals, assertLess, assertThrows } from "@std/assert";
import {
  binaryFrom,
  donorSurface,
  eclipseWidth,
  keplerMasses,
  lobeSurface,
} from "@millrace/millrace/binary";
import { InputError } from "@millrace/millrace/errors";
import { randomStream } from "@millrace/millrace/numerics";
import {
  kCorrection,
  kCorrectionRange,
  massPlanes,
  massRatioFromRotation,
  massRatioFromSuperhumps,
  rotationRatio,
  solveMasses,
} from "@millrace/millrace/orbit";
import { casesOf } from "./reference.ts";

Deno.test("solveMasses() gives the reference means and errors of a million draws", () => {
  // reference/orbit.json kind masses: normal draws (numpy); 60000 here know an error to 0.29 %
  for (const c of casesOf("orbit", "masses")) {
    const found = solveMasses({
      period_d: { value: c.P_d, error: c.sP_d },
      k_accretor_kms: { value: c.K1, error: c.sK1 },
      k_donor_kms: { value: c.K2, error: c.sK2 },
      inclination: { deg: { value: c.i_deg, error: c.si_deg } },
      eccentricity: c.e ?? 0,
    }, { random: randomStream(7), draws: 60000 });
    const check = (got: typeof found.accretor_msun, [mean, deviation]: [number, number]) => {
      // Five decimals in the file, and the draws' own error of the mean.
      assertAlmostEquals(got!.mean, mean, 5 * deviation / Math.sqrt(60000) + 1e-5, c.id);
      assertAlmostEquals(got!.deviation / deviation, 1, 0.0105 + 1e-5 / deviation, c.id);
    };
    check(found.accretor_msun, c.errors_montecarlo.M1);
    check(found.donor_msun, c.errors_montecarlo.M2);
    check(found.separation_rsun, c.errors_montecarlo.a);
    check(found.mass_ratio, c.errors_montecarlo.q);
    // First-order errors hold where errors are small.
    const first = c.errors_first_order;
    assertAlmostEquals(found.mass_ratio!.deviation / first.q, 1, 0.05, c.id);
    assertAlmostEquals(found.accretor_mass_function_msun!.mean / c.f_M1_Msun, 1, 0.01, c.id);
  }
});

Deno.test("rotationRatio() and massRatioFromRotation() give the reference values", () => {
  // reference/orbit.json kinds rotation, q_from_rotation: Wade & Horne 1988; root finding (scipy)
  for (const c of casesOf("orbit", "rotation")) {
    assertAlmostEquals(
      rotationRatio(c.q, { lobe: "paczynski" }) / c.vsini_over_K2_paczynski,
      1,
      1e-9,
    );
    assertAlmostEquals(
      rotationRatio(c.q, { lobe: "eggleton" }) / c.vsini_over_K2_eggleton,
      1,
      1e-9,
    );
    assertAlmostEquals(rotationRatio(c.q) / c.vsini_over_K2_exact_volume_radius, 1, 1e-6);
  }
  for (const c of casesOf("orbit", "q_from_rotation")) {
    const by = (lobe: "exact" | "eggleton" | "paczynski") =>
      massRatioFromRotation(c.vsini, c.K2, {
        v_sin_i_error_kms: c.s_vsini,
        k_donor_error_kms: c.sK2,
        lobe,
      });
    assertAlmostEquals(by("paczynski").mass_ratio / c.q_paczynski, 1, 1e-9, c.id);
    // The slope is by differences of 1e-4: 1e-7.
    assertAlmostEquals(by("paczynski").mass_ratio_error / c.sq_first_order, 1, 1e-6, c.id);
    assertAlmostEquals(by("eggleton").mass_ratio / c.q_eggleton, 1, 1e-9, c.id);
    // 1e-6 in the radius is five times that in q: q goes as the third power or steeper.
    assertAlmostEquals(by("exact").mass_ratio / c.q_exact_volume_radius, 1, 5e-6, c.id);
  }
  assertThrows(() => massRatioFromRotation(5000, 100), InputError, "mass ratios 0.001 to 20");
  assertThrows(() => massRatioFromRotation(-5, 100), InputError, "key v_sin_i_kms");
});

Deno.test("solveMasses() takes q from velocities, rotation, or both together", () => {
  const period_d = { value: 0.25, error: 0 };
  const k_accretor_kms = { value: 90, error: 9 };
  const k_donor_kms = { value: 300, error: 2 };
  const v_sin_i_kms = { value: 300 * rotationRatio(0.3), error: 4 };
  const random = randomStream(2);
  const by = (input: object) =>
    solveMasses({ period_d, k_accretor_kms: null, k_donor_kms, ...input }, { random });
  const velocities = by({ k_accretor_kms });
  const rotation = by({ v_sin_i_kms });
  const both = by({ k_accretor_kms, v_sin_i_kms });
  assertEquals(velocities.mass_ratio_from, ["velocities"]);
  assertEquals(rotation.mass_ratio_from, ["rotation"]);
  assertEquals(both.mass_ratio_from, ["velocities", "rotation"]);
  for (const one of [velocities, rotation, both]) {
    assertAlmostEquals(one.mass_ratio!.median, 0.3, 3 * one.mass_ratio!.deviation);
  }
  const first = massRatioFromRotation(v_sin_i_kms.value, 300, {
    v_sin_i_error_kms: 4,
    k_donor_error_kms: 2,
  });
  assertAlmostEquals(rotation.mass_ratio!.deviation / first.mass_ratio_error, 1, 0.06);
  const expected = 1 /
    Math.hypot(1 / velocities.mass_ratio!.deviation, 1 / rotation.mass_ratio!.deviation);
  assertAlmostEquals(both.mass_ratio!.deviation / expected, 1, 0.05);
  assert(both.agreement! > 0.2);
  const wrong = by({ k_accretor_kms: { value: 30, error: 3 }, v_sin_i_kms });
  assertLess(wrong.agreement!, 0.001);
});

Deno.test("solveMasses() with an eclipse, a range of inclinations, and none", () => {
  const binary = binaryFrom({
    mass_accretor_msun: 0.8,
    mass_donor_msun: 0.16,
    period_d: 0.0745,
    inclination_deg: 81,
  });
  const base = {
    period_d: { value: 0.0745, error: 0 },
    k_accretor_kms: { value: binary.k_accretor_kms, error: 2 },
    k_donor_kms: { value: binary.k_donor_kms, error: 4 },
  };
  const random = randomStream(3);
  const width = { value: eclipseWidth(0.2, 81), error: 0.0003 };
  const eclipse = solveMasses({ ...base, inclination: { eclipse_width_cycles: width } }, {
    random,
  });
  assertAlmostEquals(eclipse.inclination_deg!.median, 81, 0.15);
  assertAlmostEquals(eclipse.accretor_msun!.median, 0.8, 0.02);
  assert(eclipse.possible > 0.99);
  const ranged = solveMasses({ ...base, inclination: { range_deg: [60, 90] } }, { random });
  // Even over directions: cos i even from 0 to ½, median at ¼.
  assertAlmostEquals(ranged.inclination_deg!.median, Math.acos(0.25) * 180 / Math.PI, 0.5);
  assert(ranged.accretor_msun!.error_high > ranged.accretor_msun!.error_low, "skewed upwards");
  const none = solveMasses(base, { random });
  assertEquals([none.accretor_msun, none.inclination_deg, none.draws], [null, null, null]);
  const least = keplerMasses({
    period_d: 0.0745,
    k_accretor_kms: binary.k_accretor_kms,
    k_donor_kms: binary.k_donor_kms,
  });
  assertAlmostEquals(none.accretor_m_sin3i_msun!.mean, least.accretor_msun, 0.002);
  const alone = solveMasses({ ...base, k_accretor_kms: null }, { random });
  assertEquals(alone.mass_ratio, null);
  assert(alone.accretor_mass_function_msun!.median > 0.4);
  assertThrows(
    () =>
      solveMasses({ ...base, inclination: { eclipse_width_cycles: { value: 0.2, error: 0 } } }, {
        random,
      }),
    InputError,
    "eclipse",
  );
});

Deno.test("solveMasses() takes superhumps as an option, with their scatter", () => {
  const excess = 0.18 * 0.15 + 0.29 * 0.15 ** 2;
  assertAlmostEquals(massRatioFromSuperhumps(excess), 0.15, 1e-12);
  const found = solveMasses({
    period_d: { value: 0.07, error: 0 },
    k_accretor_kms: null,
    k_donor_kms: { value: 400, error: 4 },
    superhump_excess: { value: excess, error: 0.0005 },
  }, { random: randomStream(1) });
  assertEquals(found.mass_ratio_from, ["superhumps"]);
  assertAlmostEquals(found.mass_ratio!.median, 0.15, 0.002);
  assertAlmostEquals(
    found.mass_ratio!.deviation,
    Math.hypot(0.015, 0.0005 / (0.18 + 0.58 * 0.15)),
    0.001,
  );
  assertThrows(() => massRatioFromSuperhumps(0), InputError, "key superhump_excess");
});

Deno.test("solveMasses() draws the same from the same seed and refuses nonsense by key", () => {
  const input = {
    period_d: { value: 0.25, error: 0 },
    k_accretor_kms: { value: 100, error: 5 },
    k_donor_kms: { value: 150, error: 5 },
    inclination: { deg: { value: 60, error: 3 } },
  };
  const once = solveMasses(input, { random: randomStream(9), draws: 2000 });
  assertEquals(solveMasses(input, { random: randomStream(9), draws: 2000 }), once);
  const broken = (change: object, key: string) => {
    const error = assertThrows(
      () => solveMasses({ ...input, ...change }, { random: randomStream(1) }),
      InputError,
    );
    assertEquals(error.key, key);
  };
  broken({ k_donor_kms: { value: -3, error: 1 } }, "k_donor_kms");
  broken({ period_d: { value: 0.1, error: -1 } }, "period_d");
  broken({ inclination: { deg: { value: 100, error: 1 } } }, "inclination_deg");
  broken({ inclination: { range_deg: [80, 60] } }, "inclination_range_deg");
});

Deno.test("solveMasses() agrees with two published systems", () => {
  // From memory, digits not checked in print, so to 3 per cent.
  // Z Cha (Wade & Horne 1988; Wood et al. 1986): P 0.0745 d, K2 430 km/s, q 0.1495, i 81.78 deg;
  // M1 0.84, M2 0.125.
  const random = randomStream(1);
  const z_cha = solveMasses({
    period_d: { value: 0.0744993, error: 0 },
    k_accretor_kms: { value: 0.1495 * 430, error: 0.5 },
    k_donor_kms: { value: 430, error: 1 },
    inclination: { deg: { value: 81.78, error: 0.1 } },
  }, { random });
  assertAlmostEquals(z_cha.accretor_msun!.median / 0.84, 1, 0.03);
  assertAlmostEquals(z_cha.donor_msun!.median / 0.125, 1, 0.03);
  // V404 Cyg (Casares & Charles 1994): P 6.4714 d, K2 208.4, v sin i 38.8 km/s: q near 0.06 (their
  // 0.060 used Paczyński's radius, 8 per cent from the exact one), f 6.08, and 12 for i 56 deg.
  const v404 = solveMasses({
    period_d: { value: 6.4714, error: 0 },
    k_accretor_kms: null,
    k_donor_kms: { value: 208.4, error: 0.6 },
    v_sin_i_kms: { value: 38.8, error: 1.1 },
    inclination: { deg: { value: 56, error: 1 } },
  }, { random });
  assertAlmostEquals(v404.accretor_mass_function_msun!.median / 6.08, 1, 0.01);
  assertAlmostEquals(v404.mass_ratio!.median, 0.06, 0.008);
  assertAlmostEquals(v404.accretor_msun!.median / 12, 1, 0.05);
});

Deno.test("massPlanes() draws curves on which the mass function holds", () => {
  const input = {
    period_d: { value: 0.25, error: 0 },
    k_accretor_kms: { value: 100, error: 5 },
    k_donor_kms: { value: 150, error: 5 },
    inclination: { deg: { value: 60, error: 3 } },
  };
  const solution = solveMasses(input, { random: randomStream(9) });
  const planes = massPlanes(solution, input);
  const sixty = planes.masses.find((curve) => curve.label === "i 60°")!;
  sixty.x.forEach((m1, k) => {
    const q = sixty.y[k]! / m1;
    const { accretor_msun } = keplerMasses({
      period_d: 0.25,
      k_accretor_kms: 150 * q,
      k_donor_kms: 150,
      inclination_deg: 60,
    });
    assertAlmostEquals(accretor_msun / m1, 1, 1e-9);
  });
  assertEquals(planes.draws!.mass_ratio.length, 2000);
  assert(planes.inclinations.length > 0);
});

Deno.test("kCorrection() of a small sphere is that of Lambert's sphere", () => {
  // A sphere far from the accretor, by direct sums over its own angles: no Roche geometry.
  const q = 0.01, filling = 0.02;
  const { position, count } = donorSurface(q, { filling, rings: 8 });
  const radius = Math.hypot(
    position[3 * (count - 1)]! - 1,
    ...position.slice(3 * count - 2, 3 * count),
  );
  let top = 0, bottom = 0;
  for (let step = 0; step < 24; step++) {
    const phase = 2 * Math.PI * (step + 0.5) / 24, tilt = Math.PI / 3;
    const c = Math.cos(phase), s = Math.sin(phase);
    let flux = 0, moment = 0;
    for (let i = 0; i < 120; i++) {
      for (let j = 0; j < 240; j++) {
        const theta = Math.PI * (i + 0.5) / 120, psi = 2 * Math.PI * (j + 0.5) / 240;
        const [x, y, z] = [
          Math.sin(theta) * Math.cos(psi),
          Math.sin(theta) * Math.sin(psi),
          Math.cos(theta),
        ];
        const seen = x * Math.sin(tilt) * c - y * Math.sin(tilt) * s + z * Math.cos(tilt);
        if (x >= 0 || seen <= 0) continue;
        const light = -x * seen * Math.sin(theta);
        flux += light;
        moment += light * (y * c + x * s);
      }
    }
    top += flux * moment * s;
    bottom += flux * flux * s * s;
  }
  const expected = 1 + radius * (1 + q) * top / bottom;
  const found = kCorrection(q, { light: "irradiated", filling, inclination_deg: 60 });
  assertAlmostEquals((found - 1) / (expected - 1), 1, 0.03); // the source is 1/radius ≈ 100 radii away
});

Deno.test("kCorrection() of a Roche lobe agrees with sums over its surface by differences", () => {
  // Surface elements as cross products of finite differences of the lobe's radius: no tiles, no
  // gradient of the potential.
  const q = 0.5, mu = q / (1 + q), tilt = 75 * Math.PI / 180;
  const lobe = lobeSurface(q);
  const place = (theta: number, psi: number) => {
    const u = [
      -Math.cos(theta),
      Math.sin(theta) * Math.cos(psi),
      Math.sin(theta) * Math.sin(psi),
    ] as const;
    const r = lobe.radius(u);
    return [1 + r * u[0], r * u[1], r * u[2]] as const;
  };
  const elements: number[][] = [];
  const rings = 50, around = 100, h = 1e-4;
  for (let i = 0; i < rings; i++) {
    for (let j = 0; j < around; j++) {
      const theta = Math.PI * (i + 0.5) / rings, psi = 2 * Math.PI * (j + 0.5) / around;
      const at = place(theta, psi), a = place(theta + h, psi), b = place(theta, psi + h);
      const [u, v] = [a, b].map((p) => p.map((x, k) => (x - at[k]!) / h)) as [number[], number[]];
      const n = [
        -(u[1]! * v[2]! - u[2]! * v[1]!),
        -(u[2]! * v[0]! - u[0]! * v[2]!),
        -(u[0]! * v[1]! - u[1]! * v[0]!),
      ];
      const outwards = n[0]! * (at[0] - 1) + n[1]! * at[1] + n[2]! * at[2];
      const sign = Math.sign(outwards);
      const d = Math.hypot(...at);
      const facing = -sign * (n[0]! * at[0] + n[1]! * at[1] + n[2]! * at[2]) / d;
      if (facing <= 0) continue;
      const size = Math.hypot(...n);
      // Light: facing/size is the cosine, 1/d² the dilution, size the area, all over one factor.
      elements.push([...n.map((x) => sign * x / size), at[1], at[0] - mu, facing / (d * d)]);
    }
  }
  let top = 0, bottom = 0;
  for (let step = 0; step < 48; step++) {
    const c = Math.cos(2 * Math.PI * step / 48), s = Math.sin(2 * Math.PI * step / 48);
    let flux = 0, moment = 0;
    for (const [nx, ny, nz, y, x, light] of elements) {
      const seen = nx! * Math.sin(tilt) * c - ny! * Math.sin(tilt) * s + nz! * Math.cos(tilt);
      if (seen <= 0) continue;
      flux += seen * light!;
      moment += seen * light! * (y! * c + x! * s);
    }
    top += flux * moment * s;
    bottom += flux * flux * s * s;
  }
  const found = kCorrection(q, { light: "irradiated", inclination_deg: 75 });
  // Both cut the surface into pieces of about 3 degrees.
  assertAlmostEquals(found / (top / bottom * (1 + q)), 1, 0.005);
});

Deno.test("kCorrection() keeps the order of L1, irradiated face, centre and far side", () => {
  for (const q of [0.05, 0.2, 0.5, 1]) {
    const irradiated = kCorrection(q, { light: "irradiated" });
    const quenched = kCorrection(q, { light: "quenched" });
    assert(irradiated < 1 && quenched > 1);
    const shadowed = kCorrection(q, { light: "irradiated", shadow_deg: 5 });
    assert(shadowed > irradiated && shadowed < 1);
    const range = kCorrectionRange(q, { light: "irradiated" });
    assertEquals(range.unshadowed, irradiated);
    assert(range.shadowed > shadowed && range.shadowed < 1);
  }
  assertThrows(
    () => kCorrection(0.2, { light: "irradiated", shadow_deg: 40 }),
    InputError,
    "current value is 40 deg",
  );
  assertThrows(
    () => kCorrection(0.2, { light: "quenched", shadow_deg: -1 }),
    InputError,
    "shadow_deg",
  );
});
