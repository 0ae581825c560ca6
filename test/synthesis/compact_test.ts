import { assertAlmostEquals } from "@std/assert";
import { synthesize } from "@millrace/millrace/synthesis";
import { binary, evenSampling, moments, orbit } from "./samplings.ts";

const phases = orbit(8);

Deno.test("synthesize() of the accretor's line follows the accretor, redshifted", () => {
  const sampling = evenSampling(phases, { half_kms: 1000, step_kms: 10 });
  const accretor = { redshift_kms: 35, sigma_kms: 30 };
  const flux = synthesize({ parts: ["accretor"], accretor }, { binary, sampling });
  for (const [i, phase] of phases.entries()) {
    const { light, mean, sigma } = moments(flux, sampling, i);
    assertAlmostEquals(light, 100, 1e-5);
    assertAlmostEquals(mean, 35 - 70 * Math.sin(2 * Math.PI * phase), 1e-5);
    assertAlmostEquals(sigma, 50, 1e-4);
  }
});

Deno.test("synthesize() of an outflow is a pedestal with a trough on the blue side at all phases", () => {
  const sampling = evenSampling(phases, { half_kms: 8000, step_kms: 20 });
  const whole = { trough_equivalent_width_kms: 300, trough_speed_kms: 2000 };
  const flux = synthesize({ parts: ["outflow"], outflow: whole }, { binary, sampling });
  const pedestal = synthesize({ parts: ["outflow"] }, { binary, sampling });
  const trough = flux.map((value, n) => value - pedestal[n]!);
  for (const [i, phase] of phases.entries()) {
    const accretor = -70 * Math.sin(2 * Math.PI * phase);
    const broad = moments(pedestal, sampling, i), narrow = moments(trough, sampling, i);
    assertAlmostEquals(broad.light, 500, 1e-4);
    assertAlmostEquals(broad.mean, accretor, 1e-3);
    assertAlmostEquals(broad.sigma, Math.hypot(800, 40), 0.01);
    assertAlmostEquals(narrow.light, -300, 1e-4);
    assertAlmostEquals(narrow.mean, accretor - 2000, 1e-3);
  }
});
