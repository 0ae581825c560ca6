import { runPlate } from "../../engine/campaign/mod.ts";
import { commandWith } from "../common_options.ts";
import { runCommand } from "../run_command.ts";
import { openTarget, recorded } from "../target_command.ts";

/**
 * `millrace plate`: the figure.
 *
 * @param finish Takes the exit status.
 * @returns The command.
 */
export const plateCommand = (finish: (status: number) => void) =>
  commandWith("plate", "the figure: map, trail, predicted trail, residual")
    .argument("<target>", "target file")
    .option("--force", "make the map in spite of a large gap in phase; the figure says so")
    .action(async (file, options) => {
      finish(
        await runCommand(options, async (context) => {
          const opened = await openTarget(file, { call: options, context, force: options.force });
          const { session, output } = opened;
          return await recorded("plate", opened, async () => ({
            ...await runPlate(session, output),
            lines: [],
          }));
        }),
      );
    });
