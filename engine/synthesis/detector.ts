import type { RandomStream } from "../numerics/mod.ts";
import type { InstrumentFaults } from "./observation.ts";

/** Electrons that an exposure is expected to collect. */
export interface ExpectedElectrons {
  /** From the target, per pixel. */
  readonly target: Float64Array;
  /** From the sky, per pixel. */
  readonly sky: Float64Array;
}

/** A spectrum after readout and subtraction of the sky, per pixel, electrons. */
export interface RecordedElectrons {
  /** Target and what is left of the sky. */
  readonly flux: Float64Array;
  /** One standard deviation, from the expected electrons: cosmic rays are not in it. */
  readonly error: Float64Array;
}

/**
 * What a detector makes of expected electrons: photon noise of target and sky, the noise of reading
 * out, cosmic rays; the sky is subtracted but for a stated residual. A cosmic ray leaves most of its
 * charge in one pixel and some in a neighbour.
 */
export function recordElectrons(
  expected: ExpectedElectrons,
  { instrument, exposure_s, residual, stream }: {
    readonly instrument: InstrumentFaults;
    readonly exposure_s: number;
    readonly residual: number;
    readonly stream: RandomStream;
  },
): RecordedElectrons {
  const { read_noise = 5, cosmic_rays = 0, cosmic_ray_electrons = 3000 } = instrument;
  const { target, sky } = expected;
  const count = target.length;
  const flux = new Float64Array(count);
  const error = new Float64Array(count);
  for (let n = 0; n < count; n++) {
    const electrons = Math.max(0, target[n]! + sky[n]!);
    flux[n] = stream.poisson(electrons) + read_noise * stream.normal() - (1 - residual) * sky[n]!;
    error[n] = Math.sqrt(electrons + read_noise * read_noise);
  }
  const hits = stream.poisson(cosmic_rays * count * exposure_s / 3600);
  for (let k = 0; k < hits; k++) {
    const pixel = stream.integer(count);
    const charge = -cosmic_ray_electrons * Math.log(1 - stream.uniform());
    const beside = pixel + (stream.uniform() < 0.5 ? -1 : 1);
    const share = 0.5 * stream.uniform();
    flux[pixel]! += (1 - share) * charge;
    if (beside >= 0 && beside < count) flux[beside]! += share * charge;
  }
  return { flux, error };
}

/**
 * Linear interpolation to N pixels from N + 1 detector pixels, of which the n-th lies a share of a
 * pixel before the n-th output pixel: what many pipelines do. The written errors do not know that
 * neighbours now share their noise.
 */
export function resampleShifted(recorded: RecordedElectrons, shift: number): RecordedElectrons {
  const count = recorded.flux.length - 1;
  const flux = new Float64Array(count);
  const error = new Float64Array(count);
  for (let n = 0; n < count; n++) {
    flux[n] = (1 - shift) * recorded.flux[n]! + shift * recorded.flux[n + 1]!;
    error[n] = Math.hypot((1 - shift) * recorded.error[n]!, shift * recorded.error[n + 1]!);
  }
  return { flux, error };
}
