import { assert, assertAlmostEquals, assertEquals, assertThrows } from "@std/assert";
import { InputError } from "@millrace/millrace/errors";
import {
  decorrelatedOrbit,
  type Ephemeris,
  moveZero,
  orbitalPhase,
  orbitsSinceZero,
  phaseError,
} from "@millrace/millrace/binary";
import { daysBetween, type SplitDate } from "@millrace/millrace/sky";

const linear: Ephemeris = {
  period_d: 0.0823714,
  period_error_d: 4e-7,
  zero: [2460311, 0.12107],
  zero_error_d: 3e-4,
  covariance_d2: -6e-11,
  period_derivative: 0,
  zero_marks: "donor-conjunction",
};

/** T(E) as the type's documentation says it. */
function instantOf({ period_d, period_derivative, zero }: Ephemeris, orbits: number): SplitDate {
  return [zero[0], zero[1] + period_d * orbits + period_d * period_derivative * orbits ** 2 / 2];
}

Deno.test("orbitalPhase() inverts the ephemeris, before and after its zero", () => {
  for (const period_derivative of [0, 1e-9, -3e-10]) {
    const ephemeris = { ...linear, period_derivative };
    for (const orbits of [0, 0.25, 3.999, -0.1, -1234.5, 20000.75]) {
      const { cycle, phase } = orbitalPhase(ephemeris, instantOf(ephemeris, orbits));
      assertEquals(cycle, Math.floor(orbits));
      // 1e-12 d of rounding in the instant is 1e-11 cycles; ten times that for the cycle count
      assertAlmostEquals(phase, orbits - Math.floor(orbits), 1e-9, `${orbits}`);
    }
  }
});

Deno.test("orbitalPhase() stays below one just before the zero", () => {
  const { cycle, phase } = orbitalPhase({ ...linear, zero: [2460311, 0] }, [2460311, -1e-19]);
  assertEquals({ cycle, phase }, { cycle: 0, phase: 0 });
});

Deno.test("orbitalPhase() matters for a quadratic term over many cycles", () => {
  const bent = { ...linear, period_derivative: 1e-9 };
  const instant = instantOf(bent, 20000);
  // ½·Ṗ·E² = 0.2 cycles
  assertAlmostEquals(orbitsSinceZero(linear, instant) - 20000, 0.2, 1e-6);
});

Deno.test("phaseError() is smallest at the decorrelated orbit and follows the covariance", () => {
  const best = decorrelatedOrbit(linear);
  assertAlmostEquals(best, 375, 1e-9);
  const at = (orbits: number) => phaseError(linear, instantOf(linear, orbits));
  assert(at(best) < at(best - 50) && at(best) < at(best + 50));
  assertAlmostEquals(at(0) * linear.period_d, 3e-4, 1e-12);
  const far = Math.sqrt(3e-4 ** 2 - 2 * 5000 * 6e-11 + (5000 * 4e-7) ** 2);
  assertAlmostEquals(at(5000) * linear.period_d, far, 1e-10);
});

Deno.test("moveZero() keeps phases and their errors", () => {
  for (const period_derivative of [0, 2e-10]) {
    const ephemeris = { ...linear, period_derivative };
    const moved = moveZero(ephemeris, 5000);
    const instant: SplitDate = [2461000, 0.3];
    const before = orbitalPhase(ephemeris, instant), after = orbitalPhase(moved, instant);
    assertEquals(before.cycle - after.cycle, 5000);
    assertAlmostEquals(after.phase, before.phase, 1e-8);
    assert(moved.zero[1] >= 0 && moved.zero[1] < 1);
    // The quadratic term's own share in the error is left out: 1e-6 relative here.
    assertAlmostEquals(phaseError(moved, instant) / phaseError(ephemeris, instant), 1, 1e-5);
  }
  const there = moveZero(moveZero(linear, -321), 321);
  assertAlmostEquals(daysBetween(there.zero, linear.zero), 0, 1e-12);
  assertAlmostEquals(there.covariance_d2, linear.covariance_d2, 1e-20);
});

Deno.test("moveZero() at the decorrelated orbit leaves no covariance", () => {
  const best = moveZero(linear, Math.round(decorrelatedOrbit(linear)));
  assertAlmostEquals(best.covariance_d2, 0, 4e-7 ** 2);
  assert(best.zero_error_d < linear.zero_error_d);
  assertEquals(decorrelatedOrbit({ ...linear, period_error_d: 0, covariance_d2: 0 }), 0);
});

Deno.test("orbitalPhase() and phaseError() refuse impossible ephemerides", () => {
  const instant: SplitDate = [2460400, 0];
  assertThrows(() => orbitalPhase({ ...linear, period_d: 0 }, instant), InputError, "period");
  assertThrows(
    () => orbitalPhase({ ...linear, period_derivative: -1 }, instant),
    InputError,
    "key period_derivative",
  );
  assertThrows(() => phaseError({ ...linear, covariance_d2: 1 }, instant), InputError, "1 d2");
  assertThrows(() => moveZero(linear, 0.5), InputError, "whole number");
});
