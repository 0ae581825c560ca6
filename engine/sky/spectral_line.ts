/** A spectral line, or a blend that is treated as one, with the rest wavelength chosen for it. */
export interface SpectralLine {
  /** Name as printed, as in "H beta". */
  readonly name: string;
  /** Rest wavelength in vacuum, Å. All velocities use this one: V/c = λ/λ0 − 1. */
  readonly vacuum_angstrom: number;
  /** The same in standard air, Å, for printing. */
  readonly air_angstrom: number;
  /** Where the wavelength comes from. */
  readonly source: string;
  /**
   * Shortest and longest component in vacuum, Å, where the line is a blend: the rest wavelength of
   * a blend is a choice, uncertain by a good part of this span.
   */
  readonly span_angstrom?: readonly [low: number, high: number];
}
