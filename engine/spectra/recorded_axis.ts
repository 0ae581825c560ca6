import type { OneDecision } from "./decision.ts";

/** A wavelength axis as a file records it, in ångström but otherwise untouched. */
export interface RecordedAxis {
  /** Pixel centres, N values, Å; may decrease. */
  readonly wavelength_angstrom: Float64Array;
  /** Medium, when the axis itself says; null otherwise. */
  readonly medium: "air" | "vacuum" | null;
  /** What was decided. */
  readonly decisions: readonly OneDecision[];
}
