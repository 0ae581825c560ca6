/**
 * The intensity of line emission in velocity space, in the inertial frame along axes that rotate
 * with the binary: donor at (0, +K2), accretor at (0, −K1).
 */
export interface VelocityMap {
  /** Pixels along each side, odd; the middle one is at (0, 0). */
  readonly pixels: number;
  /** Velocity of the centre of the outermost pixel, km/s. */
  readonly half_width_kms: number;
  /**
   * Normalised flux × km/s per (km/s)², `pixels`² values, row-major with stride `pixels`: rows of
   * increasing Vy, columns of increasing Vx. Sum times pixel area is the equivalent width in km/s.
   */
  readonly intensity: Float64Array;
}
