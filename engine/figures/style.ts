/** Colour of text, frames and theory lines. */
export const INK = "#1c2430";
/** Colour of second-rank text and of ticks. */
export const QUIET = "#59636f";
/** Colour of what was found in the data: the one accent, clear of every default colour map. */
export const ACCENT = "#c63d19";
/** Bare paper, and the halo under lines and letters over an image. */
export const PAPER = "#ffffff";

/** Axis labels and panel names, pt. */
export const LABEL_PT = 8.5;
/** Tick labels, pt. */
export const TICK_PT = 7.5;
/** Notes and direct labels within panels, pt. */
export const NOTE_PT = 7;

/** Frame lines and ticks, pt. */
export const HAIRLINE_PT = 0.5;
/** Curves, pt. */
export const CURVE_PT = 0.9;

/**
 * Colours of series that stand side by side, apart for every kind of colour blindness and dark enough
 * for small letters. In grey the shapes of their points keep them apart.
 */
export const SERIES = [INK, ACCENT, "#2f78b4", "#6d7178"] as const;
