/** A colour as red, green and blue, 0 to 255 (not rounded). */
export type Rgb = readonly [red: number, green: number, blue: number];

/** A colour as CIE 1976 L*, a*, b* under D65: lightness 0 to 100, green to red, blue to yellow. */
export type Lab = readonly [lightness: number, a: number, b: number];

// IEC 61966-2-1 (sRGB) primaries and the D65 white.
const WHITE = [0.95047, 1, 1.08883] as const;
const DELTA = 6 / 29;

/**
 * The sRGB colour of a CIE Lab colour, clipped to what a screen can show.
 *
 * @param lab Lightness, a*, b*.
 * @returns Red, green, blue, 0 to 255.
 *
 * @example
 * ```ts
 * import { labToRgb } from "@millrace/millrace/figures";
 * import { assertAlmostEquals } from "@std/assert";
 *
 * assertAlmostEquals(labToRgb([100, 0, 0])[1], 255, 0.01);
 * assertAlmostEquals(labToRgb([53.585, 0, 0])[0], 128, 0.1);
 * ```
 */
export function labToRgb(lab: Lab): Rgb {
  const fy = (lab[0] + 16) / 116;
  const back = (f: number) => f > DELTA ? f ** 3 : 3 * DELTA ** 2 * (f - 4 / 29);
  const x = WHITE[0] * back(fy + lab[1] / 500);
  const y = WHITE[1] * back(fy);
  const z = WHITE[2] * back(fy - lab[2] / 200);
  return [
    encode(3.2404542 * x - 1.5371385 * y - 0.4985314 * z),
    encode(-0.969266 * x + 1.8760108 * y + 0.041556 * z),
    encode(0.0556434 * x - 0.2040259 * y + 1.0572252 * z),
  ];
}

/**
 * The CIE Lab colour of an sRGB colour.
 *
 * @param rgb Red, green, blue, 0 to 255.
 * @returns Lightness, a*, b*.
 *
 * @example
 * ```ts
 * import { rgbToLab } from "@millrace/millrace/figures";
 * import { assertAlmostEquals } from "@std/assert";
 *
 * assertAlmostEquals(rgbToLab([255, 255, 255])[0], 100, 0.01);
 * assertAlmostEquals(rgbToLab([255, 0, 0])[1], 80.1, 0.1);
 * ```
 */
export function rgbToLab(rgb: Rgb): Lab {
  const r = decode(rgb[0]);
  const g = decode(rgb[1]);
  const b = decode(rgb[2]);
  const forth = (t: number) => t > DELTA ** 3 ? Math.cbrt(t) : t / (3 * DELTA ** 2) + 4 / 29;
  const fx = forth((0.4124564 * r + 0.3575761 * g + 0.1804375 * b) / WHITE[0]);
  const fy = forth((0.2126729 * r + 0.7151522 * g + 0.072175 * b) / WHITE[1]);
  const fz = forth((0.0193339 * r + 0.119192 * g + 0.9503041 * b) / WHITE[2]);
  return [116 * fy - 16, 500 * (fx - fy), 200 * (fy - fz)];
}

/** Linear light, 0 to 1, to an sRGB value, 0 to 255, clipped. */
function encode(linear: number): number {
  const clipped = Math.min(1, Math.max(0, linear));
  return 255 * (clipped <= 0.0031308 ? 12.92 * clipped : 1.055 * clipped ** (1 / 2.4) - 0.055);
}

/** An sRGB value, 0 to 255, to linear light, 0 to 1. */
function decode(value: number): number {
  const v = value / 255;
  return v <= 0.04045 ? v / 12.92 : ((v + 0.055) / 1.055) ** 2.4;
}

/**
 * Writes a colour as `#rrggbb`.
 *
 * @param rgb Red, green, blue, 0 to 255.
 * @returns The colour's name in SVG and PDF.
 *
 * @example
 * ```ts
 * import { hexColour } from "@millrace/millrace/figures";
 * import { assertEquals } from "@std/assert";
 *
 * assertEquals(hexColour([255, 127.6, 0]), "#ff8000");
 * ```
 */
export function hexColour(rgb: Rgb): string {
  return `#${rgb.map((value) => Math.round(value).toString(16).padStart(2, "0")).join("")}`;
}
