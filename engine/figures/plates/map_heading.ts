import type { Box, Item, Run } from "../display_list.ts";
import { lineLabel } from "../line_label.ts";
import { KMS_LABEL } from "../panels/trail_panel.ts";
import { labelRuns, plainRuns } from "../runs.ts";
import { INK, LABEL_PT, NOTE_PT, QUIET } from "../style.ts";
import type { PlateSubject } from "./plate_subject.ts";

/**
 * Writes object and line in the upper left corner that a round window leaves free, and how the map
 * was made in the upper right one. A small map gets the line alone.
 *
 * @param subject What the map shows.
 * @param frame The map's square, ring included.
 * @returns Items.
 *
 * @example
 * ```ts
 * import { mapHeading, runsText } from "@millrace/millrace/figures";
 * import { assertEquals } from "@std/assert";
 *
 * const subject = {
 *   title: "", line: { name: "H beta", vacuum_angstrom: 4862.69, air_angstrom: 4861.33, source: "" },
 *   systemic_kms: 0, method: "back-projection", binary: null,
 * };
 * const items = mapHeading(subject, { x: 0, y: 0, width: 90, height: 90 });
 * assertEquals(items.map((item) => item.kind === "text" && runsText(item.runs)), ["Hβ"]);
 * ```
 */
export function mapHeading(subject: PlateSubject, frame: Box): Item[] {
  const { title, line, method, systemic_kms, reduced_chi_square: chi = null, phase_gap } = subject;
  const top = frame.y + 5;
  const large = frame.width > 150;
  const left: { runs: Run[]; quiet?: boolean }[] = [];
  if (title !== "") left.push({ runs: plainRuns(title) });
  left.push({ runs: plainRuns(lineLabel(line.name)) });
  if (large) left.push({ runs: plainRuns(`${line.air_angstrom.toFixed(2)} Å`), quiet: true });
  const right: Run[][] = [];
  if (large) {
    right.push(plainRuns(method));
    if (chi !== null) right.push(labelRuns(`*χ*^{2}/*N* ${chi.toFixed(2)}`));
    const gamma = String(Number(systemic_kms.toFixed(1))).replace("-", "−");
    right.push(labelRuns(`*γ* ${gamma} ${KMS_LABEL}`));
  }
  // What a map was made in spite of is said on small ones, too.
  if (phase_gap !== undefined) {
    right.push(plainRuns(`phase gap ${phase_gap.toFixed(2)}`));
  }
  const size = large ? LABEL_PT : NOTE_PT;
  return [
    ...left.map(({ runs, quiet }, i): Item => ({
      kind: "text",
      x: frame.x + 5,
      y: top + 1.22 * size * i,
      size_pt: quiet ? NOTE_PT : size,
      fill: quiet ? QUIET : INK,
      runs,
    })),
    ...right.map((runs, i): Item => ({
      kind: "text",
      x: frame.x + frame.width,
      y: top + 9 * i,
      size_pt: NOTE_PT,
      fill: QUIET,
      anchor: "end",
      runs,
    })),
  ];
}
