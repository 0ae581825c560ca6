import regular from "@expo-google-fonts/stix-two-text/400Regular/STIXTwoText_400Regular.ttf" with {
  type: "bytes",
};
import italic from "@expo-google-fonts/stix-two-text/400Regular_Italic/STIXTwoText_400Regular_Italic.ttf" with {
  type: "bytes",
};
import sans from "dejavu-fonts-ttf/ttf/DejaVuSans.ttf" with { type: "bytes" };
import { type FontMetrics, readFontMetrics } from "./font_metrics.ts";
import type { Run } from "./display_list.ts";
import { type FaceName, type FacePiece, FALLBACK_FAMILY, TEXT_FAMILY } from "./font_names.ts";
import { runStyle } from "./runs.ts";

/** A font face: its bytes and its measures. */
export interface Face {
  /** Family name as it stands in the font. */
  readonly family: string;
  /** TrueType bytes. */
  readonly bytes: Uint8Array;
  /** Widths and coverage. */
  readonly metrics: FontMetrics;
}

/** The three faces. */
export const faces: Readonly<Record<FaceName, Face>> = {
  regular: { family: TEXT_FAMILY, bytes: regular, metrics: readFontMetrics(regular) },
  italic: { family: TEXT_FAMILY, bytes: italic, metrics: readFontMetrics(italic) },
  fallback: { family: FALLBACK_FAMILY, bytes: sans, metrics: readFontMetrics(sans) },
};

/**
 * Splits a run where its face lacks a character that the fallback has. Renderers differ in what
 * they do about missing glyphs; after this there are none.
 *
 * @param run The run.
 * @returns Pieces of one face each, in order.
 *
 * @example
 * ```ts
 * import { facePieces } from "@millrace/millrace/figures";
 * import { assertEquals } from "@std/assert";
 *
 * assertEquals(facePieces({ text: "M☉" }), [
 *   { text: "M", face: "regular" },
 *   { text: "☉", face: "fallback" },
 * ]);
 * ```
 */
export function facePieces(run: Run): FacePiece[] {
  const own: FaceName = run.italic ? "italic" : "regular";
  const pieces: FacePiece[] = [];
  for (const character of run.text) {
    const code = character.codePointAt(0)!;
    const lacking = !faces[own].metrics.has(code) && faces.fallback.metrics.has(code);
    const face = lacking ? "fallback" : own;
    const last = pieces.at(-1);
    if (last?.face === face) pieces[pieces.length - 1] = { text: last.text + character, face };
    else pieces.push({ text: character, face });
  }
  return pieces;
}

/**
 * Width of a line of text (kerning left out: within a few per cent of what is drawn). For layout; what is drawn
 * is placed by the renderers themselves.
 *
 * @param runs Its runs.
 * @param size_pt Its size, pt.
 * @returns Width, pt.
 *
 * @example
 * ```ts
 * import { labelRuns, textWidth } from "@millrace/millrace/figures";
 * import { assertAlmostEquals } from "@std/assert";
 *
 * const narrow = textWidth(labelRuns("km"), 8);
 * assertAlmostEquals(textWidth(labelRuns("km"), 16), 2 * narrow, 1e-9);
 * ```
 */
export function textWidth(runs: readonly Run[], size_pt: number): number {
  let width = 0;
  for (const run of runs) {
    const { size_pt: size } = runStyle(run, size_pt);
    for (const { text, face } of facePieces(run)) width += faces[face].metrics.width(text) * size;
  }
  return width;
}
