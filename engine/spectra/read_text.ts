import { InputError } from "../errors.ts";
import { errorFrom } from "./error_kind.ts";
import { type Facts, joinFacts, namedFacts } from "./facts.ts";
import { numberOf } from "./number_text.ts";
import type { RecordedExposure } from "./recorded_exposure.ts";
import { angstromIn, unitBySize } from "./wavelength_units.ts";

const BLANK_VALUES = /^(nan|-nan|inf|-inf|null|indef|--|\.\.\.)$/i;

/**
 * Reads a text table of one exposure: columns of wavelength, flux and, if there is a third, error,
 * separated by blanks, commas or semicolons. Lines that begin with `#`, `!` or `%`, and a first line
 * of names, are passed over; a comment of the form `# key = value` is a fact.
 *
 * @param text The text.
 * @param options The file, for messages; facts from its log.
 * @returns The recorded exposure.
 * @throws {InputError} When a line is not numbers, or columns are missing; with file and line.
 *
 * @example
 * ```ts
 * import { readText1d } from "@millrace/millrace/spectra";
 * import { assertEquals } from "@std/assert";
 *
 * const spectrum = readText1d("# air\n4860.0 1.0 0.1\n4860.5 1.2 0.1\n", { file: "a.txt" });
 * assertEquals(spectrum.flux, Float64Array.of(1, 1.2));
 * ```
 */
export function readText1d(
  text: string,
  options: { readonly file: string; readonly log?: Facts },
): RecordedExposure {
  const { file, log } = options;
  const rows: number[][] = [];
  const stated: [string, string][] = [];
  let columns = 0;
  const refuse = (rule: string, value: unknown, line: number) =>
    new InputError({ action: "read text spectrum", rule, value, file, line });
  text.split(/\r\n|\r|\n/).forEach((raw, index) => {
    const line = raw.trim();
    if (line === "") return;
    const comment = /^[#!%]+\s*(?:([\w-]+)\s*[=:]\s*(.*))?/.exec(line);
    if (comment !== null) {
      if (comment[1] !== undefined) stated.push([comment[1], comment[2]!.replace(/^'|'$/g, "")]);
      return;
    }
    const cells = line.split(/[\s,;]+/).filter((cell) => cell !== "");
    const values = cells.map((cell) => BLANK_VALUES.test(cell) ? NaN : numberOf(cell));
    if (values.some((value) => value === null)) {
      // One line of names may stand at the top.
      if (rows.length === 0 && columns === 0 && cells.every((cell) => numberOf(cell) === null)) {
        columns = -1;
        return;
      }
      throw refuse("a line must hold numbers", line.slice(0, 60), index + 1);
    }
    if (columns > 0 && values.length !== columns || values.length < 2) {
      throw refuse(
        columns > 0
          ? `every line must have ${columns} columns`
          : "a line must hold wavelength and flux",
        values.length,
        index + 1,
      );
    }
    columns = values.length;
    rows.push(values as number[]);
  });
  if (rows.length === 0) {
    throw new InputError({
      action: "read text spectrum",
      rule: "the file must hold lines of numbers",
      value: "none",
      file,
    });
  }
  const column = (k: number) => Float64Array.from(rows, (row) => row[k]!);
  const facts = joinFacts([...(log === undefined ? [] : [log]), namedFacts(stated)]);
  const wavelengths = column(0);
  const typical = wavelengths.find((w) => Number.isFinite(w)) ?? NaN;
  const asked = facts.find("wavelength_unit")?.text;
  const unit = asked ?? unitBySize(typical);
  const factor = unit === null ? null : angstromIn(unit);
  if (factor === null) {
    throw new InputError({
      action: "read text spectrum",
      rule: "the first column must be wavelengths",
      value: typical,
      file,
    });
  }
  return {
    source: file,
    file,
    axis: {
      wavelength_angstrom: wavelengths.map((w) => factor * w),
      medium: null,
      decisions: [
        { what: "wavelength axis", value: "first column", from: "text", assumed: false },
        {
          what: "wavelength unit",
          value: unit!,
          from: asked === undefined ? "size of the values" : "wavelength_unit",
          assumed: asked === undefined,
        },
      ],
    },
    flux: column(1),
    error: columns > 2 ? errorFrom(column(2), "error") : null,
    unit: "",
    times: facts,
    facts,
    decisions: columns > 2
      ? [{ what: "errors", value: "error", from: "third column", assumed: false }]
      : [],
  };
}
