import { InputError } from "../../errors.ts";
import { colourBar } from "../colour/colour_bar.ts";
import type { Item, Picture, Run } from "../display_list.ts";
import { enlargePicture } from "../enlarge_picture.ts";
import { textWidth } from "../fonts.ts";
import { plainRuns, SMALLEST_TEXT_PT } from "../runs.ts";
import { INK, LABEL_PT } from "../style.ts";
import type { PanelKind, PanelScale } from "./panel_kind.ts";
import { panelKinds } from "./panel_kinds.ts";
import { checkPlate, type PlateDescription, plateRows, plateWidth } from "./plate_description.ts";
import { BAR_PT, BAR_RISE_PT, NAME_RISE_PT, type PanelBox, plateLayout } from "./plate_layout.ts";
import type { PlateSubject } from "./plate_subject.ts";

/** A plate and the words that go with it. */
export interface Plate {
  /** The figure. */
  readonly picture: Picture;
  /** Caption with every number used, panel by panel; plain text. */
  readonly caption: string;
}

/** A panel with all that drawing needs. */
interface Piece {
  readonly kind: PanelKind;
  readonly subject: PlateSubject;
  readonly key: string;
  readonly box: PanelBox;
  readonly scale: PanelScale | undefined;
  readonly letter: string;
  readonly name: string;
  /** Name that the description gives, as the caption says it. */
  readonly called: string;
}

/**
 * Draws a plate from its description and the data of one or more subjects (an object in a line).
 *
 * @param description What stands where, and how.
 * @param subjects The data; panels say which of them they show.
 * @returns The figure and its caption.
 * @throws {InputError} When the description is wrong or a panel's data are missing.
 *
 * @example
 * ```ts
 * import { drawPlate } from "@millrace/millrace/figures";
 * import { assert } from "@std/assert";
 *
 * const subject = {
 *   title: "VX-0417",
 *   line: { name: "H beta", vacuum_angstrom: 4862.69, air_angstrom: 4861.33, source: "" },
 *   systemic_kms: 27,
 *   method: "back-projection",
 *   binary: null,
 *   map: { pixels: 3, half_width_kms: 300, intensity: Float64Array.of(0, 0, 0, 0, 1, 0, 0, 0, 0) },
 * };
 * const { caption } = drawPlate({ width: "one-column", rows: [{ panels: ["map"] }] }, [subject]);
 * assert(caption.startsWith("Velocity map of VX-0417, H beta (rest wavelength 4861.33 Å in air"));
 * ```
 */
export function drawPlate(
  description: PlateDescription,
  subjects: readonly PlateSubject[],
): Plate {
  if (subjects.length === 0) {
    throw new InputError({ action: "draw plate", rule: "there must be at least one line to show" });
  }
  checkPlate(description, subjects.length);
  const width = plateWidth(description);
  const rows = plateRows(description, subjects.length);
  const { letters = false } = description;
  const layout = plateLayout(
    rows.map((row) => ({
      ...row,
      panels: row.panels.map((entry) => {
        const kind = panelKinds[entry.panel];
        const axis = kind.axis?.(subjects[entry.subject]!);
        const named = letters || entry.name !== undefined;
        return { kind, named, ...(axis === undefined ? {} : { axis }) };
      }),
    })),
    width,
  );
  const scales = new ScaleBook(description, subjects);
  let count = 0;
  const pieces = rows.map((row, r) =>
    row.panels.map((entry, i): Piece => {
      const kind = panelKinds[entry.panel];
      const subject = subjects[entry.subject]!;
      return withKey(entry.key, () => ({
        kind,
        subject,
        key: entry.key,
        box: layout.rows[r]![i]!,
        scale: scales.of(kind, entry.subject),
        letter: letters ? `(${letterAt(count++)})` : "",
        name: entry.name ?? kind.name(subject),
        called: entry.name === undefined ? "" : `${entry.name}: `,
      }));
    })
  );
  const items = pieces.flatMap((row) => drawRow(row, description));
  const caption = pieces.flat().map(({ kind, subject, scale, letter, called }) =>
    `${letter === "" ? "" : `${letter} `}${called}${kind.tell(subject, scale).trim()}`
  ).join(" ");
  const { title, line } = subjects[0]!;
  const picture = {
    width,
    height: layout.height,
    items,
    title: [title, line.name].filter((text) => text !== "").join(", "),
    description: caption,
  };
  const { enlarge = 1 } = description;
  return { picture: enlarge === 1 ? picture : enlargePicture(picture, enlarge), caption };
}

