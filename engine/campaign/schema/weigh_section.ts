import { z } from "zod";
import { type PartName, partNames } from "../../synthesis/mod.ts";
import { count } from "./common.ts";

/** `[weigh]`: hypotheses and trials. */
export interface WeighSettings {
  /** Hypotheses, each a list of parts; the default sets when absent. */
  readonly sets?: readonly (readonly PartName[])[];
  /** Simulated trials for the false-alarm rate. */
  readonly trials: number;
}

/** Schema of WeighSettings. */
export const weighSection: z.ZodType<WeighSettings> = z.strictObject({
  sets: z.array(z.array(z.enum(partNames as [PartName, ...PartName[]])).min(1)).min(2).optional(),
  trials: count.default(200),
});
