import { runTrail } from "../../engine/campaign/mod.ts";
import { targetCommand } from "../target_command.ts";
import { plainNumber, tableLines } from "../terminal/table.ts";

/** `millrace trail`: the trailed spectrogram. */
export const trailCommand = targetCommand("trail", {
  summary: "the trailed spectrogram",
  run: async ({ session, output }) => {
    const result = await runTrail(session, output);
    return {
      ...result,
      lines: tableLines([
        ["line", "rest (air)", "exposures", "bins", "bin", "masked", "noise scale"],
        ...result.document.trails.map((trail) => [
          trail.line,
          `${plainNumber(trail.rest_air_angstrom, 2)} Å`,
          String(trail.exposures),
          String(trail.columns),
          `${plainNumber(trail.step_kms, 1)} km/s`,
          `${trail.masked} of ${trail.samples}`,
          plainNumber(trail.noise_scale, 2),
        ]),
      ], {
        heading: true,
        align: ["left", "right", "right", "right", "right", "right", "right"],
      }),
    };
  },
});
