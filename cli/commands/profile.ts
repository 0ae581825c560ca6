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

function profileLines(document: ProfileDocument): string[] {
  const measured = (pair: { readonly value: number; readonly error: number }) =>
    Number.isFinite(pair.value) ? withError(pair.value, pair.error) : "–";
  return [
    ...document.groups.flatMap(({ group, exposures, identified }) => [
      `  group ${group + 1}: mean of ${exposures} exposures`,
      ...tableLines([
        ["line", "air / Å", "equivalent width / Å", "shares its window with"],
        ...identified.filter(({ seen }) => seen).map((found) => [
          found.line.name,
          plainNumber(found.line.air_angstrom, 2),
          withError(found.equivalent_width_angstrom, found.error_angstrom),
          found.blended_with.slice(0, 4).join(", "),
        ]),
      ], { heading: true, indent: 4, align: ["left", "right", "right", "left"] }),
      "",
    ]),
    ...tableLines([
      ["line", "EW / Å", "FWHM / km/s", "peaks / km/s", "V/R", "centroid / km/s"],
      ...document.lines.map(({ line, mean }) => [
        line,
        measured(mean.equivalent_width_angstrom),
        measured(mean.profile.fwhm_kms),
        measured(mean.profile.peak_separation_kms),
        measured(mean.profile.blue_over_red),
        measured(mean.profile.centroid_kms),
      ]),
    ], { heading: true, align: ["left", "right", "right", "right", "right", "right"] }),
  ];
}
