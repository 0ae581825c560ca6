import { interpolateCividis, interpolateMagma, interpolateViridis } from "d3-scale-chromatic";
import { InputError } from "../../errors.ts";
import { type Lab, labToRgb, type Rgb } from "./lab.ts";

/** Names of the colour maps: ours, and three that others published. */
export const colourMapNames = [
  "ink",
  "tide",
  "balance",
  "grey",
  "viridis",
  "cividis",
  "magma",
] as const;

/** Name of a colour map. */
export type ColourMapName = typeof colourMapNames[number];

/** Number of colours in a table. */
export const COLOUR_COUNT = 256;

interface Curve {
  readonly lightness: readonly number[];
  readonly a: readonly number[];
  readonly b: readonly number[];
}

// Curves through CIE Lab. Lightness is even along ink and grey and falls all along tide, so that they
// read the same in grey; the
// hues keep to what the three kinds of colour blindness leave apart (green-blue, yellow-blue).
const curves = {
  /** Paper to ink: more light in the line is darker on the page. */
  ink: { lightness: [98, 10], a: [0, -10, -14, -6, 14, 12], b: [2, 4, -12, -34, -36, -14] },
  /** For signed values: below zero pale yellow, zero light grey, above zero deep blue. */
  tide: { lightness: [97, 69, 27], a: [-4, 0, 0, 6, 16], b: [50, 25, 0, -25, -46] },
  /** For signed values on a screen: zero is white. In grey the two signs look the same. */
  balance: {
    lightness: [32, 97, 32],
    a: [34, 24, 0, -8, 6],
    b: [40, 36, 0, -26, -40],
  },
  /** Paper to black. */
  grey: { lightness: [98, 8], a: [0, 0], b: [0, 0] },
} satisfies Record<string, Curve>;

/**
 * The colours of a colour map.
 *
 * @param name Name of the map.
 * @returns {@linkcode COLOUR_COUNT} × 3 bytes: red, green, blue from the lowest value to the highest.
 * @throws {InputError} When the name is not known.
 *
 * @example
 * ```ts
 * import { colourTable } from "@millrace/millrace/figures";
 * import { assert } from "@std/assert";
 *
 * const ink = colourTable("ink");
 * assert(ink[0]! > 240 && ink.at(-1)! < 60); // paper to ink
 * ```
 */
export function colourTable(name: ColourMapName): Uint8Array {
  const known = tables.get(name);
  if (known) return known;
  if (!colourMapNames.includes(name)) {
    throw new InputError({
      action: "choose colours",
      rule: `a colour map must be one of ${colourMapNames.join(", ")}`,
      value: name,
    });
  }
  const table = new Uint8Array(COLOUR_COUNT * 3);
  for (let i = 0; i < COLOUR_COUNT; i++) {
    const rgb = colourAt(name, i / (COLOUR_COUNT - 1));
    for (let k = 0; k < 3; k++) table[3 * i + k] = Math.round(rgb[k]!);
  }
  tables.set(name, table);
  return table;
}

const tables = new Map<ColourMapName, Uint8Array>();

function colourAt(name: ColourMapName, t: number): Rgb {
  switch (name) {
    case "viridis":
      return parse(interpolateViridis(t));
    case "cividis":
      return parse(interpolateCividis(t));
    case "magma":
      return parse(interpolateMagma(t));
    default:
      return labToRgb(curveAt(curves[name], t));
  }
}

function curveAt(curve: Curve, t: number): Lab {
  return [polyline(curve.lightness, t), spline(curve.a, t), spline(curve.b, t)];
}

function polyline(values: readonly number[], t: number): number {
  const last = values.length - 1;
  const i = Math.min(last - 1, Math.floor(t * last));
  const u = t * last - i;
  return (1 - u) * values[i]! + u * values[i + 1]!;
}

/** Uniform cubic B-spline that starts at the first value and ends at the last. */
function spline(values: readonly number[], t: number): number {
  const last = values.length - 1;
  const i = Math.min(last - 1, Math.floor(t * last));
  const u = t * last - i;
  const v1 = values[i]!;
  const v2 = values[i + 1]!;
  const v0 = values[i - 1] ?? 2 * v1 - v2;
  const v3 = values[i + 2] ?? 2 * v2 - v1;
  return ((1 - u) ** 3 * v0 + (3 * u ** 3 - 6 * u ** 2 + 4) * v1 +
    (-3 * u ** 3 + 3 * u ** 2 + 3 * u + 1) * v2 + u ** 3 * v3) / 6;
}

function parse(colour: string): Rgb {
  const hex = /^#(..)(..)(..)$/.exec(colour);
  const parts = hex
    ? hex.slice(1).map((part) => parseInt(part, 16))
    : colour.match(/\d+/g)!.map(Number);
  return [parts[0]!, parts[1]!, parts[2]!];
}
