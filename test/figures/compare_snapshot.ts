import { AssertionError } from "@std/assert";
import { type Picture, pictureRaster, pngFile, type Raster } from "../../engine/figures/mod.ts";
import { decodePng } from "./decode.ts";

const DPI = 96;
/** A channel may differ by this many of 256 levels: edges, where a coordinate's last digit differs. */
const LEVELS = 24;
/** Part of the pixels that may differ by more. */
const PART = 0.001;

/**
 * Compares a picture with the one kept under a name. Nothing is ever created in passing: pictures
 * are kept by `MILLRACE_KEEP_SNAPSHOTS=1 deno task test`, looked at, and committed. On a difference
 * both and what differs are left in `.scratch/`.
 */
export async function compareSnapshot(picture: Picture, name: string): Promise<void> {
  const raster = await pictureRaster(picture, { dpi: DPI });
  const kept = new URL(`./snapshots/${name}.png`, import.meta.url);
  if (Deno.env.get("MILLRACE_KEEP_SNAPSHOTS") === "1") {
    await Deno.writeFile(kept, pngFile(raster, { dpi: DPI, level: 9 }));
    return;
  }
  let bytes: Uint8Array;
  try {
    bytes = await Deno.readFile(kept);
  } catch (error) {
    if (!(error instanceof Deno.errors.NotFound)) throw error;
    throw new AssertionError(`There is no kept picture ${name}.png to compare with`);
  }
  const difference = differ(raster, bytes);
  if (difference === null) return;
  const folder = new URL("../../.scratch/snapshots/", import.meta.url);
  await Deno.mkdir(folder, { recursive: true });
  await Deno.writeFile(new URL(`${name}.now.png`, folder), pngFile(raster));
  await Deno.writeFile(new URL(`${name}.kept.png`, folder), bytes);
  if (difference.picture) {
    await Deno.writeFile(new URL(`${name}.difference.png`, folder), pngFile(difference.picture));
  }
  throw new AssertionError(
    `${name}.png is not as kept: ${difference.text}; see .scratch/snapshots/${name}.*.png`,
  );
}

interface Difference {
  readonly text: string;
  readonly picture?: Raster;
}

/** What differs; null where the two agree. */
export function differ(now: Raster, keptPng: Uint8Array): Difference | null {
  const kept = decodePng(keptPng);
  const { columns, rows } = now;
  if (kept.columns !== columns || kept.rows !== rows) {
    return { text: `${columns} × ${rows} pixels in place of ${kept.columns} × ${kept.rows}` };
  }
  const rgb = new Uint8Array(columns * rows * 3);
  let count = 0;
  for (let row = 0; row < rows; row++) {
    for (let column = 0; column < columns; column++) {
      const at = 3 * (row * columns + column);
      const before = kept.at(column, row);
      const apart = Math.max(...before.map((value, k) => Math.abs(value - now.rgb[at + k]!)));
      const light = 159 + Math.round((before[0] + before[1] + before[2]) / 8);
      rgb.set(apart > LEVELS ? [220, 0, 0] : [light, light, light], at);
      if (apart > LEVELS) count++;
    }
  }
  if (count <= PART * columns * rows) return null;
  return { text: `${count} of ${columns * rows} pixels differ`, picture: { columns, rows, rgb } };
}
