/** The faces in use: the text family upright and italic, and a fallback for signs it lacks. */
export type FaceName = "regular" | "italic" | "fallback";

/** Characters that one face can write. */
export interface FacePiece {
  /** The characters. */
  readonly text: string;
  /** The face that has them. */
  readonly face: FaceName;
}

/** Family name of the text face, as SVG names it. */
export const TEXT_FAMILY = "STIX Two Text";
/** Family name of the fallback face. */
export const FALLBACK_FAMILY = "DejaVu Sans";
