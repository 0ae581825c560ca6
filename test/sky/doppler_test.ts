import { assertAlmostEquals, assertEquals, assertThrows } from "@std/assert";
import { InputError } from "@millrace/millrace/errors";
import { factorOfVelocity, velocityOfFactor } from "@millrace/millrace/sky";
import constants from "../reference/constants.json" with { type: "json" };

// reference/constants.json doppler: the three formulas in Python, 1e-6 km/s.
Deno.test("velocityOfFactor() matches the reference when conventions differ", () => {
  // deno-lint-ignore no-explicit-any
  const cases = (constants.cases as any[]).filter((one) => one.kind === "doppler");
  assertEquals(cases.length, 4);
  for (const { id, rest_A, obs_A, v_optical_km_s, v_relativistic_km_s, v_log_km_s } of cases) {
    const factor = obs_A / rest_A;
    assertAlmostEquals(velocityOfFactor(factor), v_optical_km_s, 1e-6, id);
    assertAlmostEquals(velocityOfFactor(factor, "relativistic"), v_relativistic_km_s, 1e-6, id);
    assertAlmostEquals(velocityOfFactor(factor, "logarithmic"), v_log_km_s, 1e-6, id);
    // Radio: c (1 − λ0/λ), the definition.
    assertAlmostEquals(
      velocityOfFactor(factor, "radio"),
      299792.458 * (1 - rest_A / obs_A),
      1e-6,
      id,
    );
  }
});

Deno.test("factorOfVelocity() undoes velocityOfFactor() when velocities are high", () => {
  for (const convention of ["optical", "radio", "relativistic", "logarithmic"] as const) {
    for (const velocity of [-30_000, -3000, -1, 0, 5, 3000, 30_000]) {
      const factor = factorOfVelocity(velocity, convention);
      assertAlmostEquals(velocityOfFactor(factor, convention), velocity, 1e-9);
    }
  }
});

Deno.test("factorOfVelocity() agrees to first order when conventions are compared", () => {
  for (const convention of ["radio", "relativistic", "logarithmic"] as const) {
    assertAlmostEquals(factorOfVelocity(3, convention), factorOfVelocity(3), 1.1e-10);
  }
});

Deno.test("velocities are refused when no wavelength has them", () => {
  assertThrows(() => factorOfVelocity(-299_793), InputError, "in the optical convention");
  assertThrows(() => factorOfVelocity(3e5, "radio"), InputError, "in the radio convention");
  assertThrows(() => factorOfVelocity(3e5, "relativistic"), InputError, "km/s");
  assertThrows(() => factorOfVelocity(NaN), InputError);
  assertThrows(() => velocityOfFactor(0), InputError, "must be positive and finite");
});
