/// <reference lib="dom" />
import type { Item, Picture } from "../display_list.ts";
import { pictureMarkup } from "./browser_svg.ts";
import type { PageState } from "./page_state.ts";
import {
  MAP_SIZE,
  mapOverlay,
  mapPicture,
  type Shown,
  TRAIL_SIZE,
  trailOverlay,
  trailPicture,
} from "./page_views.ts";

/** Map and trails as they stand on the page, in one picture. */
export function viewPicture(shown: Shown, state: PageState): Picture {
  const map = mapPicture(shown, state);
  const trail = trailPicture(shown, state);
  const group = (items: readonly Item[], x: number): Item => ({ kind: "group", x, items });
  return {
    width: MAP_SIZE.width + TRAIL_SIZE.width,
    height: MAP_SIZE.height,
    title: map.title,
    description: `${map.description}. ${trail.description}`,
    items: [
      group([...map.items, ...mapOverlay(shown, state)], 0),
      group([...trail.items, ...trailOverlay(shown, state)], MAP_SIZE.width),
    ],
  };
}

/** Saves the view as a file through the browser. */
export async function saveView(
  shown: Shown,
  state: PageState,
  format: "svg" | "png",
): Promise<void> {
  const picture = viewPicture(shown, state);
  const fonts = document.getElementById("fonts")?.textContent ?? "";
  const svg = new Blob([pictureMarkup(picture, "view", fonts)], { type: "image/svg+xml" });
  const name = `${shown.line.name.replaceAll(/[^A-Za-z0-9]+/g, "-")}-view`;
  if (format === "svg") return offer(svg, `${name}.svg`);
  const image = new Image();
  const url = URL.createObjectURL(svg);
  image.src = url;
  await image.decode();
  const canvas = document.createElement("canvas");
  const scale = 300 / 72;
  canvas.width = Math.round(picture.width * scale);
  canvas.height = Math.round(picture.height * scale);
  const context = canvas.getContext("2d")!;
  context.fillStyle = "#ffffff";
  context.fillRect(0, 0, canvas.width, canvas.height);
  context.drawImage(image, 0, 0, canvas.width, canvas.height);
  URL.revokeObjectURL(url);
  const blob = await new Promise<Blob | null>((resolve) => canvas.toBlob(resolve, "image/png"));
  if (blob) offer(blob, `${name}.png`);
}

function offer(blob: Blob, name: string): void {
  const link = document.createElement("a");
  link.href = URL.createObjectURL(blob);
  link.download = name;
  link.click();
  setTimeout(() => URL.revokeObjectURL(link.href), 10_000);
}
