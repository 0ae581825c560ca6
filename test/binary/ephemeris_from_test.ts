import { assertEquals, assertThrows } from "@std/assert";
import { ephemerisFrom } from "../../engine/binary/mod.ts";
import { InputError } from "../../engine/errors.ts";

Deno.test("ephemerisFrom() fills what is left out and keeps a zero in two parts", () => {
  const ephemeris = ephemerisFrom({ period_d: 0.2, zero_bjd_tdb: [2460311, 0.123456789012] });
  assertEquals(ephemeris.zero, [2460311, 0.123456789012]);
  assertEquals(ephemeris.zero_marks, "donor-conjunction");
  assertEquals([ephemeris.period_error_d, ephemeris.covariance_d2], [0, 0]);
});

Deno.test("ephemerisFrom() refuses what is no period or no Julian date", () => {
  for (const period_d of [0, -1, NaN, Infinity]) {
    assertThrows(
      () => ephemerisFrom({ period_d, zero_bjd_tdb: 2460311.5 }),
      InputError,
      "Cannot make ephemeris as the period must be positive",
    );
  }
  for (const zero_bjd_tdb of [60311.5, NaN, 2.46e16]) {
    assertThrows(
      () => ephemerisFrom({ period_d: 0.1, zero_bjd_tdb }),
      InputError,
      "the zero must be a full Julian date, from 2400000 to 2500000",
    );
  }
});
