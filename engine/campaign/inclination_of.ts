import type { InclinationKnowledge } from "../orbit/mod.ts";
import type { Target } from "./target.ts";

/** What `[binary]` says of the inclination; null when nothing. */
export function inclinationOf(target: Target): InclinationKnowledge | null {
  const { inclination_deg, inclination_error_deg, inclination_range_deg, eclipse_width_cycles } =
    target.settings.binary;
  if (inclination_deg !== undefined) {
    return { deg: { value: inclination_deg, error: inclination_error_deg ?? 0 } };
  }
  if (eclipse_width_cycles !== undefined) {
    const { eclipse_width_error_cycles = 0 } = target.settings.binary;
    return {
      eclipse_width_cycles: { value: eclipse_width_cycles, error: eclipse_width_error_cycles },
    };
  }
  return inclination_range_deg === undefined ? null : { range_deg: inclination_range_deg };
}