/** Says of which panel of the description an error is. */
function withKey<T>(key: string, make: () => T): T {
  try {
    return make();
  } catch (error) {
    throw error instanceof InputError ? error.at({ key }) : error;
  }
}

/** Scales of a plate, each found once. */
class ScaleBook {
  readonly #known = new Map<string, PanelScale>();

  constructor(
    readonly description: PlateDescription,
    readonly subjects: readonly PlateSubject[],
  ) {}

  of(kind: PanelKind, subject: number): PanelScale | undefined {
    const { scale, scale_family = "", scale_is_common = false } = kind;
    if (scale === undefined) return undefined;
    const shared = scale_is_common ||
      (this.description.share?.some((family) => family === scale_family) ?? false);
    const key = `${scale_family} ${shared ? "all" : subject}`;
    const known = this.#known.get(key);
    if (known) return known;
    const made = scale(shared ? this.subjects : [this.subjects[subject]!], this.description);
    this.#known.set(key, made);
    return made;
  }
}

function drawRow(row: readonly Piece[], description: PlateDescription): Item[] {
  const name_pt = Math.min(...row.map(nameSize));
  return row.flatMap((piece, i): Item[] => {
    const { kind, subject, box, scale } = piece;
    const { from, count } = box.group;
    const left = row[from]!.box.frame.x;
    const last = row[from + count - 1]!.box.frame;
    const right = last.x + last.width;
    const drawing = {
      frame: box.frame,
      first: box.first,
      names_axis: i === from,
      axis_name_x: (left + right) / 2,
      axis_room_pt: right - left,
      style: description,
      ...(scale ? { scale } : {}),
    };
    const drawn = withKey(piece.key, () => kind.draw(subject, drawing));
    return [drawn, ...nameItems(piece, name_pt), ...barItems(row, i)];
  });
}

function nameRuns({ letter, name }: Piece): Run[] {
  return plainRuns([letter, name].filter((word) => word !== "").join(" "));
}

/** A long name over a narrow panel is set smaller, so that it keeps clear of the next one. */
function nameSize(piece: Piece): number {
  const width = textWidth(nameRuns(piece), LABEL_PT);
  const fitting = width === 0 ? LABEL_PT : LABEL_PT * (piece.box.frame.width + 4) / width;
  return Math.max(SMALLEST_TEXT_PT, Math.min(LABEL_PT, fitting));
}

function nameItems(piece: Piece, size_pt: number): Item[] {
  const runs = nameRuns(piece);
  if (runs.length === 0) return [];
  const { frame } = piece.box;
  const y = frame.y - (piece.scale ? NAME_RISE_PT : 5);
  return [{ kind: "text", x: frame.x, y, size_pt, fill: INK, runs }];
}

/** A colour bar over neighbours of one scale together. */
function barItems(row: readonly Piece[], i: number): Item[] {
  const { scale, box } = row[i]!;
  if (scale === undefined || (row[i - 1]?.scale === scale && !box.first)) return [];
  let last = box;
  for (let k = i + 1; row[k]?.scale === scale && !row[k]!.box.first; k++) last = row[k]!.box;
  const { x, y } = box.frame;
  const width = last.frame.x + last.frame.width - x;
  const bar = { x, y: y - BAR_RISE_PT, width, height: BAR_PT };
  return colourBar(scale, { box: bar, unit: scale.unit, divide_by: scale.divide_by });
}

/** a … z, then aa, ab … */
function letterAt(index: number): string {
  const letter = String.fromCharCode(97 + index % 26);
  return index < 26 ? letter : letterAt(Math.floor(index / 26) - 1) + letter;
}
