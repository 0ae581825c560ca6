import type { Warning } from "../errors.ts";
import { gunzip, isGzip } from "../files/mod.ts";
import { fitsError } from "./fits_error.ts";
import { Hdu } from "./hdu.ts";
import { BLOCK, parseHeader } from "./parse_header.ts";
import { readStructure } from "./structure.ts";

/** A FITS file, its headers read and its data still to be decoded. */
export interface FitsFile {
  /** File it came from, for messages. */
  readonly file: string | undefined;
  /** Header and data units, the primary one first. */
  readonly hdus: readonly Hdu[];
  /** What a user should know. */
  readonly warnings: readonly Warning[];
}

/** Options of {@linkcode parseFits}. */
export interface ParseFitsOptions {
  /** File that the bytes came from, for messages. */
  readonly file?: string;
  /**
   * Most bytes that may come out of a gzipped file, and that one image or column may take once
   * decoded. What a header promises is checked against the bytes that are there before anything is
   * allocated.
   * @default {2 ** 30}
   */
  readonly max_bytes?: number;
  /**
   * What happens when CHECKSUM or DATASUM does not agree: a warning, an error, or nothing (then
   * the sums are not made).
   * @default {"warn"}
   */
  readonly checksum?: "warn" | "fail" | "ignore";
}

const latin1 = new TextDecoder("latin1");

function checkBeginning(bytes: Uint8Array, file: string | undefined): void {
  const head = latin1.decode(bytes.subarray(0, 30));
  if (head.startsWith("SIMPLE  =") && head.slice(9).trim().startsWith("T")) return;
  const rule = bytes.length === 0
    ? "a FITS file must not be empty"
    : head.startsWith("SIMPLE  =")
    ? "SIMPLE must be T: the file says itself that it does not follow the standard"
    : "a FITS file must begin with SIMPLE = T";
  throw fitsError({ file, hdu: 0 }, rule, {
    value: head.replaceAll(/[^ -~]/g, "?").trimEnd(),
    offset: 0,
    remedy: "give a FITS file, or say the right layout for another kind of file",
  });
}

function checksumWarnings(hdu: Hdu): Warning[] {
  const { data, hdu: whole } = hdu.checksums();
  const where = `HDU ${hdu.index}`;
  if (data === false) {
    return [{ code: "fits-datasum-wrong", text: `${where}: DATASUM does not agree with the data` }];
  }
  if (whole === false) {
    const text = `${where}: CHECKSUM does not agree with header and data`;
    return [{ code: "fits-checksum-wrong", text }];
  }
  return [];
}

// What follows the last HDU may be anything (FITS 4.0, 3.5), but filling alone is not worth a word.
function trailingWarnings(bytes: Uint8Array, offset: number): Warning[] {
  const isFilling = bytes.subarray(offset).every((byte) => byte === 0 || byte === 0x20);
  if (isFilling) return [];
  const text = `${
    bytes.length - offset
  } bytes from byte ${offset} on belong to no HDU and are not read`;
  return [{ code: "fits-bytes-left", text }];
}

/**
 * Reads a FITS file (FITS Standard 4.0, 2018): the headers at once, the data when they are asked
 * for. Gzipped bytes are decompressed first. Accepted beyond the standard, as the meaning is plain:
 * a last block that is not filled up, an equals sign without the blank after it, cards that cannot
 * be read as long as nobody asks for them (each with a warning), HIERARCH keywords. Not read, each
 * with a clear error when asked for: random groups and images or tables compressed within a table.
 *
 * @param bytes The whole file.
 * @param options File name, size limit, what happens when checksums do not agree.
 * @returns HDUs and warnings.
 * @throws {InputError} If the bytes are not FITS, are cut off, or a header is impossible; with HDU,
 * byte and what was expected.
 *
 * @example
 * ```ts
 * import { encodeFits, parseFits } from "@millrace/millrace/fits";
 * import { assertEquals } from "@std/assert";
 *
 * const bytes = encodeFits([{ kind: "image", shape: [2], data: new Float32Array([1, 2.5]) }]);
 * const { hdus, warnings } = parseFits(bytes, { file: "a.fits" });
 * assertEquals(hdus[0]!.image(), { shape: [2], unit: null, data: new Float64Array([1, 2.5]) });
 * assertEquals(warnings, []);
 * ```
 */
export function parseFits(bytes: Uint8Array, options: ParseFitsOptions = {}): FitsFile {
  const { file, max_bytes = 2 ** 30, checksum = "warn" } = options;
  const all = isGzip(bytes)
    ? gunzip(bytes, { max_bytes, ...(file === undefined ? {} : { file }) })
    : bytes;
  checkBeginning(all, file);
  const hdus: Hdu[] = [];
  const warnings: Warning[] = [];
  let offset = 0;
  while (offset < all.length) {
    const place = { file, hdu: hdus.length };
    if (offset > 0 && latin1.decode(all.subarray(offset, offset + 8)) !== "XTENSION") {
      warnings.push(...trailingWarnings(all, offset));
      break;
    }
    const { header, end, warnings: found } = parseHeader(all, offset, place);
    const structure = readStructure(header, place);
    const { data_bytes } = structure;
    // Also catches sizes that are no longer whole numbers.
    if (!(end + data_bytes <= all.length) && data_bytes !== 0) {
      throw fitsError(place, "the data must end within the file", {
        value: `${data_bytes} bytes of data from byte ${end} in a file of ${all.length} bytes`,
        offset: all.length,
        remedy: "copy the file again from where it came from",
      });
    }
    const data = all.subarray(end, end + data_bytes);
    const source = { ...place, bytes: data, offset: end, max_bytes };
    const hdu = new Hdu(all, { header, structure, offset, source });
    hdus.push(hdu);
    warnings.push(...found);
    offset = end + Math.ceil(data_bytes / BLOCK) * BLOCK;
    if (offset > all.length) {
      const text = `HDU ${hdu.index}: the last block is not filled up to ${BLOCK} bytes`;
      warnings.push({ code: "fits-block-short", text });
    }
    const wrong = checksum === "ignore" ? [] : checksumWarnings(hdu);
    if (checksum === "fail" && wrong[0] !== undefined) {
      throw fitsError(place, wrong[0].text.replace(/^HDU \d+: /, ""), { offset: hdu.offset });
    }
    warnings.push(...wrong);
  }
  return { file, hdus, warnings };
}
