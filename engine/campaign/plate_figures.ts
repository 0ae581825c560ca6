import type { PanelName, PlateDescription } from "../figures/mod.ts";
import { InputError } from "../errors.ts";
import { hduName } from "./fits_head.ts";
import { mappedLines } from "./line_of.ts";
import type { LineSettings } from "./schema/lines_section.ts";
import type { PlateSettings } from "./schema/plate_section.ts";

/** One figure of a target: which lines it shows, and how. A panel without a subject takes its row's. */
export interface PlateFigure {
  /** Name of its files, without extension. */
  readonly name: string;
  /** The lines it shows, in the order of its subjects. */
  readonly lines: readonly LineSettings[];
  /** The description for `drawPlate`. */
  readonly description: PlateDescription;
  /** Panels of each line. */
  readonly panels: readonly (readonly PanelName[])[];
}

const STANDARD: readonly PanelName[] = ["map", "trail", "model", "residual"];

/**
 * The figures that `[plate]` describes: one of its rows, or where it has none a standard one for each
 * mapped line.
 *
 * @param plate The section.
 * @param lines All lines of the target.
 * @returns The figures.
 * @throws {InputError} When a row names a line that the target does not have, with its key.
 */
export function plateFigures(
  plate: PlateSettings,
  lines: readonly LineSettings[],
): PlateFigure[] {
  const gas = mappedLines(lines);
  if (plate.rows === undefined) {
    return gas.map((line, i) => ({
      name: plateName("plate", { line: line.name, first: i === 0 }),
      lines: [line],
      description: styleOf(plate),
      panels: [STANDARD],
    }));
  }
  const shown: LineSettings[] = plate.each_line ? [...gas] : [];
  const panels: PanelName[][] = shown.map(() => []);
  const take = (name: string | undefined, key: string): number => {
    // Rows for each line are for the mapped ones: no other joins them by being named.
    const known = plate.each_line ? gas : lines;
    const line = name === undefined ? gas[0]! : known.find((one) => one.name === name);
    if (line === undefined) throw unknownLine(name!, { lines: known, key });
    if (!shown.includes(line)) {
      shown.push(line);
      panels.push([]);
    }
    return shown.indexOf(line);
  };
  const rows = plate.rows.map(({ line, ...row }, i) => {
    const key = `plate.rows[${i}]`;
    const own = plate.each_line && line === undefined ? undefined : take(line, `${key}.line`);
    const entries = row.panels.map((entry, k) => {
      const { line: named, ...panel } = typeof entry === "string" ? { panel: entry } : entry;
      const name = panel.panel as PanelName;
      const other = named === undefined ? own : take(named, `${key}.panels[${k}].line`);
      if (other === undefined) gas.forEach((_, at) => panels[at]!.push(name));
      else panels[other]!.push(name);
      return { ...panel, panel: name, ...(other === undefined ? {} : { subject: other }) };
    });
    return { ...row, panels: entries };
  });
  const description = { ...styleOf(plate), rows, each_subject: plate.each_line };
  return [{ name: "plate", lines: shown, description, panels }];
}

/** What a figure takes from `[plate]` whatever it shows. */
function styleOf(plate: PlateSettings): PlateDescription {
  const { formats: _f, title: _t, png_dpi: _d, contours: _c, rims_over_a: _r, ...rest } = plate;
  const { rows: _rows, each_line: _each, page_methods: _m, ...style } = rest;
  return style as PlateDescription;
}

function unknownLine(
  name: string,
  options: { lines: readonly LineSettings[]; key: string },
): InputError {
  return new InputError({
    action: "draw the plate",
    rule: `the line must be one of ${options.lines.map((line) => line.name).join(", ")}`,
    value: name,
    key: options.key,
  });
}

/**
 * Name of a figure's files: the first one has the plain name, further ones that of their line, too.
 *
 * @param name The plain name.
 * @param options Which line, and whether it is the first.
 * @returns Name without extension, as in "plate-he-ii-4686".
 */
export function plateName(name: string, options: { line: string; first: boolean }): string {
  const { line, first } = options;
  if (first) return name;
  return `${name}-${hduName(line).toLowerCase().replace(/[^a-z0-9]+/g, "-")}`;
}
