import { assert, assertAlmostEquals, assertEquals } from "@std/assert";
import * as constants from "@millrace/millrace/constants";
import reference from "./reference/constants.json" with { type: "json" };

const {
  ASTRONOMICAL_UNIT_M,
  BOLTZMANN_J_K,
  DAY_S,
  GM_SUN_M3_S2,
  GRAVITATION_M3_KG_S2,
  JULIAN_YEAR_S,
  LIGHT_TIME_AU_S,
  MJD_ZERO_JD,
  SOLAR_RADIUS_M,
  SPEED_OF_LIGHT_KMS,
  STEFAN_BOLTZMANN_W_M2_K4,
  TT_MINUS_TAI_S,
} = constants;

const HERE: Record<string, number> = {
  c: SPEED_OF_LIGHT_KMS.value * 1000,
  G: GRAVITATION_M3_KG_S2.value,
  GM_sun: GM_SUN_M3_S2.value,
  R_sun: SOLAR_RADIUS_M.value,
  M_sun: GM_SUN_M3_S2.value / GRAVITATION_M3_KG_S2.value,
  au: ASTRONOMICAL_UNIT_M.value,
  day: DAY_S.value,
  julian_year: JULIAN_YEAR_S.value,
  TT_minus_TAI: TT_MINUS_TAI_S.value,
  JD_minus_MJD: MJD_ZERO_JD.value,
  light_time_1au: LIGHT_TIME_AU_S.value,
  unit_PK3_over_2piG: DAY_S.value * 1e9 / (2 * Math.PI * GM_SUN_M3_S2.value),
  unit_PK_over_2pi: DAY_S.value * 1e3 / (2 * Math.PI * SOLAR_RADIUS_M.value),
};

// reference/constants.json: astropy.constants, scipy.constants (CODATA 2018; IAU 2015 B3, 2012 B2), to the
// 14 digits given there.
Deno.test("constants equal the reference when their digits are compared", () => {
  const cases = reference.cases.filter((one) => one.kind === "constant");
  assertEquals(cases.length, 13);
  for (const { id, name, value } of cases) {
    assertAlmostEquals(HERE[name!]!, value!, 1e-13 * value!, `${id} ${name}`);
  }
});

Deno.test("every constant has unit, uncertainty and source when listed", () => {
  for (const [name, constant] of Object.entries(constants)) {
    assert(Number.isFinite(constant.value) && constant.value > 0, name);
    assert(constant.uncertainty >= 0 && constant.uncertainty < 1e-4 * constant.value, name);
    assert(constant.unit.length > 0 && constant.source.length > 0, name);
  }
});

Deno.test("STEFAN_BOLTZMANN_W_M2_K4 equals the CODATA value when derived", () => {
  // CODATA 2018: 5.670374419e-8.
  assertAlmostEquals(STEFAN_BOLTZMANN_W_M2_K4.value, 5.670374419e-8, 1e-17);
  assertEquals(BOLTZMANN_J_K.uncertainty, 0);
});
