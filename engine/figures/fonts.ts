// Packages of files alone: these imports put them in the module graph.
import "@expo-google-fonts/stix-two-text/package.json" with { type: "json" };
import "dejavu-fonts-ttf/package.json" with { type: "json" };
import type { Run } from "./display_list.ts";
import { type FaceName, type FacePiece, FALLBACK_FAMILY, TEXT_FAMILY } from "./font_names.ts";
import { type FontMetrics, readFontMetrics } from "./font_metrics.ts";
import { packageFile } from "./package_file.ts";
import { runStyle } from "./runs.ts";

/** A font face: its bytes and its measures. */
export interface Face {
  /** Family name as it stands in the font. */
  readonly family: string;
  /** TrueType bytes. */
  readonly bytes: Uint8Array<ArrayBuffer>;
  /** Widths and coverage. */
  readonly metrics: FontMetrics;
}

const addresses: Readonly<Record<FaceName, string>> = {
  regular: import.meta.resolve(
    "@expo-google-fonts/stix-two-text/400Regular/STIXTwoText_400Regular.ttf",
  ),
  italic: import.meta.resolve(
    "@expo-google-fonts/stix-two-text/400Regular_Italic/STIXTwoText_400Regular_Italic.ttf",
  ),
  fallback: import.meta.resolve("dejavu-fonts-ttf/ttf/DejaVuSans.ttf"),
};

/** Names of the three faces. */
export const faceNames = ["regular", "italic", "fallback"] as const satisfies FaceName[];

const known = new Map<FaceName, Face>();

/**
 * A font face, read from its package when it is first asked for.
 *
 * @param name Which face.
 * @returns The face.
 *
 * @example
 * ```ts
 * import { fontFace } from "@millrace/millrace/figures";
 * import { assertEquals } from "@std/assert";
 *
 * assertEquals(fontFace("regular").family, "STIX Two Text");
 * ```
 */
export function fontFace(name: FaceName): Face {
  const face = known.get(name) ?? readFace(name);
  known.set(name, face);
  return face;
}

function readFace(name: FaceName): Face {
  const bytes = packageFile(addresses[name]);
  const family = name === "fallback" ? FALLBACK_FAMILY : TEXT_FAMILY;
  return { family, bytes, metrics: readFontMetrics(bytes) };
}

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
    const lacking = !fontFace(own).metrics.has(code) && fontFace("fallback").metrics.has(code);
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
    for (const { text, face } of facePieces(run)) {
      width += fontFace(face).metrics.width(text) * size;
    }
  }
  return width;
}
