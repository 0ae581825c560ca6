import { assert, assertAlmostEquals, assertEquals, assertThrows } from "@std/assert";
import { InputError, NotConverged, WorkError } from "@millrace/millrace/errors";
import { findRoot, integrateOde, type OdeEnd } from "@millrace/millrace/numerics";

const swing = (_t: number, [x, v]: Float64Array) => Float64Array.of(v!, -x!);

Deno.test("integrateOde() follows a Kepler orbit round when eccentricity is 0.6", () => {
  // Starts at periastron: x = 1 − e, speed √((1 + e)/(1 − e)), period 2π.
  const kepler = (_t: number, [x, y, vx, vy]: Float64Array) => {
    const r3 = Math.hypot(x!, y!) ** 3;
    return Float64Array.of(vx!, vy!, -x! / r3, -y! / r3);
  };
  const start = [0.4, 0, 0, 2];
  for (const tolerance of [1e-8, 1e-12]) {
    const end = integrateOde(kepler, start, { from: 0, to: 2 * Math.PI, tolerance });
    // Errors add up over some tens of steps and grow along the orbit: a thousand tolerances.
    for (let i = 0; i < 4; i++) assertAlmostEquals(end.state[i]!, start[i]!, 1000 * tolerance);
  }
  assertEquals(start, [0.4, 0, 0, 2]);
});

Deno.test("integrateOde() interpolates within its steps when asked", () => {
  let worst = 0;
  let at = 0;
  integrateOde(swing, [0, 1], {
    from: 0,
    to: 10,
    tolerance: 1e-10,
    onStep: (step) => {
      for (; at <= step.t; at += 0.01) {
        worst = Math.max(worst, Math.abs(step.at(at)[0]! - Math.sin(at)));
      }
    },
  });
  assert(at > 9.99);
  assert(worst < 1e-8, `${worst}`);
});

Deno.test("integrateOde() stops where it is told and leads to a root", () => {
  let crossing = 0;
  const end = integrateOde(swing, [1, 0], {
    from: 0,
    to: 100,
    onStep: ({ t_before, t, state, at }) => {
      if (state[0]! > 0) return true;
      crossing = findRoot((inside) => at(inside)[0]!, [t_before, t]);
      return false;
    },
  });
  assertAlmostEquals(crossing, Math.PI / 2, 1e-9);
  assert(end.stopped && end.t < 10);
});

Deno.test("integrateOde() runs backwards when the end comes first", () => {
  const end = integrateOde((_t, y) => y.map((value) => -value), [1], { from: 1, to: -1 });
  assertAlmostEquals(end.state[0]!, Math.exp(2), 1e-8);
  assertEquals(end.t, -1);
});

Deno.test("integrateOde() returns the start when the range is empty", () => {
  assertEquals(integrateOde(swing, [1, 2], { from: 3, to: 3 }).state, Float64Array.of(1, 2));
});

Deno.test("integrateOde() carries what it reached when the steps run out", () => {
  const error = assertThrows(
    () => integrateOde(swing, [1, 0], { from: 0, to: 1e6, max_steps: 20 }),
    NotConverged,
    "in 20 steps: reached",
  );
  const partial = error.partial as OdeEnd;
  assert(partial.t > 0 && partial.state.length === 2);
});

Deno.test("integrateOde() says what is wrong when input or derivative is", () => {
  const flat = () => Float64Array.of(NaN);
  assertThrows(() => integrateOde(flat, [1], { from: 0, to: 1 }), WorkError, "not finite at 0");
  assertThrows(() => integrateOde(swing, [1, NaN], { from: 0, to: 1 }), InputError, "finite");
  assertThrows(
    () => integrateOde(swing, [1, 0], { from: 0, to: 1, tolerance: 0 }),
    InputError,
    "tolerance must be from 1e-15 to 1: current value is 0",
  );
});
