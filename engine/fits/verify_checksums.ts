import { onesComplementSum } from "./checksum.ts";
import type { FitsChecksums } from "./checksum.ts";
import type { FitsHeader } from "./header.ts";
import { BLOCK } from "./parse_header.ts";

/** Where an HDU stands in its file. */
export interface Span {
  /** Its header. */
  readonly header: FitsHeader;
  /** Byte at which the header begins. */
  readonly offset: number;
  /** Byte at which the data begin. */
  readonly data_offset: number;
  /** Bytes of data, without the filling of the last block. */
  readonly data_bytes: number;
}

const isGiven = (value: unknown) => value !== undefined && value !== null && value !== "";

/**
 * Compares an HDU with its DATASUM and CHECKSUM.
 *
 * @param file The whole file.
 * @param span Where the HDU stands in it.
 * @returns Whether each agrees; null where the header has none.
 */
export function verifyChecksums(file: Uint8Array, span: Span): FitsChecksums {
  const { header, offset, data_offset, data_bytes } = span;
  const wanted = header.card("DATASUM")?.value;
  const hasHdu = isGiven(header.card("CHECKSUM")?.value);
  if (!isGiven(wanted) && !hasHdu) return { data: null, hdu: null };
  const end = data_offset + Math.ceil(data_bytes / BLOCK) * BLOCK;
  const sum = onesComplementSum(file.subarray(data_offset, end));
  const whole = hasHdu ? onesComplementSum(file.subarray(offset, data_offset), sum) : 0;
  return {
    data: isGiven(wanted) ? Number(wanted) === sum : null,
    hdu: hasHdu ? whole === 0xffffffff : null,
  };
}
