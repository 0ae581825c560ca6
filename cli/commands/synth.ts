import { type ModelDocument, runSynth } from "../../engine/campaign/mod.ts";
import { commandWith } from "../common_options.ts";
import { runCommand } from "../run_command.ts";
import { openTarget, recorded } from "../target_command.ts";
import { plainNumber, tableLines } from "../terminal/table.ts";

/**
 * `millrace synth`: profiles from the model.
 *
 * @param finish Takes the exit status.
 * @returns The command.
 */
export const synthCommand = (finish: (status: number) => void) =>
  commandWith("synth", "profiles from the model; with data, residuals and chi-square")
    .argument("<target>", "target file")
    .option("--exposures <dir>", "also write simulated raw exposures here")
    .action(async (file, options) => {
      finish(
        await runCommand(options, async (context) => {
          const opened = await openTarget(file, { call: options, context });
          const { session, output } = opened;
          const result = await recorded(
            "synth",
            opened,
            () => runSynth(session, output, { exposures: options.exposures }),
          );
          const shown = result.files.filter((path) => !result.document.exposures.includes(path));
          return {
            ...result,
            files: shown,
            lines: [
              ...modelLines(result.document),
              ...(options.exposures === undefined ? [] : [
                `  ${result.document.exposures.length} raw exposures written to ${options.exposures}`,
              ]),
            ],
          };
        }),
      );
    });

function modelLines(document: ModelDocument): string[] {
  return tableLines([
    ["line", "parts", "equivalent widths / km/s", "χ²/N"],
    ...document.models.map((model) => [
      model.line,
      model.model.parts.join(" + "),
      Object.entries(model.equivalent_width_kms)
        .map(([part, width]) => `${part} ${plainNumber(width, 0)}`).join(", "),
      model.reduced_chi_square === null ? "no data" : plainNumber(model.reduced_chi_square, 3),
    ]),
  ], { heading: true, align: ["left", "left", "left", "right"] });
}
