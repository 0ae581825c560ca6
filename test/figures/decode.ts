import { Buffer } from "node:buffer";
import { PNG } from "pngjs";
import type { Box } from "../../engine/figures/mod.ts";

/** A decoded picture. */
export interface Pixels {
  readonly columns: number;
  readonly rows: number;
  /** Red, green and blue at a pixel. */
  at(column: number, row: number): [number, number, number];
}

/** Decodes a PNG file. */
export function decodePng(bytes: Uint8Array): Pixels {
  const png = PNG.sync.read(Buffer.from(bytes));
  return {
    columns: png.width,
    rows: png.height,
    at(column, row) {
      const i = 4 * (row * png.width + column);
      return [png.data[i]!, png.data[i + 1]!, png.data[i + 2]!];
    },
  };
}

/** Name and content of the chunks of a PNG file. */
export function pngChunks(bytes: Uint8Array): { type: string; data: Uint8Array }[] {
  const view = new DataView(bytes.buffer, bytes.byteOffset);
  const chunks = [];
  for (let at = 8; at < bytes.length;) {
    const length = view.getUint32(at);
    const type = new TextDecoder().decode(bytes.subarray(at + 4, at + 8));
    chunks.push({ type, data: bytes.subarray(at + 8, at + 8 + length) });
    at += length + 12;
  }
  return chunks;
}

/** Centre of the dark within a box (pt) of a picture drawn at a resolution, in parts of the box from its lower left. */
export function darkCentre(pixels: Pixels, box: Box, dpi: number): { u: number; v: number } {
  const scale = dpi / 72;
  let [sum, su, sv] = [0, 0, 0];
  const margin = 3;
  for (
    let row = Math.ceil(box.y * scale) + margin;
    row < (box.y + box.height) * scale - margin;
    row++
  ) {
    for (
      let column = Math.ceil(box.x * scale) + margin;
      column < (box.x + box.width) * scale - margin;
      column++
    ) {
      const [r, g, b] = pixels.at(column, row);
      const dark = r + g + b < 300 ? 1 : 0;
      sum += dark;
      su += dark * ((column + 0.5) / scale - box.x) / box.width;
      sv += dark * (1 - ((row + 0.5) / scale - box.y) / box.height);
    }
  }
  return { u: su / sum, v: sv / sum };
}

/** True where a tool of the system is there. */
export function toolExists(path: string): boolean {
  try {
    return Deno.statSync(path).isFile;
  } catch {
    return false;
  }
}
