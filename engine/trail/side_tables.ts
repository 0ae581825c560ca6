import { InputError } from "../errors.ts";
import { csvNumbers, type CsvTable, csvTexts, parseCsv } from "../files/mod.ts";
import { julianDate, type SplitDate } from "../sky/mod.ts";
import type { Photometry } from "./photometry.ts";
import type { ZeroShift } from "./wavelength_zero.ts";

function columnOf(table: CsvTable, names: readonly string[]): string | undefined {
  return table.names.find((name) => names.includes(name.toLowerCase()));
}

const TIME = ["bjd_tdb", "bjd", "time_bjd_tdb"];
const TARGET = ["target_flux", "flux"];
const TARGET_MAGNITUDE = ["target_magnitude", "magnitude", "mag"];
const COMPANION = ["companion_flux"];
const COMPANION_MAGNITUDE = ["companion_magnitude"];

/**
 * Reads photometry that scales exposures: a CSV file with times in BJD(TDB) and the brightness of the
 * target (`flux` or `magnitude`) or of a companion on the slit (`companion_flux` or
 * `companion_magnitude`).
 *
 * @param text The file's text.
 * @param options Its name, for messages.
 * @returns The photometry in order of time.
 * @throws {InputError} When a column is missing (the message lists those there are), a time is no
 * Julian date, a flux is not positive, or a time comes twice.
 *
 * @example
 * ```ts
 * import { parsePhotometry } from "@millrace/millrace/trail";
 * import { assertEquals } from "@std/assert";
 *
 * const { time, flux, of } = parsePhotometry("bjd_tdb,companion_flux\n2460311.5,2\n2460311.6,3\n");
 * assertEquals([time[1], flux[1], of], [[2460311, 0.6], 3, "companion"]);
 * ```
 */
export function parsePhotometry(
  text: string,
  options: { readonly file?: string } = {},
): Photometry {
  const { file } = options;
  const action = "read photometry";
  const table = parseCsv(text, { action, ...(file === undefined ? {} : { file }) });
  const time = columnOf(table, TIME);
  const target = columnOf(table, [...TARGET, ...TARGET_MAGNITUDE]);
  const companion = columnOf(table, [...COMPANION, ...COMPANION_MAGNITUDE]);
  const value = companion ?? target;
  if (time === undefined || value === undefined) {
    throw new InputError({
      action,
      rule:
        "it must have a column bjd_tdb and one of flux, magnitude, companion_flux, companion_magnitude",
      value: table.names.join(", "),
      file,
    });
  }
  const isMagnitude = [...TARGET_MAGNITUDE, ...COMPANION_MAGNITUDE].includes(value.toLowerCase());
  const numbers = csvNumbers(table, value);
  const rows = csvTexts(table, time).map((cell, i) => {
    const line = table.rows[i]!.line;
    const at = (): SplitDate => {
      try {
        return julianDate(cell);
      } catch (error) {
        throw error instanceof InputError ? error.at({ file, line, key: time }) : error;
      }
    };
    const flux = isMagnitude ? 10 ** (-0.4 * numbers[i]!) : numbers[i]!;
    if (!(flux > 0)) {
      throw new InputError({
        action,
        rule: "a flux must be positive",
        value: flux,
        file,
        line,
        key: value,
      });
    }
    return { time: at(), flux, line };
  }).sort((a, b) => a.time[0] - b.time[0] || a.time[1] - b.time[1]);
  const twice = rows.find((row, i) =>
    i > 0 && row.time[0] === rows[i - 1]!.time[0] && row.time[1] === rows[i - 1]!.time[1]
  );
  if (twice !== undefined) {
    throw new InputError({
      action,
      rule: "a time must come once",
      value: twice.time,
      file,
      line: twice.line,
      key: time,
    });
  }
  return {
    time: rows.map((row) => row.time),
    flux: Float64Array.from(rows, (row) => row.flux),
    of: companion === undefined ? "target" : "companion",
  };
}

const baseName = (path: string) => path.replace(/^.*[\\/]/, "");

/**
 * Reads a table of wavelength shifts: a CSV file with columns `file` and `shift_kms` (how far
 * wavelengths are too long).
 *
 * @param text The file's text.
 * @param options Its name, for messages; the sources of the exposures, in order.
 * @returns One shift for each source, NaN where the table has none. A source `name[3]` is also found
 * under its file's name.
 * @throws {InputError} When a column is missing or no file of the table is among the sources.
 *
 * @example
 * ```ts
 * import { parseShifts } from "@millrace/millrace/trail";
 * import { assertEquals } from "@std/assert";
 *
 * const shifts = parseShifts("file,shift_kms\na.fits,4.5\n", { sources: ["night/a.fits"] });
 * assertEquals(shifts[0]!.shift_kms, 4.5);
 * ```
 */
export function parseShifts(
  text: string,
  options: { readonly sources: readonly string[]; readonly file?: string },
): ZeroShift[] {
  const { sources, file } = options;
  const action = "read wavelength shifts";
  const table = parseCsv(text, { action, ...(file === undefined ? {} : { file }) });
  const files = csvTexts(table, "file").map(baseName);
  const values = csvNumbers(table, "shift_kms");
  const shifts = sources.map((source): ZeroShift => {
    const name = baseName(source);
    const whole = files.indexOf(name);
    const at = whole < 0 ? files.indexOf(name.replace(/\[\d+\]$/, "")) : whole;
    const shift_kms = at < 0 ? NaN : values[at]!;
    return { source, shift_kms, error_kms: NaN, features: at < 0 ? 0 : 1 };
  });
  if (shifts.every((shift) => Number.isNaN(shift.shift_kms))) {
    throw new InputError({
      action,
      rule: "at least one of its files must be among the exposures",
      value: files.slice(0, 3).join(", "),
      file,
      key: "file",
    });
  }
  return shifts;
}
