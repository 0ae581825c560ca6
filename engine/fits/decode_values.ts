import { decodeNumbers } from "./decode_numbers.ts";
import type { Scaling } from "./decode_numbers.ts";
import type { Letter } from "./table_form.ts";
import type { BitValues, FixedValues, LogicalValues } from "./values.ts";

const latin1 = new TextDecoder("latin1");

function decodeLogical(bytes: Uint8Array): LogicalValues {
  const data = new Uint8Array(bytes.length);
  let missing: Uint8Array | null = null;
  for (let k = 0; k < bytes.length; k++) {
    const byte = bytes[k];
    if (byte === 0x54) data[k] = 1;
    else if (byte !== 0x46) (missing ??= new Uint8Array(bytes.length))[k] = 1;
  }
  return { kind: "logical", data, missing };
}

// Bits are left-justified in each cell, most significant first (FITS 4.0, 7.3.3.1).
function decodeBits(bytes: Uint8Array, perCell: number): BitValues {
  const cell = Math.ceil(perCell / 8);
  const cells = cell === 0 ? 0 : bytes.length / cell;
  const data = new Uint8Array(cells * perCell);
  for (let c = 0, out = 0; c < cells; c++) {
    for (let k = 0; k < perCell; k++, out++) {
      data[out] = bytes[c * cell + (k >> 3)]! >>> (7 - (k & 7)) & 1;
    }
  }
  return { kind: "bit", data };
}

function decodeTexts(bytes: Uint8Array, length: number, count: number): string[] {
  if (length === 0) return Array<string>(count).fill("");
  const all = latin1.decode(bytes);
  return Array.from({ length: count }, (_, k) => {
    const text = all.slice(k * length, (k + 1) * length);
    const nul = text.indexOf("\0");
    return (nul < 0 ? text : text.slice(0, nul)).trimEnd();
  });
}

/** How a run of values is laid out. */
export interface Layout {
  /** Type of the values. */
  readonly letter: Letter;
  /** Number of cells. */
  readonly cells: number;
  /** Values per cell: bits for X, characters for A. */
  readonly repeat: number;
  /** Length of one string; the cell's characters make `repeat / string_length` of them. */
  readonly string_length: number;
  /** Scaling and missing value of numbers. */
  readonly scaling: Scaling;
}

/**
 * Decodes cells that follow each other without gap.
 *
 * @param bytes The cells' bytes.
 * @param layout Type and number.
 * @returns The values.
 */
export function decodeValues(bytes: Uint8Array, layout: Layout): FixedValues {
  const { letter, cells, repeat, string_length, scaling } = layout;
  switch (letter) {
    case "L":
      return decodeLogical(bytes);
    case "X":
      return decodeBits(bytes, repeat);
    case "A": {
      const strings = string_length === 0 ? 1 : Math.floor(repeat / string_length);
      if (string_length === 0 || strings * string_length === repeat) {
        const data = decodeTexts(bytes, string_length, cells * strings);
        return { kind: "text", data };
      }
      const data: string[] = [];
      for (let c = 0; c < cells; c++) {
        const cell = bytes.subarray(c * repeat, c * repeat + strings * string_length);
        for (const text of decodeTexts(cell, string_length, strings)) data.push(text);
      }
      return { kind: "text", data };
    }
    case "C":
      return { kind: "complex", data: decodeNumbers(bytes, "E").data as Float32Array };
    case "M":
      return { kind: "complex", data: decodeNumbers(bytes, "D").data as Float64Array };
    default:
      return decodeNumbers(bytes, letter, scaling);
  }
}
