import type { PanelName, Picture, PlateDescription } from "../../figures/mod.ts";
import { InputError } from "../../errors.ts";
import { captionText } from "../caption_text.ts";
import { hduName } from "../fits_head.ts";
import { mappedLines } from "../line_of.ts";
import { type OutputHead, outputHead, uniqueWarnings } from "../output_head.ts";
import { reportHtml } from "../report.ts";
import type { LineSettings } from "../schema/lines_section.ts";
import type { PlateSettings } from "../schema/plate_section.ts";
import type { Session } from "../session.ts";
import { plateSubject } from "../subject/plate_subject.ts";
import { type StepOutput, type StepResult, writeStep } from "./step.ts";

/** What `plate --json` prints. */
export interface PlateDocument extends OutputHead {
  /** Files of the figure, in order of lines and formats. */
  readonly plates: readonly string[];
  /** Captions, one a plate, with every number used. */
  readonly captions: readonly string[];
}

const STANDARD: readonly PanelName[] = ["map", "trail", "model", "residual"];

/**
 * Draws the plate that `[plate]` describes: one figure of its rows, or where it has none a standard
 * one for each line (map, trail, map projected again, residual). The first is named `plate`, further
 * ones after their line. Each has its caption in a text file.
 *
 * @param session The target at work.
 * @param output Where to write.
 * @returns Document, files, warnings.
 * @throws {InputError} When a panel is not known or lacks its data.
 */
export async function runPlate(
  session: Session,
  output: StepOutput,
): Promise<StepResult<PlateDocument>> {
  // Fonts and renderer are heavy: they load only here.
  const { drawPlate, pdfBytes, pngBytes, svgText } = await import("../../figures/mod.ts");
  const { target } = session;
  const { plate } = target.settings;
  const lines = mappedLines(session.lines("draw the plate"));
  const figures = plate.rows === undefined
    ? lines.map((line) => ({ lines: [line], panels: STANDARD }))
    : [{
      lines,
      panels: plate.rows.flatMap(({ panels }) => panels) as PanelName[],
    }];
  const made: [name: string, data: Uint8Array | string][] = [];
  const captions: string[] = [];
  for (const [index, { lines: shown, panels }] of figures.entries()) {
    const subjects = [];
    for (const line of shown) subjects.push(await plateSubject(session, { line, panels }));
    let drawn: { readonly picture: Picture; readonly caption: string };
    try {
      drawn = drawPlate(descriptionOf(plate, shown), subjects);
    } catch (error) {
      if (!(error instanceof InputError)) throw error;
      const place = target.places.get(error.key ?? "") ?? target.places.get("plate");
      throw error.at({ file: target.file, line: place?.line });
    }
    const name = index === 0 ? "plate" : `plate-${fileName(shown[0]!)}`;
    for (const format of plate.formats) {
      const data = format === "svg"
        ? svgText(drawn.picture)
        : format === "png"
        ? await pngBytes(drawn.picture, plate.png_dpi === undefined ? {} : { dpi: plate.png_dpi })
        : await pdfBytes(drawn.picture);
      made.push([`${name}.${format}`, data]);
    }
    captions.push(drawn.caption);
    made.push([`${name}.txt`, captionText(drawn.caption)]);
  }
  made.push(["report.html", await reportHtml(session)]);
  const { inputs, warnings: reading } = await session.exposures();
  const mapped = await Promise.all(lines.map(session.map));
  const warnings = uniqueWarnings([
    ...reading,
    ...(await session.systemic()).warnings,
    ...mapped.flatMap((one) => [...one.trail.warnings, ...one.warnings]),
  ]);
  const files = await writeStep(made, output);
  return {
    document: {
      ...outputHead(target, { schema: "plate/1", inputs, warnings }),
      plates: made.map(([name]) => name),
      captions,
    },
    files,
    warnings,
  };
}

function descriptionOf(plate: PlateSettings, lines: readonly LineSettings[]): PlateDescription {
  const { formats: _formats, title: _title, png_dpi: _dpi, rows, each_line, ...style } = plate;
  return {
    ...style,
    each_subject: each_line,
    ...(rows === undefined ? {} : {
      rows: rows.map(({ line, ...row }, i) => ({
        ...row,
        panels: row.panels as PanelName[],
        ...(line === undefined ? {} : { subject: subjectOf(line, { lines, row: i }) }),
      })),
    }),
  } as PlateDescription;
}

function subjectOf(
  name: string,
  options: { lines: readonly LineSettings[]; row: number },
): number {
  const index = options.lines.findIndex((line) => line.name === name);
  if (index >= 0) return index;
  throw new InputError({
    action: "draw the plate",
    rule: `a row's line must be one of ${options.lines.map((line) => line.name).join(", ")}`,
    value: name,
    key: `plate.rows[${options.row}].line`,
  });
}

function fileName(line: LineSettings): string {
  return hduName(line.name).toLowerCase().replace(/[^a-z0-9]+/g, "-");
}
