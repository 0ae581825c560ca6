import { assertEquals } from "@std/assert";
import * as constants from "@millrace/millrace/constants";
import reference from "./reference/constants.json" with { type: "json" };

Deno.test("constants are those of the reference", () => {
  // reference/constants.json kind constant: SI, CODATA 2018, IAU 2012 B2, IAU 2015 B3
  const expected = (name: string) => reference.cases.find((one) => one.name === name)!.value;
  assertEquals(constants.SPEED_OF_LIGHT_KMS.value * 1000, expected("c"));
  assertEquals(constants.GRAVITATION_M3_KG_S2.value, expected("G"));
  assertEquals(constants.SOLAR_MASS_PARAMETER_M3_S2.value, expected("GM_sun"));
  assertEquals(constants.SOLAR_RADIUS_M.value, expected("R_sun"));
  assertEquals(constants.ASTRONOMICAL_UNIT_M.value, expected("au"));
  assertEquals(constants.DAY_S.value, expected("day"));
});
