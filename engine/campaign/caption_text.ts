import { VERSION } from "./version.ts";

/** A caption as a text file; its first line says who wrote it, so that it may be replaced. */
export function captionText(caption: string): string {
  return `Caption written by Millrace ${VERSION}\n\n${caption}\n`;
}
