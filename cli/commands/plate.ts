import { runPlate } from "../../engine/campaign/mod.ts";
import { targetCommand } from "../target_command.ts";

/** `millrace plate`: the figure. */
export const plateCommand = targetCommand("plate", {
  summary: "the figure: map, trail, predicted trail, residual",
  run: async ({ session, output }) => ({ ...await runPlate(session, output), lines: [] }),
});
