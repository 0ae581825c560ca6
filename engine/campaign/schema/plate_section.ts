import { z } from "zod";
import { text } from "./common.ts";

/** `[plate]`: the figure. */
export interface PlateSettings {
  /** Formats to write. */
  readonly formats: readonly ("svg" | "png" | "pdf")[];
  /** Width of the figure in a journal. */
  readonly width: "one-column" | "two-column";
  /** Title above the figure. */
  readonly title?: string;
}

/** Schema of PlateSettings. */
export const plateSection: z.ZodType<PlateSettings> = z.strictObject({
  formats: z.array(z.enum(["svg", "png", "pdf"])).min(1).default(["png", "svg"]),
  width: z.enum(["one-column", "two-column"]).default("two-column"),
  title: text.optional(),
});
