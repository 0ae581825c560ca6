import { InputError } from "../errors.ts";
import type { ColumnHead, FitsFile, Hdu } from "../fits/mod.ts";
import type { OneDecision } from "./decision.ts";
import { type Beside, besideOf, errorFrom, withMask } from "./error_kind.ts";
import { headerFacts, joinFacts } from "./facts.ts";
import type { RecordedAxis } from "./recorded_axis.ts";
import type { RecordedExposure } from "./recorded_exposure.ts";
import { unknownName } from "./require_keys.ts";
import { tableRowFacts } from "./table_facts.ts";
import { angstromIn, unitBySize } from "./wavelength_units.ts";

/** Options of {@linkcode readTable}. */
export interface TableOptions {
  /**
   * Names of columns by what they hold: `wavelength`, `flux`, `error`, `inverse_variance`, `mask`.
   * @default {}
   */
  readonly keys?: Readonly<Record<string, string>>;
}

interface Columns {
  readonly wavelength: ColumnHead;
  readonly isLog: boolean;
  readonly flux: ColumnHead;
  readonly error: {
    readonly head: ColumnHead;
    readonly kind: "error" | "variance" | "inverse-variance";
  } | null;
  readonly mask: ColumnHead | null;
}

const FLUX_NAMES =
  /^(FLUX(_?(REDUCED|CAL|DENSITY|LAMBDA|NU))?|SPEC|SPECTRUM|COUNTS|INTENSITY|FLAM|FNU|F_?LAMBDA|DATA|SCI)$/i;

/** What columns may be named for. */
export const COLUMN_ROLES: readonly string[] = [
  "wavelength",
  "flux",
  "error",
  "inverse_variance",
  "mask",
];

const bears = (name: string) => (head: ColumnHead) =>
  head.name.toUpperCase() === name.toUpperCase();

// Roles of columns whose names none of these columns bears.
function missing(heads: readonly ColumnHead[], keys: Readonly<Record<string, string>>) {
  return COLUMN_ROLES.filter((role) => keys[role] !== undefined && !heads.some(bears(keys[role])));
}

function columnsOf(hdu: Hdu, keys: Readonly<Record<string, string>>): Columns | null {
  const heads = hdu.columns;
  if (missing(heads, keys).length > 0) return null;
  const named = (role: string) =>
    keys[role] === undefined ? undefined : heads.find(bears(keys[role]));
  const kinds = heads.map((head) => besideOf(head.name));
  const first = (kind: Beside) => heads[kinds.indexOf(kind)];
  const linear = named("wavelength") ?? first("wavelength");
  const wavelength = linear ?? first("log-wavelength");
  const flux = named("flux") ?? heads.find((h) => FLUX_NAMES.test(h.name.trim()));
  if (wavelength === undefined || flux === undefined) return null;
  const inverse = named("inverse_variance");
  const stated = named("error");
  const errors = inverse !== undefined
    ? { head: inverse, kind: "inverse-variance" as const }
    : stated !== undefined
    ? { head: stated, kind: "error" as const }
    : (["error", "inverse-variance", "variance"] as const)
      .filter((kind) => first(kind) !== undefined)
      .map((kind) => ({ head: first(kind)!, kind }))[0] ?? null;
  return {
    wavelength,
    isLog: besideOf(wavelength.name) === "log-wavelength",
    flux,
    error: errors,
    mask: named("mask") ?? first("mask") ?? null,
  };
}

/**
 * The table of a file that holds a spectrum: one with a column of wavelengths and one of fluxes.
 *
 * @param fits The file.
 * @param options Names of columns.
 * @returns The HDU; undefined when there is none.
 */
export function spectrumTable(fits: FitsFile, options: TableOptions = {}): Hdu | undefined {
  return fits.hdus.find((hdu) =>
    hdu.kind === "table" && columnsOf(hdu, options.keys ?? {}) !== null
  );
}

function axisOf(values: Float64Array, columns: Columns, file: string): RecordedAxis {
  const { wavelength: head, isLog } = columns;
  // Some files call a column of logarithms plain wavelength: an optical log10 is 3.3 to 4.5.
  const log = isLog || values.every((v) => v > 3 && v < 4.7) && (head.unit ?? "") === "" ||
    /log/i.test(head.unit ?? "");
  const linear = log ? values.map((v) => 10 ** v) : values.slice();
  const unit = head.unit?.replace(/^.*log.*$/i, "").trim() ?? "";
  const byName = /_?(nm)$/i.test(head.name)
    ? "nm"
    : /(angstrom|_A)$/i.test(head.name)
    ? "angstrom"
    : "";
  const name = angstromIn(unit) !== null ? unit : byName;
  const size = unitBySize(linear.find((v) => Number.isFinite(v)) ?? NaN);
  const used = name || size;
  if (used === null || used === "" || (unit !== "" && angstromIn(unit) === null)) {
    throw new InputError({
      action: "read wavelength column",
      rule: "the unit of the wavelengths must be known",
      value: unit,
      file,
      key: head.name,
      remedy: "write a TUNIT such as Angstrom or nm",
    });
  }
  const factor = angstromIn(used)!;
  const words = `${head.name} ${head.description}`;
  const decisions: OneDecision[] = [{
    what: "wavelength axis",
    value: `${log ? "log10 " : ""}column of ${values.length}`,
    from: `column ${head.name}`,
    assumed: log && !isLog,
  }, {
    what: "wavelength unit",
    value: used,
    from: unit !== ""
      ? `unit of ${head.name}`
      : name !== ""
      ? `name ${head.name}`
      : "size of the values",
    assumed: name === "",
  }];
  return {
    wavelength_angstrom: linear.map((v) => v * factor),
    medium: /vac/i.test(words) ? "vacuum" : /air|AWAV/i.test(words) ? "air" : null,
    decisions,
  };
}

