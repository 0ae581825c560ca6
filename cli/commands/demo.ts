import { resolve } from "@std/path";
import {
  openSession,
  outputFolder,
  readTarget,
  runCheck,
  runMap,
  runPlate,
  runTrail,
  simulateDemo,
  trueSpot,
  VERSION,
} from "../../engine/campaign/mod.ts";
import recipe from "../../examples/demo/recipe.toml" with { type: "text" };
import target from "../../examples/demo/vx-0417.toml" with { type: "text" };
import { commandWith } from "../common_options.ts";
import { runCommand } from "../run_command.ts";
import { plainNumber, tableLines, withError } from "../terminal/table.ts";
import { checkLines } from "./check.ts";
import { mapLines } from "./map.ts";

/**
 * `millrace demo`: an invented night, from raw exposures to the figure.
 *
 * @param finish Takes the exit status.
 * @returns The command.
 */
export const demoCommand = (finish: (status: number) => void) =>
  commandWith("demo", "simulates an invented campaign and runs everything on it, in demo-run/")
    .action(async (options) => {
      finish(
        await runCommand(options, async ({ console, progress, signal }) => {
          const folder = options.out ?? "demo-run";
          console.err(`simulating a night of an invented dwarf nova in ${resolve(folder)}`);
          const campaign = await simulateDemo(folder, {
            recipe,
            target,
            target_name: "vx-0417.toml",
            seed: options.seed,
            progress,
            signal,
          });
          console.err(
            `${campaign.exposures.length} raw exposures written; from here on they are treated as yours would be`,
          );
          const read = await readTarget(campaign.target_file, { set: options.set });
          const session = openSession(read, { workers: options.workers, progress, signal });
          const output = { folder: outputFolder(read), overwrite: options.overwrite };
          const check = await runCheck(session, output);
          const trail = await runTrail(session, output);
          const map = await runMap(session, output);
          const plate = await runPlate(session, output);
          const spots = map.document.maps.map(({ line, features }) => ({
            line,
            found: features[0] ?? null,
            truth: trueSpot(campaign.recipe, { line }),
          }));
          return {
            document: {
              schema: "demo/1",
              version: VERSION,
              target_file: campaign.target_file,
              exposures: campaign.exposures.length,
              maps: map.document.maps,
              spots,
              warnings: plate.warnings,
            },
            lines: [
              ...checkLines(check.document),
              "",
              ...mapLines(map.document),
              "",
              "  the bright spot, found and true",
              ...tableLines([
                ["line", "Vx / km/s", "true", "Vy / km/s", "true", "off by"],
                ...spots.map(({ line, found, truth }) => [
                  line,
                  found === null ? "–" : withError(found.vx_kms, found.vx_error_kms),
                  plainNumber(truth?.vx_kms, 1),
                  found === null ? "–" : withError(found.vy_kms, found.vy_error_kms),
                  plainNumber(truth?.vy_kms, 1),
                  found === null || truth === null ? "–" : `${
                    plainNumber(
                      Math.hypot(found.vx_kms - truth.vx_kms, found.vy_kms - truth.vy_kms),
                      1,
                    )
                  } km/s`,
                ]),
              ], {
                heading: true,
                align: ["left", "right", "right", "right", "right", "right"],
              }),
              "",
              `  target file ${campaign.target_file}, raw exposures in ${folder}/blue`,
            ],
            files: [...check.files, ...trail.files, ...map.files, ...plate.files],
            warnings: plate.warnings,
          };
        }),
      );
    });
