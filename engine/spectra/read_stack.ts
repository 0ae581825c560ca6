import { InputError } from "../errors.ts";
import type { FitsFile, Hdu } from "../fits/mod.ts";
import { type Fact, type Facts, headerFacts, joinFacts } from "./facts.ts";
import { EXPOSURE_KEYS } from "./find_duration.ts";
import { findTime, TIME_KEYS } from "./find_time.ts";
import { type FluxImage, openFluxImage } from "./flux_image.ts";
import type { RecordedExposure } from "./recorded_exposure.ts";
import { tableRowFacts } from "./table_facts.ts";

/** Options of {@linkcode readStack}. */
export interface StackOptions {
  /**
   * Names of keys or columns by what they hold.
   * @default {}
   */
  readonly keys?: Readonly<Record<string, string>>;
}

/**
 * Facts of one row of a stack whose header numbers its keys: `MJD3` or `DATE-003` for the third.
 *
 * @param facts Facts of the header.
 * @param row Number of the row, from 1.
 * @returns Facts that look up numbered keys only.
 *
 * @example
 * ```ts
 * import { namedFacts, numberedFacts } from "@millrace/millrace/spectra";
 * import { assertEquals } from "@std/assert";
 *
 * const facts = numberedFacts(namedFacts([["MJD1", "60311.1"], ["MJD2", "60311.2"]]), 2);
 * assertEquals(facts.find("MJD")?.text, "60311.2");
 * ```
 */
export function numberedFacts(facts: Facts, row: number): Facts {
  const numbers = [1, 2, 3, 4].map((width) => String(row).padStart(width, "0"));
  return {
    find(key): Fact | undefined {
      const stem = key.slice(0, 7);
      for (const number of numbers) {
        for (
          const name of [
            `${key}${number}`,
            `${key}_${number}`,
            `${key}-${number}`,
            `${stem}${number}`,
          ]
        ) {
          const fact = facts.find(name.slice(0, 8)) ?? facts.find(name);
          // A key cut to eight letters may lose its number: then it is not of this row.
          if (fact !== undefined && fact.key.endsWith(number)) return { ...fact, key: fact.key };
        }
      }
      return undefined;
    },
    names: () => facts.names(),
  };
}

function timesTable(fits: FitsFile, rows: number, options: StackOptions): Hdu | undefined {
  return fits.hdus.find((hdu) =>
    hdu.kind === "table" && hdu.rows === rows &&
    findTime(tableRowFacts(hdu, 0), options) !== null
  );
}

/**
 * Whether an image of several rows says when each was taken: by a table of as many rows, or by
 * numbered keys.
 *
 * @param fits The file.
 * @param options Names of keys.
 * @returns True when it is a stack.
 */
export function isStack(fits: FitsFile, options: StackOptions = {}): boolean {
  const image = openFluxImage(fits);
  if (image.rows < 2) return false;
  return timesTable(fits, image.rows, options) !== undefined ||
    findTime(numberedFacts(image.facts, 1), numberedKeys(options)) !== null;
}

// A reference such as keys.mid = "MJD" names the stem; the row's number is put behind it.
function numberedKeys(options: StackOptions): StackOptions {
  return options;
}

function rowTimes(fits: FitsFile, image: FluxImage, options: StackOptions): (row: number) => Facts {
  const table = timesTable(fits, image.rows, options);
  if (table !== undefined) {
    const header = headerFacts(table.header);
    // TIMESYS and TREFPOS of the table or the file hold for its columns.
    const shared: Facts = {
      find: (key) =>
        /^(TIMESYS|TREFPOS)$/i.test(key) ? joinFacts([header, image.facts]).find(key) : undefined,
      names: () => [],
    };
    return (row) => joinFacts([tableRowFacts(table, row), shared]);
  }
  const first = numberedFacts(image.facts, 1);
  if (findTime(first, options) === null) {
    throw new InputError({
      action: "read stack",
      rule:
        `each of the ${image.rows} rows must have a time; tables of as many rows and numbered keys were tried`,
      value: `columns or keys ${TIME_KEYS.slice(0, 8).join(", ")}, ...`,
      ...(fits.file === undefined ? {} : { file: fits.file }),
      remedy: "add a table with a column such as MJD or BJD_TDB, or name it by keys.mid",
    });
  }
  const shared: Facts = {
    find: (key) => /^(TIMESYS|TREFPOS)$/i.test(key) ? image.facts.find(key) : undefined,
    names: () => [],
  };
  return (row) => joinFacts([numberedFacts(image.facts, row + 1), shared]);
}

/**
 * Reads a stack: an image with one exposure a row, their times in a table HDU or in numbered keys.
 *
 * @param fits The file.
 * @param options Names of keys or columns by what they hold.
 * @returns One recorded exposure a row.
 * @throws {InputError} When the rows have no times, listing what was tried.
 *
 * @example
 * ```ts
 * import { readStack } from "@millrace/millrace/spectra";
 * import { encodeFits, parseFits } from "@millrace/millrace/fits";
 * import { assertEquals } from "@std/assert";
 *
 * const bytes = encodeFits([{
 *   kind: "image",
 *   shape: [2, 2],
 *   data: Float32Array.of(1, 2, 3, 4),
 *   cards: [{ keyword: "CRVAL1", value: 5000 }, { keyword: "CDELT1", value: 2 }],
 * }, {
 *   kind: "table",
 *   name: "TIMES",
 *   columns: [{ name: "MJD", data: Float64Array.of(60311.1, 60311.2) }],
 * }]);
 * const rows = readStack(parseFits(bytes, { file: "all.fits" }));
 * assertEquals(rows.map((row) => row.times.find("MJD")?.text), ["60311.1", "60311.2"]);
 * ```
 */
export function readStack(fits: FitsFile, options: StackOptions = {}): RecordedExposure[] {
  const image = openFluxImage(fits);
  const times = rowTimes(fits, image, options);
  const file = fits.file ?? "stack";
  return Array.from({ length: image.rows }, (_, row) => {
    const own = times(row);
    // An exposure time of the row goes before the one of the file.
    const exposures: Facts = {
      find: (key) =>
        EXPOSURE_KEYS.some((k) => k.toUpperCase() === key.toUpperCase()) ||
          Object.values(options.keys ?? {}).includes(key)
          ? own.find(key) ?? image.facts.find(key)
          : image.facts.find(key),
      names: () => own.names(),
    };
    return {
      source: `${file}[${row + 1}]`,
      file,
      axis: image.axis(row),
      flux: image.flux(row),
      error: image.error(row),
      unit: image.unit,
      times: own,
      facts: joinFacts([exposures, image.facts]),
      decisions: image.decisions,
    };
  });
}
