import { assert, assertAlmostEquals, assertEquals, assertThrows } from "@std/assert";
import { InputError } from "@millrace/millrace/errors";
import {
  airToVacuum,
  CIDDOR_1996,
  MORTON_1991,
  MORTON_2000,
  toAir,
  toVacuum,
  vacuumToAir,
} from "@millrace/millrace/sky";
import constants from "../reference/constants.json" with { type: "json" };

// deno-lint-ignore no-explicit-any
const cases = (kind: string) => (constants.cases as any[]).filter((one) => one.kind === kind);

// reference/constants.json: the published formulas in Python, 1e-7 Å.
Deno.test("toAir() matches the reference when formulas are Morton's and Ciddor's", () => {
  assertEquals(cases("air_vac").length, 11);
  for (const one of cases("air_vac")) {
    const { id, vac_A } = one;
    assertAlmostEquals(toAir(vac_A, MORTON_2000), one.air_morton2000_A, 1e-7, id);
    assertAlmostEquals(toAir(vac_A, CIDDOR_1996), one.air_ciddor1996_A, 1e-7, id);
    assertAlmostEquals(toAir(vac_A, MORTON_1991), one.air_morton1991_A, 1e-7, id);
    assertEquals(vacuumToAir(vac_A), toAir(vac_A, MORTON_2000));
  }
});

// reference/constants.json: brentq on the same formulas, 1e-7 Å.
Deno.test("toVacuum() matches the reference when the inverse was solved by bisection", () => {
  assertEquals(cases("vac_air").length, 8);
  for (const { id, air_A, vac_morton2000_A, vac_ciddor1996_A } of cases("vac_air")) {
    assertAlmostEquals(toVacuum(air_A, MORTON_2000), vac_morton2000_A, 1e-7, id);
    assertAlmostEquals(toVacuum(air_A, CIDDOR_1996), vac_ciddor1996_A, 1e-7, id);
    assertEquals(airToVacuum(air_A), toVacuum(air_A, MORTON_2000));
  }
});

Deno.test("toVacuum() undoes toAir() when wavelengths run from 2001 Å to 5 µm", () => {
  for (const formula of [MORTON_2000, CIDDOR_1996, MORTON_1991]) {
    for (let vacuum = 2001; vacuum < 50_000; vacuum *= 1.1) {
      assertAlmostEquals(toVacuum(toAir(vacuum, formula), formula), vacuum, 1e-11 * vacuum);
    }
  }
});

Deno.test("formulas agree with each other when they should", () => {
  for (let vacuum = 3500; vacuum < 10_000; vacuum += 500) {
    const apart = (CIDDOR_1996.index(vacuum) / MORTON_2000.index(vacuum) - 1) * 299792458;
    assert(Math.abs(apart) < 1, `${vacuum}: ${apart} m/s`);
  }
});

Deno.test("airToVacuum() works as a map over a typed array", () => {
  const vacuum = Float64Array.of(5000, 6000).map(airToVacuum);
  assertEquals(vacuum, Float64Array.of(airToVacuum(5000), airToVacuum(6000)));
});

Deno.test("vacuumToAir() refuses when the wavelength is ultraviolet or none", () => {
  for (const bad of [1999, 0, -5000, NaN, Infinity]) {
    assertThrows(
      () => vacuumToAir(bad),
      InputError,
      "wavelengths in air are defined from 2000 Å on",
    );
    assertThrows(() => airToVacuum(bad), InputError, "from 2000 Å on");
  }
});
