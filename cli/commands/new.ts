import { newTarget, VERSION } from "../../engine/campaign/mod.ts";
import { commandWith, refuseOptions } from "../common_options.ts";
import { runCommand } from "../run_command.ts";
import { tableLines } from "../terminal/table.ts";

/**
 * `millrace new`: a commented target file from the spectra in a folder.
 *
 * @param finish Takes the exit status.
 * @returns The command.
 */
export const newCommand = (finish: (status: number) => void) =>
  commandWith("new", "starts a commented target file from the spectra found in a folder")
    .argument("<dir>", "folder with the spectra")
    .action(async (dir, options) => {
      finish(
        await runCommand(options, async () => {
          refuseOptions(options, {
            action: "start a target file",
            out: "it stands in the folder of the spectra",
            set: "its settings are filled in by hand",
            seed: "there is no chance in it",
            workers: "it is done at once on one thread",
          });
          const made = await newTarget(dir, { overwrite: options.overwrite });
          return {
            document: {
              schema: "new/1",
              version: VERSION,
              target: made.file,
              groups: made.groups,
              lines: made.lines,
              warnings: made.warnings,
            },
            lines: [
              ...tableLines(made.groups.map(({ pattern, files }) => [
                pattern,
                files === 1 ? "1 file" : `${files} files`,
              ])),
              `  lines covered: ${
                made.lines.length === 0 ? "none of the usual ones" : made.lines.join(", ")
              }`,
              `  next: fill in [orbit] in ${made.file}, then run millrace check ${made.file}`,
            ],
            files: [made.file],
            warnings: made.warnings,
          };
        }),
      );
    });
