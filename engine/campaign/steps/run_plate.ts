import type { PlateSubject } from "../../figures/mod.ts";
import { figureFiles } from "../figure_files.ts";
import { inFile } from "../in_file.ts";
import { mappedLines } from "../line_of.ts";
import { type OutputHead, outputHead, uniqueWarnings } from "../output_head.ts";
import { type PlateFigure, plateFigures } from "../plate_figures.ts";
import { reportHtml } from "../report.ts";
import type { LineSettings } from "../schema/lines_section.ts";
import type { Session } from "../session.ts";
import { type LineLimit, lineLimit } from "../subject/limit_subject.ts";
import { plateSubject } from "../subject/plate_subject.ts";
import type { Target } from "../target.ts";
import { type StepOutput, type StepResult, writeStep } from "./step.ts";

/** A figure that was drawn. */
export interface DrawnFigure {
  /** Name of its files, without extension. */
  readonly name: string;
  /** Width, mm. */
  readonly width_mm: number;
  /** Height, mm. */
  readonly height_mm: number;
  /** Its rows from the top down: the lines shown, and the panels from left to right. */
  readonly rows: readonly {
    readonly lines: readonly string[];
    readonly panels: readonly string[];
  }[];
  /** Its files. */
  readonly files: readonly string[];
}

/** What `plate --json` prints. */
export interface PlateDocument extends OutputHead {
  /** Files of the figure, in order of lines and formats. */
  readonly plates: readonly string[];
  /** Captions, one a plate, with every number used. */
  readonly captions: readonly string[];
  /** The figures, in order. */
  readonly figures: readonly DrawnFigure[];
}

/**
 * Draws the plate that `[plate]` describes: one figure of its rows, or where it has none a standard
 * one for each line (map, trail, map projected again, residual). The first is named `plate`, further
 * ones after their line. Each has its caption in a text file.
 *
 * @param session The target at work.
 * @param output Where to write.
 * @returns Document, files, warnings.
 * @throws {InputError} When a panel is not known or lacks its data, with its place in the file.
 */
export async function runPlate(
  session: Session,
  output: StepOutput,
): Promise<StepResult<PlateDocument>> {
  // Fonts and renderer are heavy: they load only here.
  const { checkPlate, drawPlate, plateRows, POINTS_PER_MM } = await import("../../figures/mod.ts");
  const { target } = session;
  const { plate } = target.settings;
  const lines = session.lines("draw the plate");
  // A word that is wrong is told before hours of work, not after.
  const figures = placed(target, () => plateFigures(plate, lines));
  for (const { description, lines: shown } of figures) {
    placed(target, () => checkPlate(description, shown.length));
  }
  const limits = new Map<LineSettings, LineLimit>();
  const limit = async (line: LineSettings) => {
    const { half_width_kms } = target.settings.map;
    const known = limits.get(line) ?? await lineLimit(session, line, { half_width_kms });
    limits.set(line, known);
    return known;
  };
  const made: [name: string, data: Uint8Array | string][] = [];
  const captions: string[] = [];
  const drawings: DrawnFigure[] = [];
  const mm = (points: number) => Number((points / POINTS_PER_MM).toFixed(1));
  for (const { name, lines: shown, panels, description } of figures) {
    const subjects: PlateSubject[] = [];
    for (const [i, line] of shown.entries()) {
      subjects.push(await plateSubject(session, { line, panels: panels[i]!, limit }));
    }
    const drawn = placed(target, () => drawPlate(description, subjects));
    captions.push(drawn.caption);
    const written = await figureFiles(drawn, { name, plate });
    made.push(...written);
    drawings.push({
      name,
      width_mm: mm(drawn.picture.width),
      height_mm: mm(drawn.picture.height),
      rows: plateRows(description, shown.length).map((row) => ({
        lines: [...new Set(row.panels.map(({ subject }) => shown[subject]!.name))],
        panels: row.panels.map(({ panel }) => panel),
      })),
      files: written.map(([file]) => file),
    });
  }
  made.push(["report.html", await reportHtml(session, { limits })]);
  const { inputs, warnings: reading } = await session.exposures();
  const warnings = uniqueWarnings([
    ...reading,
    ...(await session.systemic()).warnings,
    ...await lineWarnings(session, figures),
  ]);
  const files = await writeStep(made, output);
  return {
    document: {
      ...outputHead(target, { schema: "plate/1", inputs, warnings }),
      plates: made.map(([name]) => name),
      captions,
      figures: drawings,
    },
    files,
    warnings,
  };
}

/** Says where in the target file an error is. */
function placed<T>(target: Target, make: () => T): T {
  try {
    return make();
  } catch (error) {
    throw inFile(target, error);
  }
}

/** Warnings of the lines that the page and the figures show. */
async function lineWarnings(session: Session, figures: readonly PlateFigure[]) {
  const all = session.lines("draw the plate");
  const mapped = await Promise.all(mappedLines(all).map(session.map));
  const trails = await Promise.all(figures.flatMap(({ lines }) => lines).map(session.trail));
  return [
    ...mapped.flatMap((one) => [...one.trail.warnings, ...one.warnings]),
    ...trails.flatMap((trail) => trail.warnings),
  ];
}
