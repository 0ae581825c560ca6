/** Places of a cloud's points, N values each, in units of the separation, origin at the accretor. */
export interface CloudPlace {
  /** Towards the donor. */
  readonly x: Float64Array;
  /** Along the donor's motion. */
  readonly y: Float64Array;
  /** Along the orbital axis. */
  readonly z: Float64Array;
}
