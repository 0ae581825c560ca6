/**
 * A value of an ECSV cell: null where missing. Integers of 64 bits are numbers while these hold
 * them exactly, and bigint beyond; cells of array columns are nested arrays.
 */
export type EcsvValue = number | bigint | string | boolean | null | readonly EcsvValue[];

/** Datatypes of ECSV 1.0, but for complex numbers. */
export const ecsvDatatypes = [
  "bool",
  "int8",
  "int16",
  "int32",
  "int64",
  "uint8",
  "uint16",
  "uint32",
  "uint64",
  "float16",
  "float32",
  "float64",
  "float128",
  "string",
] as const;

/** One of the {@linkcode ecsvDatatypes}. */
export type EcsvDatatype = typeof ecsvDatatypes[number];

/** One column of an {@linkcode EcsvTable}. */
export interface EcsvColumn {
  /** Name. */
  readonly name: string;
  /** Type of the values. */
  readonly datatype: EcsvDatatype;
  /** What the cells of an array column hold, such as `float64[3]`; these have datatype `string`. */
  readonly subtype?: string;
  /** Unit, such as `km / s`. */
  readonly unit?: string;
  /** What the column holds. */
  readonly description?: string;
  /** Printing format hint, such as `.3f`. */
  readonly format?: string;
  /** Values, one per row. */
  readonly values: ArrayLike<EcsvValue>;
}

/** A table as written in astropy's enhanced CSV (ECSV 1.0). */
export interface EcsvTable {
  /** Columns, all of one length. */
  readonly columns: readonly EcsvColumn[];
  /** What is said of the whole table. */
  readonly meta: Readonly<Record<string, unknown>>;
}
