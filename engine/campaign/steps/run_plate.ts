import { type OutputHead, outputHead, uniqueWarnings } from "../output_head.ts";
import type { Session } from "../session.ts";
import { mappedLines } from "../line_of.ts";
import { hduName } from "../fits_head.ts";
import { type StepOutput, type StepResult, writeStep } from "./step.ts";

/** What `plate --json` prints. */
export interface PlateDocument extends OutputHead {
  /** Files of the figure, one a line and format. */
  readonly plates: readonly string[];
}

/**
 * Draws the standard plate of every line: map, trail, predicted trail, residual. The first line's
 * plate is named `plate`, further ones after their line.
 *
 * @param session The target at work.
 * @param output Where to write.
 * @returns Document, files, warnings.
 */
export async function runPlate(
  session: Session,
  output: StepOutput,
): Promise<StepResult<PlateDocument>> {
  // Fonts and renderer are heavy: they load only here.
  const { pdfBytes, pngBytes, standardPlate, svgText } = await import("../../figures/mod.ts");
  const { plate } = session.target.settings;
  const made: [name: string, data: Uint8Array | string][] = [];
  const lines = mappedLines(session.lines("draw the plate"));
  const { inputs, warnings: reading } = await session.exposures();
  const warnings = [...reading, ...session.systemic().warnings];
  for (const [index, line] of lines.entries()) {
    const mapped = await session.map(line);
    warnings.push(...mapped.trail.warnings, ...mapped.warnings);
    const picture = standardPlate({
      title: plate.title ?? session.target.title,
      line: mapped.trail.line,
      map: mapped.map,
      trail: mapped.trail,
      model: mapped.model,
      residual: mapped.residual,
      binary: session.binary(),
      features: mapped.features,
      systemic_kms: mapped.systemic_kms,
      method: mapped.method,
      reduced_chi_square: mapped.reduced_chi_square,
    }, { width: plate.width });
    const name = index === 0
      ? "plate"
      : `plate-${hduName(mapped.trail.line.name).toLowerCase().replace(/[^a-z0-9]+/g, "-")}`;
    for (const format of plate.formats) {
      made.push([
        `${name}.${format}`,
        format === "svg"
          ? svgText(picture)
          : format === "png"
          ? await pngBytes(picture)
          : await pdfBytes(picture),
      ]);
    }
  }
  const files = await writeStep(made, output);
  const all = uniqueWarnings(warnings);
  return {
    document: {
      ...outputHead(session.target, { schema: "plate/1", inputs, warnings: all }),
      plates: made.map(([name]) => name),
    },
    files,
    warnings: all,
  };
}
