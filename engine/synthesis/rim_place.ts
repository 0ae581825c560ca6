/** A place on the rim and the velocity of its gas in map coordinates. */
export interface RimPlace {
  /** From the accretor towards the donor, a. */
  readonly x: number;
  /** Along the donor's orbital motion, a. */
  readonly y: number;
  /** Map coordinate, km/s. */
  readonly vx_kms: number;
  /** Map coordinate, km/s. */
  readonly vy_kms: number;
}
