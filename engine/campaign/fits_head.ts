import type { CardSpec, ImageSpec } from "../fits/mod.ts";
import type { Target } from "./target.ts";
import { VERSION } from "./version.ts";

/**
 * The empty primary HDU of an output: who made it, from which settings.
 *
 * @param target The target.
 * @param options What the file holds.
 * @param options.content One line on what follows.
 * @param options.cards Further cards.
 * @returns The HDU.
 */
export function fitsHead(
  target: Target,
  options: { content: string; cards?: readonly CardSpec[] },
): ImageSpec {
  return {
    kind: "image",
    shape: [],
    data: null,
    cards: [
      { keyword: "CREATOR", value: "Millrace", comment: "program" },
      { keyword: "VERSION", value: VERSION, comment: "version of the program" },
      { keyword: "OBJECT", value: target.title },
      { keyword: "SETTINGS", value: target.settings_digest, comment: "SHA-256 of the settings" },
      { keyword: "SEED", value: target.settings.seed },
      ...(options.cards ?? []),
      { keyword: "COMMENT", value: options.content },
    ],
  };
}

/** Name of an HDU of a line: EXTNAME as observers can type it. */
export function hduName(line: string, suffix = ""): string {
  return `${line}${suffix === "" ? "" : ` ${suffix}`}`.toUpperCase();
}
