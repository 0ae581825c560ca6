import type { Trail } from "../trail/mod.ts";
import type { DonorTemplate } from "./donor_template.ts";
import type { DonorLight } from "./k_correction.ts";
import type { TracedStar } from "./velocity_curve.ts";

/** A line to be measured. */
export interface OrbitLine {
  /** Its trail, folded on the ephemeris of the options. */
  readonly trail: Trail;
  /** The star it follows. @default {"accretor"} */
  readonly traces?: TracedStar;
  /** Template stars for a donor's line. @default {[]: Gaussian components} */
  readonly templates?: readonly DonorTemplate[];
  /** Rest wavelengths of a multiplet's components, vacuum, Å. @default {the line's own} */
  readonly components_vacuum_angstrom?: readonly number[];
  /** Where a donor's line comes from. @default {irradiated in emission, photosphere in absorption} */
  readonly light?: DonorLight;
}
