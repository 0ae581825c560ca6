// Exposures of an invented system for the tests of this room: a double-peaked line that follows the
// accretor, a narrow S-wave, a sloping continuum, slit losses, photon noise.
import { randomStream } from "../../engine/numerics/mod.ts";
import type { Ephemeris } from "../../engine/binary/mod.ts";
import type { SpectralLine } from "../../engine/sky/mod.ts";
import type { Spectrum } from "../../engine/spectra/mod.ts";

export const C_KMS = 299792.458;

export const H_BETA: SpectralLine = {
  name: "H beta",
  vacuum_angstrom: 4862.69,
  air_angstrom: 4861.33,
  source: "rounded, for tests",
};

export const EPHEMERIS: Ephemeris = {
  period_d: 0.08,
  period_error_d: 1e-7,
  zero: [2460311, 0.5],
  zero_error_d: 1e-4,
  covariance_d2: 0,
  period_derivative: 0,
  zero_marks: "donor-conjunction",
};

export interface Making {
  count?: number;
  orbits?: number;
  signal_to_noise?: number;
  seed?: number;
  pixel_angstrom?: number;
  fwhm_angstrom?: number;
  spot?: number;
  spot_kms?: number;
  spot_width_kms?: number;
  line?: number;
  absorption?: number;
  slit_losses?: boolean;
  low_angstrom?: number;
  high_angstrom?: number;
  group?: number;
  start_d?: number;
}

/** Line profile at velocity v and phase, over the continuum, without noise. */
export function profile(v: number, phase: number, making: Making = {}): number {
  const { spot = 1, spot_kms = 600, spot_width_kms = 60, line = 1.5, absorption = 0 } = making;
  const orbit = 2 * Math.PI * phase;
  const centre = -60 * Math.sin(orbit);
  const peak = (c: number, w: number) => Math.exp(-0.5 * ((v - c) / w) ** 2);
  return line * (peak(centre - 550, 220) + peak(centre + 550, 220)) -
    absorption * peak(centre, 700) +
    spot * peak(spot_kms * Math.sin(orbit + 0.6), spot_width_kms);
}

/** Spectra with errors that tell the truth. */
export function madeSpectra(making: Making = {}): Spectrum[] {
  const {
    count = 60,
    orbits = 1.3,
    signal_to_noise = 40,
    seed = 1,
    pixel_angstrom = 0.5,
    fwhm_angstrom = 1.2,
    slit_losses = true,
    low_angstrom = 4700,
    high_angstrom = 5030,
    group = 0,
    start_d = 0,
  } = making;
  const random = randomStream(seed);
  const n = Math.floor((high_angstrom - low_angstrom) / pixel_angstrom);
  return Array.from({ length: count }, (_, k) => {
    const day = start_d + (k / count) * orbits * EPHEMERIS.period_d;
    const phase = day / EPHEMERIS.period_d;
    const wavelength_angstrom = Float64Array.from(
      { length: n },
      (_, i) => (low_angstrom + i * pixel_angstrom) * (1 + 1e-7 * k),
    );
    const level = 1000 * (slit_losses ? 1 + 0.3 * Math.sin(7 * k) : 1);
    const flux = new Float64Array(n);
    const error = new Float64Array(n);
    wavelength_angstrom.forEach((w, i) => {
      const v = C_KMS * (w / H_BETA.vacuum_angstrom - 1);
      const shape = 1 - 2e-5 * v + profile(v, phase, making);
      error[i] = level / signal_to_noise * Math.sqrt(Math.max(shape, 0.05));
      flux[i] = level * shape + error[i]! * random.normal();
    });
    return {
      source: `night-${group}/${String(k).padStart(3, "0")}.fits`,
      group,
      wavelength_angstrom,
      flux,
      error,
      errors_given: true,
      mid: [2460311, 0.5 + day] as const,
      exposure_s: 0.9 * orbits * EPHEMERIS.period_d * 86400 / count,
      observer_factor: 1.00005,
      resolution_angstrom: wavelength_angstrom.map(() => fwhm_angstrom),
    };
  });
}
