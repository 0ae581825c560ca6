import type { Hdu } from "../fits/mod.ts";
import { type Fact, type Facts, plainKey } from "./facts.ts";

/**
 * Facts of one row of a FITS table: its columns of single values.
 *
 * @param hdu The table.
 * @param row The row, from 0.
 * @returns The facts; a comment is the column's description and unit.
 *
 * @example
 * ```ts
 * import { tableRowFacts } from "@millrace/millrace/spectra";
 * import { encodeFits, parseFits } from "@millrace/millrace/fits";
 * import { assertEquals } from "@std/assert";
 *
 * const bytes = encodeFits([{
 *   kind: "table",
 *   columns: [{ name: "EXPTIME", unit: "s", data: Float64Array.of(60, 120) }],
 * }]);
 * const fact = tableRowFacts(parseFits(bytes).hdus[1]!, 1).find("exptime")!;
 * assertEquals([fact.text, fact.comment.trim()], ["120", "s"]);
 * ```
 */
export function tableRowFacts(hdu: Hdu, row: number): Facts {
  const heads = hdu.columns.filter((column) => column.width === 1);
  const known = new Map<string, Fact | undefined>();
  return {
    find(key) {
      const id = plainKey(key);
      if (known.has(id)) return known.get(id);
      const head = heads.find((column) => plainKey(column.name) === id);
      let fact: Fact | undefined;
      if (head !== undefined) {
        const column = hdu.column(head.number);
        const value = column.kind === "text" || column.kind === "number"
          ? column.data[row]
          : undefined;
        const text = value === undefined ? "" : String(value).trim();
        if (text !== "" && text !== "NaN") {
          fact = { key: head.name, text, comment: `${head.description} ${head.unit ?? ""}` };
        }
      }
      known.set(id, fact);
      return fact;
    },
    names: () => heads.map((column) => column.name),
  };
}