/**
 * Reads a binary table of one exposure: wavelengths (linear or log10), fluxes, and errors, variances
 * or inverse variances (0 masks a sample), a row for each pixel, or one row of arrays. Several rows
 * of arrays are several exposures, with times among their columns.
 *
 * @param fits The file.
 * @param options Names of columns by what they hold.
 * @returns One recorded exposure, or one a row.
 * @throws {InputError} When no table has both wavelengths and fluxes (it lists the columns).
 *
 * @example
 * ```ts
 * import { readTable } from "@millrace/millrace/spectra";
 * import { encodeFits, parseFits } from "@millrace/millrace/fits";
 * import { assertEquals } from "@std/assert";
 *
 * const bytes = encodeFits([{
 *   kind: "table",
 *   columns: [
 *     { name: "WAVE", unit: "nm", data: Float64Array.of(486, 486.1) },
 *     { name: "FLUX", data: Float64Array.of(1, 2) },
 *     { name: "IVAR", data: Float64Array.of(4, 0) },
 *   ],
 * }]);
 * const [spectrum] = readTable(parseFits(bytes, { file: "a.fits" }));
 * assertEquals(spectrum!.axis.wavelength_angstrom, Float64Array.of(4860, 4861));
 * assertEquals(spectrum!.error, Float64Array.of(0.5, Infinity));
 * ```
 */
export function readTable(fits: FitsFile, options: TableOptions = {}): RecordedExposure[] {
  const { keys = {} } = options;
  const file = fits.file ?? "table";
  const hdu = spectrumTable(fits, options);
  if (hdu === undefined) {
    const seen = fits.hdus.flatMap((h) => h.columns.map((c) => c.name));
    const [role] = missing(fits.hdus.flatMap((h) => h.columns), keys);
    if (role !== undefined) {
      const where = "the table of every file";
      throw unknownName(role, { name: keys[role]!, known: seen, where, file });
    }
    throw new InputError({
      action: "read spectrum",
      rule:
        "a table must have a column of wavelengths and one of fluxes; names such as WAVE, LAMBDA, LOGLAM and FLUX, SPEC were tried",
      value: seen.length === 0 ? "no table" : seen.join(", "),
      file,
      remedy: "name them by keys.wavelength and keys.flux",
    });
  }
  const columns = columnsOf(hdu, keys)!;
  const arrays = columns.flux.width !== 1;
  const count = arrays ? hdu.rows : 1;
  const facts = joinFacts([headerFacts(hdu.header), headerFacts(fits.hdus[0]!.header)]);
  const values = (head: ColumnHead, row: number) =>
    arrays ? hdu.numbers(head.number, { row }) : hdu.numbers(head.number);
  return Array.from({ length: count }, (_, row) => {
    const flux = values(columns.flux, row).slice();
    const { error: errors, mask } = columns;
    const beside = errors === null ? null : errorFrom(values(errors.head, row), errors.kind);
    const bad = mask === null ? null : values(mask, row);
    const decisions: OneDecision[] = [
      {
        what: "flux",
        value: columns.flux.unit ?? "no unit",
        from: `column ${columns.flux.name}`,
        assumed: false,
      },
    ];
    if (errors !== null) {
      decisions.push({
        what: "errors",
        value: errors.kind,
        from: `column ${errors.head.name}`,
        assumed: false,
      });
    }
    if (mask !== null) {
      decisions.push({
        what: "mask",
        value: "samples not 0 are masked",
        from: `column ${mask.name}`,
        assumed: false,
      });
    }
    const own = tableRowFacts(hdu, row);
    const all = arrays ? joinFacts([own, facts]) : facts;
    return {
      source: count === 1 ? file : `${file}[${row + 1}]`,
      file,
      axis: axisOf(values(columns.wavelength, row), columns, file),
      flux: bad === null ? flux : flux.map((f, i) => bad[i] === 0 ? f : NaN),
      error: beside === null || bad === null ? beside : withMask(beside, bad),
      unit: columns.flux.unit ?? "",
      times: count > 1 ? own : all,
      facts: all,
      decisions,
    };
  });
}
