import type { OneDecision } from "./decision.ts";
import type { Facts } from "./facts.ts";
import type { RecordedAxis } from "./recorded_axis.ts";

/** One exposure as a file records it, before anything is decided about time and frame. */
export interface RecordedExposure {
  /** File, with HDU or row where there are several. */
  readonly source: string;
  /** File alone, for messages. */
  readonly file: string;
  /** Wavelengths as recorded. */
  readonly axis: RecordedAxis;
  /** Flux, N values; NaN where not recorded. */
  readonly flux: Float64Array;
  /** One standard deviation, N values, infinite where masked; null when the file gives none. */
  readonly error: Float64Array | null;
  /** Unit of the flux; empty when not said. */
  readonly unit: string;
  /** Where its time is looked up: of its own, not of the file, when a file holds several. */
  readonly times: Facts;
  /** Where everything else is looked up. */
  readonly facts: Facts;
  /** What was decided while reading. */
  readonly decisions: readonly OneDecision[];
}
