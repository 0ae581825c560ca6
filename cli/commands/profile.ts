import { type ProfileDocument, runProfile } from "../../engine/campaign/mod.ts";
import { targetCommand } from "../target_command.ts";
import { plainNumber, tableLines, withError } from "../terminal/table.ts";

/** `millrace profile`: lines identified and measured. */
export const profileCommand = targetCommand("profile", {
  summary: "mean spectrum with identifications; widths, fluxes and peaks of the lines",
  run: async ({ session, output }) => {
    const result = await runProfile(session, output);
    return { ...result, lines: profileLines(result.document) };
  },
});

/**
 * What was measured, as text.
 *
 * @param document The profile document.
 * @returns Lines.
 */
export function profileLines(document: ProfileDocument): string[] {
  const measured = (pair: { readonly value: number; readonly error: number }) =>
    Number.isFinite(pair.value) ? withError(pair.value, pair.error) : "–";
  const several = document.groups.length > 1;
  return [
    ...document.groups.flatMap(({ group, exposures, identified }) => {
      const seen = identified.filter((found) => found.seen);
      return [
        `  ${
          several ? `group ${group + 1}: ` : ""
        }lines seen in the mean of ${exposures} exposures${seen.length === 0 ? ": none" : ""}`,
        ...(seen.length === 0 ? [] : tableLines([
          ["line", "air / Å", "equivalent width / Å", "", "known lines in the same place"],
          ...seen.map((found) => [
            found.line.name,
            plainNumber(found.line.air_angstrom, 2),
            withError(found.equivalent_width_angstrom, found.error_angstrom),
            found.equivalent_width_angstrom > 0 ? "emission" : "absorption",
            found.blended_with.slice(0, 4).join(", "),
          ]),
        ], { heading: true, indent: 4, align: ["left", "right", "right", "left", "left"] })),
        "",
      ];
    }),
    "  lines of the target file, mean of all exposures (equivalent width positive in emission)",
    ...tableLines([
      [
        "line",
        "equivalent width / Å",
        "FWHM / km/s",
        "peaks apart / km/s",
        "V/R",
        "centroid / km/s",
      ],
      ...document.lines.map(({ line, mean }) => [
        line,
        measured(mean.equivalent_width_angstrom),
        measured(mean.profile.fwhm_kms),
        measured(mean.profile.peak_separation_kms),
        measured(mean.profile.blue_over_red),
        measured(mean.profile.centroid_kms),
      ]),
    ], { heading: true, indent: 4, align: ["left", "right", "right", "right", "right", "right"] }),
  ];
}
