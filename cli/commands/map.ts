import { type MapDocument, runMap } from "../../engine/campaign/mod.ts";
import { commandWith } from "../common_options.ts";
import { runInParts } from "../part_options.ts";
import { runCommand } from "../run_command.ts";
import { openTarget, recorded } from "../target_command.ts";
import { anyMapText } from "../terminal/any_map_text.ts";
import { mapStudyLines } from "../terminal/map_study_lines.ts";
import { plainNumber, tableLines, withError } from "../terminal/table.ts";

/**
 * `millrace map`: the velocity map.
 *
 * @param finish Takes the exit status.
 * @returns The command.
 */
export const mapCommand = (finish: (status: number) => void) =>
  commandWith("map", "the velocity map")
    .argument("<target>", "target file")
    .option("--force", "make the map in spite of a large gap in phase")
    .option("--part <i/n>", "make one share of n of the resamples, together with other processes")
    .option("--gather", "make the outputs from what the shares have done")
    .action(async (file, options) => {
      finish(
        await runCommand(options, async (context) => {
          const opened = await openTarget(file, { call: options, context, force: options.force });
          return runInParts("map", opened, {
            call: options,
            run: () => recorded("map", opened, () => runMap(opened.session, opened.output)),
            lines: mapLines,
          });
        }),
      );
    });

/**
 * The maps as a table: one row a line, then its features.
 *
 * @param document The map document.
 * @returns Lines of text.
 */
export function mapLines(document: MapDocument): string[] {
  return document.maps.flatMap((map) => [
    `  ${map.line} (${plainNumber(map.rest_air_angstrom, 2)} Å in air), ${map.method}, ` +
    `γ = ${plainNumber(map.systemic_kms)} km/s: χ²/N = ${
      plainNumber(map.reduced_chi_square, 3)
    }, ` +
    `peak at (${plainNumber(map.peak.vx_kms, 0)}, ${plainNumber(map.peak.vy_kms, 0)}) km/s`,
    ...map.blends.map(blendLine),
    ...map.together.map(({ line, ratio }) =>
      `    and of ${line}, ${plainNumber(ratio, 2)} as strong, at once`
    ),
    `    can any map fit? ${anyMapText(map.any_map)}`,
    ...(map.features.length === 0
      ? ["    no compact excess over the axisymmetric part"]
      : tableLines([
        ["feature", "Vx / km/s", "Vy / km/s", "flux share", "significance", "nearest"],
        ...map.features.map((feature, i) => [
          String(i + 1),
          withError(feature.vx_kms, feature.vx_error_kms),
          withError(feature.vy_kms, feature.vy_error_kms),
          plainNumber(feature.flux_fraction, 3),
          feature.significance_sigma === null
            ? "–"
            : `${plainNumber(feature.significance_sigma, 1)} σ`,
          feature.nearest ?? "–",
        ]),
      ], {
        heading: true,
        indent: 4,
        align: ["right", "right", "right", "right", "right", "left"],
      })),
    ...mapStudyLines(map),
  ]);
}

function blendLine(blend: MapDocument["maps"][number]["blends"][number]): string {
  const { name, ratio, ratio_error, peak } = blend;
  return peak === null
    ? `    with ${name} on the same map, ${withError(ratio, ratio_error)} as strong${
      ratio_error === null ? "" : " (fitted)"
    }`
    : `    with ${name} on a map of its own, ${plainNumber(ratio, 2)} as strong, peak at (${
      plainNumber(peak.vx_kms, 0)
    }, ${plainNumber(peak.vy_kms, 0)}) km/s`;
}
