/** How a column is set. */
export type Alignment = "left" | "right";

/**
 * Sets rows as aligned columns, two spaces apart.
 *
 * @param rows Cells; the first row is the heading where `heading` is true.
 * @param options How to set them.
 * @param options.align Alignment of each column. @default left for all
 * @param options.heading Whether the first row is underlined. @default false
 * @param options.indent Spaces before each row. @default 2
 * @returns One line a row.
 */
export function tableLines(
  rows: readonly (readonly string[])[],
  options: { align?: readonly Alignment[]; heading?: boolean; indent?: number } = {},
): string[] {
  const { align = [], heading = false, indent = 2 } = options;
  const columns = Math.max(0, ...rows.map((row) => row.length));
  const widths = Array.from(
    { length: columns },
    (_, c) => Math.max(...rows.map((row) => displayWidth(row[c] ?? ""))),
  );
  const line = (row: readonly string[]) =>
    (" ".repeat(indent) + widths.map((width, c) => {
      const cell = row[c] ?? "";
      const space = " ".repeat(width - displayWidth(cell));
      return align[c] === "right" ? space + cell : cell + space;
    }).join("  ")).trimEnd();
  const lines = rows.map(line);
  if (heading && lines.length > 0) {
    lines.splice(1, 0, " ".repeat(indent) + widths.map((width) => "─".repeat(width)).join("  "));
  }
  return lines;
}

function displayWidth(text: string): number {
  // Combining marks take no column of their own.
  return [...text.replace(/\p{M}/gu, "")].length;
}

/**
 * A value with its error, both to the digits that the error justifies: two digits of the error when
 * it begins with 1 or 2, else one.
 *
 * @param value The value.
 * @param error Its standard deviation; null, zero or infinite when unknown.
 * @returns Text such as `321.4 ± 1.2`.
 */
export function withError(value: number, error: number | null): string {
  if (error === null || !(error > 0) || !Number.isFinite(error)) return plainNumber(value);
  const exponent = Math.floor(Math.log10(error));
  const lead = error / 10 ** exponent;
  const decimals = Math.max(0, -exponent + (lead < 2.95 ? 1 : 0));
  return `${minus(value.toFixed(decimals))} ± ${error.toFixed(decimals)}`;
}

/**
 * A number to a number of decimals, with a true minus sign.
 *
 * @param value The number.
 * @param decimals Digits after the point; four significant digits when not stated.
 * @returns The text; a dash when the value is missing.
 */
export function plainNumber(value: number | null | undefined, decimals?: number): string {
  if (value === null || value === undefined || !Number.isFinite(value)) return "–";
  if (decimals !== undefined) return minus(value.toFixed(decimals));
  return minus(String(Number(value.toPrecision(4))));
}

function minus(text: string): string {
  return text.replace(/^-/, "−");
}
