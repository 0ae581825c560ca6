import type { Binary } from "../../binary/mod.ts";
import type { Item, Picture } from "../../figures/mod.ts";
import { mappedLines } from "../line_of.ts";
import type { MappedLine } from "../map_line.ts";
import { type OutputHead, outputHead } from "../output_head.ts";
import type { Session } from "../session.ts";
import { type StepOutput, type StepResult, writeStep } from "../steps/step.ts";

/** Name of the small picture of a target. */
export const THUMBNAIL_FILE = "thumbnail.png";

const SIDE_PT = 120;
const DPI = 150;
const INSET_PT = 3;

/**
 * Draws the small picture by which a target is found on a page of many: the map of its first mapped
 * line with the binary's marks, without letters.
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
  const figures = await import("../../figures/mod.ts");
  const line = mappedLines(session.lines("draw the thumbnail"))[0]!;
  const mapped = await session.map(line);
  const picture = thumbnail(mapped, { binary: session.binary(), figures });
  const { inputs } = await session.exposures();
  return {
    document: outputHead(session.target, { schema: "thumbnail/1", inputs, warnings: [] }),
    files: await writeStep(
      [[THUMBNAIL_FILE, await figures.pngBytes(picture, { dpi: DPI })]],
      output,
    ),
    warnings: [],
  };
}

function thumbnail(
  { map, trail }: MappedLine,
  options: { binary: Binary | null; figures: typeof import("../../figures/mod.ts") },
): Picture {
  const { binary, figures } = options;
  const side = SIDE_PT - 2 * INSET_PT;
  const box = { x: INSET_PT, y: INSET_PT, width: side, height: side };
  const middle = SIDE_PT / 2;
  const outline = figures.ellipsePath([middle, middle], { rx: side / 2 });
  const { pixels, half_width_kms, intensity } = map;
  const scale = { limits: figures.robustLimits(intensity, { part: 0.9995 }) };
  const reach_kms = half_width_kms * pixels / (pixels - 1);
  const place = ([vx, vy]: readonly [number, number]) =>
    [middle + (vx / reach_kms) * (side / 2), middle - (vy / reach_kms) * (side / 2)] as const;
  const curve = (points: readonly (readonly [number, number])[]): Item => ({
    kind: "path",
    d: points.map((point, i) => {
      const [x, y] = place(point);
      return `${i === 0 ? "M" : "L"}${figures.trim(x)},${figures.trim(y)}`;
    }).join(""),
    stroke: figures.INK,
    stroke_pt: figures.CURVE_PT,
  });
  const marks = binary === null ? null : figures.binaryMarks(binary);
  return {
    width: SIDE_PT,
    height: SIDE_PT,
    items: [
      {
        kind: "group",
        clip: outline,
        items: [
          figures.paintGrid({ rows: pixels, columns: pixels, values: intensity }, { box, scale }),
          ...(marks === null ? [] : [curve(marks.donor_lobe), curve(marks.stream)]),
        ],
      },
      { kind: "path", d: outline, stroke: figures.QUIET, stroke_pt: figures.HAIRLINE_PT },
    ],
    title: `Velocity map, ${trail.line.name}`,
    description: `Velocity map of ${trail.line.name} out to ${half_width_kms} km/s`,
  };
}
