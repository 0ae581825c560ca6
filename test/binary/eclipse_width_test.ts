import { assertAlmostEquals, assertEquals, assertGreater, assertThrows } from "@std/assert";
import { InputError } from "@millrace/millrace/errors";
import {
  eccentricAnomaly,
  eclipseWidth,
  inclinationFromEclipse,
  trueAnomaly,
} from "@millrace/millrace/binary";

Deno.test("eclipseWidth() agrees with published geometries of two eclipsing systems", () => {
  // Z Cha (Wood et al. 1986): q 0.1495, i 81.78, white dwarf 0.0534 cycles; OY Car (Wood et al.
  // 1989): q 0.102, i 83.3, 0.0506. All from memory, digits not checked in print: 2 per cent.
  assertAlmostEquals(eclipseWidth(0.1495, 81.78) / 0.0534, 1, 0.02);
  assertAlmostEquals(eclipseWidth(0.102, 83.3) / 0.0506, 1, 0.02);
});

Deno.test("eclipseWidth() grows with inclination and mass ratio", () => {
  for (const q of [0.05, 0.2, 0.8]) {
    let before = 0;
    for (const deg of [78, 82, 86, 90]) {
      const width = eclipseWidth(q, deg);
      if (before > 0) assertGreater(width, before);
      before = width;
    }
  }
  assertGreater(eclipseWidth(0.5, 82), eclipseWidth(0.2, 82));
  assertEquals(eclipseWidth(0.2, 0), 0);
});

Deno.test("inclinationFromEclipse() inverts eclipseWidth() and refuses what is too wide", () => {
  for (const q of [0.08, 0.3, 1]) {
    for (const deg of [79, 84, 89]) {
      const width = eclipseWidth(q, deg);
      if (width > 0) assertAlmostEquals(inclinationFromEclipse(q, width), deg, 1e-5);
    }
  }
  assertThrows(() => inclinationFromEclipse(0.1, 0.2), InputError, "current value is 0.2 cycles");
  assertThrows(() => inclinationFromEclipse(0.1, 0), InputError, "above 0");
  assertThrows(() => eclipseWidth(0.1, 95), InputError, "95 deg");
});

Deno.test("eccentricAnomaly() solves Kepler's equation at every eccentricity", () => {
  for (const e of [0, 0.1, 0.6, 0.95, 0.999]) {
    for (let mean = -10; mean <= 10; mean += 0.37) {
      const anomaly = eccentricAnomaly(mean, e);
      assertAlmostEquals(anomaly - e * Math.sin(anomaly), mean, 1e-13);
    }
  }
  assertThrows(() => eccentricAnomaly(1, 1), InputError, "eccentricity");
  // Half a year past periastron an orbit is at apastron.
  assertAlmostEquals(Math.abs(trueAnomaly(Math.PI, 0.7)), Math.PI, 1e-12);
});
