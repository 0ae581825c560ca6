/**
 * Files: reading with a size limit, atomic writing, locks, digests, gzip, glob patterns, CSV and
 * ECSV. Knows nothing about stars.
 *
 * @module
 */
export * from "./check_replaceable.ts";
export * from "./csv.ts";
export * from "./csv_columns.ts";
export * from "./ecsv_table.ts";
export * from "./expand_glob.ts";
export * from "./format_ecsv.ts";
export * from "./gunzip.ts";
export * from "./make_folder.ts";
export * from "./parse_ecsv.ts";
export * from "./read_bytes.ts";
export * from "./sha256.ts";
export * from "./with_lock.ts";
export * from "./write_file_atomically.ts";
export * from "./written_by_millrace.ts";
