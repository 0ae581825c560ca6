import { assertAlmostEquals, assertEquals, assertThrows } from "@std/assert";
import { InputError } from "@millrace/millrace/errors";
import {
  corotationPlace,
  corotationVelocity,
  describeGeometry,
  donorDensity,
  keplerianRadius,
  keplerianSpeed,
  keplerMasses,
  keplerSeparation,
  lobeRadius,
  lobeRadiusEggleton,
  lobeRadiusPaczynski,
  massFunction,
  tidalRadius,
} from "@millrace/millrace/binary";
import { casesOf } from "./reference.ts";

Deno.test("keplerMasses() gives masses and separations of the reference orbits", () => {
  // reference/orbit.json kind masses: Kepler's third law with nominal GM of the Sun (numpy)
  for (const c of casesOf("orbit", "masses")) {
    const orbit = {
      period_d: c.P_d,
      k_accretor_kms: c.K1,
      k_donor_kms: c.K2,
      eccentricity: c.e ?? 0,
    };
    const masses = keplerMasses({ ...orbit, inclination_deg: c.i_deg });
    assertAlmostEquals(masses.accretor_msun / c.M1_Msun, 1, 1e-9, c.id);
    assertAlmostEquals(masses.donor_msun / c.M2_Msun, 1, 1e-9, c.id);
    assertAlmostEquals(masses.separation_rsun / c.a_Rsun, 1, 1e-9, c.id);
    const least = keplerMasses(orbit);
    assertAlmostEquals(least.accretor_msun / c.M1_sin3i, 1, 1e-9, c.id);
    assertAlmostEquals(least.donor_msun / c.M2_sin3i, 1, 1e-9, c.id);
    assertAlmostEquals(least.separation_rsun / c.a_sini_Rsun, 1, 1e-9, c.id);
    const total = masses.accretor_msun + masses.donor_msun;
    assertAlmostEquals(keplerSeparation(total, c.P_d) / masses.separation_rsun, 1, 1e-12, c.id);
  }
});

Deno.test("massFunction() gives the reference values and two published ones", () => {
  // reference/orbit.json kind mass_function: the same formula (numpy)
  for (const c of casesOf("orbit", "mass_function")) {
    const f = massFunction(c.K_km_s, c.P_d, { eccentricity: c.e });
    assertAlmostEquals(f / c.f_Msun, 1, 1e-9, c.id);
  }
  // kind worked_example: published results, from memory; inside their stated errors
  for (const c of casesOf("orbit", "worked_example")) {
    const f = massFunction(c.K_km_s, c.P_d, { eccentricity: c.e });
    assertAlmostEquals(f / c.f_Msun, 1, 1e-9, c.id);
    assertAlmostEquals(f, c.published_f, Math.max(c.published_f_error, 0.01 * f), c.name);
  }
});

Deno.test("donorDensity() gives the reference values for three lobe radii", () => {
  // reference/orbit.json kind density: Kepler and lobe radii (scipy)
  for (const c of casesOf("orbit", "density")) {
    const by = (lobe_radius_over_a: number) =>
      donorDensity(c.P_h / 24, c.q, { lobe_radius_over_a });
    assertAlmostEquals(by(lobeRadiusPaczynski(c.q)) / c.rho_g_cm3_paczynski, 1, 1e-9, c.id);
    assertAlmostEquals(by(lobeRadiusEggleton(c.q)) / c.rho_g_cm3_eggleton, 1, 1e-9, c.id);
    // 1e-6 relative: that field's quadrature
    const exact = donorDensity(c.P_h / 24, c.q) / c.rho_g_cm3_exact_volume_radius;
    assertAlmostEquals(exact, 1, 1e-6, c.id);
  }
});

Deno.test("describeGeometry() gives v sin i over K2 of the exact lobe", () => {
  // reference/orbit.json kind rotation: (1+q) R2/a (scipy), 1e-6 relative
  for (const c of casesOf("orbit", "rotation")) {
    const shape = describeGeometry({
      mass_ratio: c.q,
      k_donor_kms: 300,
      k_accretor_kms: 300 * c.q,
    });
    const ratio = shape.donor_v_sin_i_kms! / 300;
    assertAlmostEquals(ratio / c.vsini_over_K2_exact_volume_radius, 1, 1e-6, c.id);
    assertAlmostEquals((1 + c.q) * lobeRadius(c.q) / ratio, 1, 1e-12, c.id);
  }
});

Deno.test("describeGeometry() leaves what it cannot know null", () => {
  const shape = describeGeometry({ mass_ratio: 2 });
  assertEquals(shape.tidal_radius_over_a, null);
  assertEquals(shape.donor_radius_rsun, null);
  assertEquals(shape.donor_density_g_cm3, null);
  assertEquals(shape.l1, null);
  for (const value of Object.values(shape)) assertEquals(Number.isNaN(value), false);
  const full = describeGeometry({
    mass_ratio: 0.25,
    k_accretor_kms: 80,
    k_donor_kms: 320,
    period_d: 0.1,
    separation_rsun: 0.9,
  });
  assertAlmostEquals(full.donor_radius_rsun!, 0.9 * lobeRadius(0.25), 1e-12);
  assertAlmostEquals(full.l1!.vy_kms, 400 * (full.l1_over_a - 0.2), 1e-9);
  assertAlmostEquals(full.tidal_speed_kms!, 400 * Math.sqrt(0.8 / tidalRadius(0.25)!), 1e-9);
});

Deno.test("keplerianSpeed() and corotationVelocity() round-trip with their inverses", () => {
  const binary = { mass_ratio: 0.3, k_accretor_kms: 90, k_donor_kms: 300 };
  for (const radius of [0.05, 0.2, 0.6]) {
    assertAlmostEquals(keplerianRadius(keplerianSpeed(radius, binary), binary), radius, 1e-14);
  }
  const place = corotationPlace(corotationVelocity({ x: 0.4, y: -0.3 }, binary), binary);
  assertAlmostEquals(place.x, 0.4, 1e-14);
  assertAlmostEquals(place.y, -0.3, 1e-14);
});

Deno.test("Kepler's helpers refuse nonsense by name", () => {
  assertThrows(() => massFunction(-3, 0.1), InputError, "current value is -3 km/s (key k_kms)");
  assertThrows(() => massFunction(3, 0), InputError, "key period_d");
  assertThrows(() => massFunction(3, 1, { eccentricity: 1 }), InputError, "eccentricity");
  assertThrows(
    () => keplerMasses({ period_d: 1, k_accretor_kms: 1, k_donor_kms: 1, inclination_deg: 120 }),
    InputError,
    "current value is 120 deg",
  );
  const binary = { mass_ratio: 0.3, k_accretor_kms: 90, k_donor_kms: 300 };
  assertThrows(() => keplerianRadius(0, binary), InputError, "the speed must be positive");
});
