import { mappedLines } from "../line_of.ts";
import { type OutputHead, outputHead } from "../output_head.ts";
import type { Session } from "../session.ts";
import { type StepOutput, type StepResult, writeStep } from "../steps/step.ts";

/** Name of the small picture of a target. */
export const THUMBNAIL_FILE = "thumbnail.png";

const WIDTH_MM = 44;
const DPI = 150;

/**
 * Draws the small picture by which a target is found on a page of many: the map of its first mapped line.
 *
 * @param session The target at work.
 * @param output Where to write.
 * @returns Head, file, no warnings: the map has given its own.
 */
export async function runThumbnail(
  session: Session,
  output: StepOutput,
): Promise<StepResult<OutputHead>> {
  // Fonts and renderer are heavy: they load only here.
  const { drawPlate, pngBytes } = await import("../../figures/mod.ts");
  const line = mappedLines(session.lines("draw the thumbnail"))[0]!;
  const { trail, map, method, systemic_kms } = await session.map(line);
  const { picture } = drawPlate({ width: WIDTH_MM, rows: [{ panels: ["map"] }] }, [{
    title: "",
    line: trail.line,
    systemic_kms,
    method,
    map,
    trail,
    binary: session.binary(),
  }]);
  const { inputs } = await session.exposures();
  return {
    document: outputHead(session.target, { schema: "thumbnail/1", inputs, warnings: [] }),
    files: await writeStep([[THUMBNAIL_FILE, await pngBytes(picture, { dpi: DPI })]], output),
    warnings: [],
  };
}
