const greek: Readonly<Record<string, string>> = {
  alpha: "α",
  beta: "β",
  gamma: "γ",
  delta: "δ",
  epsilon: "ε",
};

/**
 * Name of a spectral line as a paper prints it: "H beta" becomes Hβ.
 *
 * @param name Name of the line.
 * @returns The name to print.
 *
 * @example
 * ```ts
 * import { lineLabel } from "@millrace/millrace/figures";
 * import { assertEquals } from "@std/assert";
 *
 * assertEquals(lineLabel("H beta"), "Hβ");
 * assertEquals(lineLabel("He II 4686"), "He II 4686");
 * ```
 */
export function lineLabel(name: string): string {
  return name.replace(/ (alpha|beta|gamma|delta|epsilon)\b/g, (_, letter) => greek[letter]!);
}
