import { assertAlmostEquals, assertThrows } from "@std/assert";
import { InputError } from "@millrace/millrace/errors";
import { binaryFrom, keplerianVelocity } from "@millrace/millrace/binary";
import { spotPlace, synthesize } from "@millrace/millrace/synthesis";
import stream from "../reference/stream.json" with { type: "json" };
import { binary, evenSampling, moments, orbit } from "./samplings.ts";

Deno.test("spotPlace() is on the reference stream at every listed radius", () => {
  // reference/stream.json: scipy DOP853; Lubow & Shu 1975. Tolerance 1e-8, plus interpolation here.
  for (const c of stream.cases) {
    const speeds = binaryFrom({ k_accretor_kms: c.q * 100, k_donor_kms: 100 });
    const sum = 100 * (1 + c.q);
    for (const point of c.path) {
      if (point.r > 0.98 * c.x_L1 || point.r < c.r_min) continue;
      const place = spotPlace({ parts: ["spot"], spot: { radius_over_a: point.r } }, speeds);
      assertAlmostEquals(place.x, point.x, 1e-7, `${c.id} x at ${point.r}`);
      assertAlmostEquals(place.y, point.y, 1e-7, `${c.id} y at ${point.r}`);
      assertAlmostEquals(place.vx_kms / sum, point.Vx, 2e-7, `${c.id} Vx at ${point.r}`);
      assertAlmostEquals(place.vy_kms / sum, point.Vy, 2e-7, `${c.id} Vy at ${point.r}`);
    }
  }
});

Deno.test("spotPlace() goes from the stream's velocity to the rim's", () => {
  const at = (mixing: number) => spotPlace({ parts: ["spot"], spot: { mixing } }, binary);
  const rim = keplerianVelocity(at(1), binary);
  assertAlmostEquals(at(1).vx_kms, rim.vx_kms, 1e-9);
  assertAlmostEquals(at(1).vy_kms, rim.vy_kms, 1e-9);
  assertAlmostEquals(at(0.5).vx_kms, (at(0).vx_kms + rim.vx_kms) / 2, 1e-9);
});

Deno.test("spotPlace() names a rim that the stream cannot reach", () => {
  assertThrows(
    () => spotPlace({ parts: ["spot"], disc: { outer_radius_over_a: 0.05 } }, binary),
    InputError,
    "closest approach",
  );
});

Deno.test("synthesize() of a spot follows its S-wave with its width and its light", () => {
  const phases = orbit(16);
  const sampling = evenSampling(phases, { step_kms: 10, sigma_kms: 30 });
  const model = { parts: ["spot"], spot: { sigma_kms: 40, mixing: 0.3 } } as const;
  const flux = synthesize(model, { binary, sampling });
  const { vx_kms, vy_kms } = spotPlace(model, binary);
  for (const [i, phase] of phases.entries()) {
    const angle = 2 * Math.PI * phase;
    const { light, mean, sigma } = moments(flux, sampling, i);
    assertAlmostEquals(mean, -vx_kms * Math.cos(angle) + vy_kms * Math.sin(angle), 1e-6);
    assertAlmostEquals(light, 300, 300e-7);
    assertAlmostEquals(sigma, 50, 1e-4);
  }
});

Deno.test("synthesize() applies the systemic velocity as a factor", () => {
  const systemic_kms = 300;
  const c = 299792.458;
  const moved = evenSampling([0.2], { middle_kms: systemic_kms, step_kms: 10 });
  const rest = evenSampling([0.2], { step_kms: 10 });
  const model = { parts: ["spot"] } as const;
  const there = moments(synthesize(model, { binary, sampling: moved, systemic_kms }), moved, 0);
  const here = moments(synthesize(model, { binary, sampling: rest }), rest, 0);
  const expected = c * ((1 + here.mean / c) * (1 + systemic_kms / c) - 1);
  assertAlmostEquals(there.mean, expected, 1e-6);
});

Deno.test("synthesize() smears a spot as the mean over its exposure", () => {
  const phase_width = 0.12;
  const long = evenSampling([0.3], { phase_width, sigma_kms: 20 });
  const many = 400;
  const short = evenSampling(
    Array.from({ length: many }, (_, k) => 0.3 + ((k + 0.5) / many - 0.5) * phase_width),
    { sigma_kms: 20 },
  );
  const model = { parts: ["spot"], spot: { sigma_kms: 10, tail_deg: 20 } } as const;
  const smeared = synthesize(model, { binary, sampling: long });
  const instants = synthesize(model, { binary, sampling: short });
  const columns = long.velocity_kms.length;
  let peak = 0;
  for (const value of smeared) peak = Math.max(peak, value);
  for (let n = 0; n < columns; n++) {
    let mean = 0;
    for (let i = 0; i < many; i++) mean += instants[i * columns + n]! / many;
    // Gauss–Legendre order chosen for 1e-4 of a profile's own peak.
    assertAlmostEquals(smeared[n]!, mean, 1e-3 * peak);
  }
});

Deno.test("synthesize() beams a spot at the stated phase and keeps its mean light", () => {
  const phases = orbit(20);
  const sampling = evenSampling(phases);
  const spot = { beaming: 0.8, beaming_phase: 0.85 };
  const flux = synthesize({ parts: ["spot"], spot }, { binary, sampling });
  const lights = phases.map((_, i) => moments(flux, sampling, i).light);
  assertAlmostEquals(lights[17]!, 300 * 1.8, 1e-3);
  assertAlmostEquals(lights[7]!, 300 * 0.2, 1e-3);
  assertAlmostEquals(lights.reduce((a, b) => a + b) / 20, 300, 1e-3);
});

Deno.test("synthesize() draws a spot's tail downstream along the rim", () => {
  const phases = orbit(32);
  const sampling = evenSampling(phases, { step_kms: 10 });
  const direction = (tail_deg: number) => {
    const spot = { tail_deg, mixing: 1 };
    const flux = synthesize({ parts: ["spot"], spot }, { binary, sampling });
    let vx = 0, vy = 0;
    for (const [i, phase] of phases.entries()) {
      const { mean } = moments(flux, sampling, i);
      vx -= mean * Math.cos(2 * Math.PI * phase) / 16;
      vy += mean * Math.sin(2 * Math.PI * phase) / 16;
    }
    return Math.atan2(vy + 70, vx) * 180 / Math.PI;
  };
  // ∫ exp(−θ/τ + iθ) dθ has the direction atan τ; the tail is cut off at 8 τ, where 3e-4 is left.
  const tau = 20 * Math.PI / 180;
  assertAlmostEquals(direction(20) - direction(0), Math.atan(tau) * 180 / Math.PI, 0.1);
});
