import { type PlateDocument, runPlate } from "../../engine/campaign/mod.ts";
import { commandWith } from "../common_options.ts";
import { runCommand } from "../run_command.ts";
import { openTarget, recorded } from "../target_command.ts";
import { plainNumber, tableLines } from "../terminal/table.ts";

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
          return await recorded("plate", opened, async () => {
            const result = await runPlate(session, output);
            return { ...result, lines: plateLines(result.document) };
          });
        }),
      );
    });

/**
 * The figures as a table: one row a row of panels.
 *
 * @param document The plate document.
 * @returns Lines of text.
 */
export function plateLines(document: PlateDocument): string[] {
  return tableLines([
    ["figure", "mm", "formats", "lines", "panels"],
    ...document.figures.flatMap(({ name, width_mm, height_mm, files, rows }) =>
      rows.map(({ lines, panels }, i) => [
        ...(i > 0 ? ["", "", ""] : [
          name,
          `${plainNumber(width_mm, 0)} × ${plainNumber(height_mm, 0)}`,
          files.map((file) => file.slice(name.length + 1)).join(" "),
        ]),
        lines.join(", "),
        panels.join(", "),
      ])
    ),
  ], { heading: true });
}
