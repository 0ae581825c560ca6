import type { VelocityMap } from "../tomography/mod.ts";

/** One exposure to which light is added. */
export interface ExposureSamples {
  /** Orbital phase at mid-exposure, cycles. */
  readonly phase: number;
  /** Duration, cycles. */
  readonly phase_width: number;
  /** Standard deviation of the instrumental profile, km/s, in the system's frame. */
  readonly sigma_kms: number;
  /** Velocities in the system's frame, km/s; this exposure's are at `from` up to `to`. */
  readonly velocity: Float64Array;
  /** First sample. */
  readonly from: number;
  /** One past the last sample. */
  readonly to: number;
  /** Receives normalised flux, same layout as `velocity`. */
  readonly into: Float64Array;
}

/** A part made ready for one binary. */
export interface Emission {
  /** Adds the part's light to an exposure's samples. */
  readonly addTo: (exposure: ExposureSamples) => void;
  /** Adds its intensity to a velocity map that is being made. */
  readonly addToMap: (map: VelocityMap) => void;
  /** Why no fixed map makes the part's trail, in one sentence; null when one does. */
  readonly no_map: string | null;
}
