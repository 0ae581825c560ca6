import { fitsError } from "./fits_error.ts";
import type { Place } from "./fits_error.ts";
import type { FitsHeader } from "./header.ts";

/** What an HDU holds. */
export type HduKind =
  | "empty"
  | "image"
  | "table"
  | "compressed-image"
  | "compressed-table"
  | "random-groups"
  | "other";

/** What the mandatory keywords say of an HDU. */
export interface Structure {
  /** What it holds. */
  readonly kind: HduKind;
  /** Value of XTENSION; empty in the primary HDU. */
  readonly extension: string;
  /** BITPIX. */
  readonly bitpix: number;
  /** NAXISn, first axis (fastest) first. */
  readonly shape: readonly number[];
  /** Bytes of data, without the filling of the last block. */
  readonly data_bytes: number;
}

const BITPIX = [8, 16, 32, 64, -32, -64];

/**
 * Reads a keyword that must be a whole number, 0 or more.
 *
 * @param header The header.
 * @param key The keyword.
 * @param options Place for messages; the value when the keyword is missing.
 * @returns The value.
 * @throws {InputError} If it is missing without a default, or anything else.
 */
export function readCount(
  header: FitsHeader,
  key: string,
  options: { readonly place: Place; readonly missing?: number },
): number {
  const { place, missing } = options;
  const card = header.card(key);
  if (card === undefined && missing !== undefined) return missing;
  const value = card?.value;
  if (typeof value !== "number" || !Number.isInteger(value) || value < 0) {
    throw fitsError(place, "this keyword must be there and be a whole number, 0 or more", {
      key,
      value: card === undefined ? null : card.text,
      ...(card === undefined ? {} : { offset: card.offset }),
    });
  }
  return value;
}

function kindOf(header: FitsHeader, extension: string, shape: readonly number[]): HduKind {
  const isTrue = (key: string) => header.card(key)?.value === true;
  if (extension === "" && shape[0] === 0 && isTrue("GROUPS")) return "random-groups";
  if (extension === "BINTABLE" && isTrue("ZIMAGE")) return "compressed-image";
  if (extension === "BINTABLE" && isTrue("ZTABLE")) return "compressed-table";
  if (extension === "BINTABLE" || extension === "TABLE") return "table";
  if (extension !== "" && extension !== "IMAGE") return "other";
  return shape.length === 0 ? "empty" : "image";
}

// Values that the standard fixes for the extensions that are decoded here (FITS 4.0, 7.1 to 7.3).
function checkFixed(
  found:
    & { kind: HduKind; extension: string }
    & Record<"bitpix" | "axes" | "pcount" | "gcount", number>,
  place: Place,
): void {
  const { kind, extension, bitpix, axes, pcount, gcount } = found;
  const require = (key: string, value: number, wanted: number) => {
    if (value === wanted) return;
    throw fitsError(place, `${key} must be ${wanted} in an extension ${extension}`, { key, value });
  };
  if (extension === "IMAGE") require("PCOUNT", pcount, 0);
  if (kind === "other" || extension === "") return;
  require("GCOUNT", gcount, 1);
  if (extension === "IMAGE") return;
  require("BITPIX", bitpix, 8);
  require("NAXIS", axes, 2);
}

/**
 * Reads the mandatory keywords of an HDU (FITS 4.0, 4.4.1): what it holds and how many bytes.
 *
 * @param header The header.
 * @param place File and HDU, for messages.
 * @returns Kind, shape and size.
 * @throws {InputError} If a keyword is missing or impossible.
 */
export function readStructure(header: FitsHeader, place: Place): Structure {
  const bitpix = header.card("BITPIX")?.value;
  if (typeof bitpix !== "number" || !BITPIX.includes(bitpix)) {
    const card = header.card("BITPIX");
    throw fitsError(place, `BITPIX must be one of ${BITPIX.join(", ")}`, {
      key: "BITPIX",
      value: card === undefined ? null : card.text,
      ...(card === undefined ? {} : { offset: card.offset }),
    });
  }
  const axes = readCount(header, "NAXIS", { place });
  if (axes > 999) {
    throw fitsError(place, "there must be at most 999 axes", { key: "NAXIS", value: axes });
  }
  const shape = Array.from(
    { length: axes },
    (_, k) => readCount(header, `NAXIS${k + 1}`, { place }),
  );
  const first = header.cards[0]?.keyword === "XTENSION" ? header.string("XTENSION") : undefined;
  const extension = (first ?? "").trim().toUpperCase();
  const kind = kindOf(header, extension, shape);
  const pcount = readCount(header, "PCOUNT", { place, missing: 0 });
  const gcount = readCount(header, "GCOUNT", { place, missing: 1 });
  checkFixed({ kind, extension, bitpix, axes, pcount, gcount }, place);
  const lengths = kind === "random-groups" ? shape.slice(1) : shape;
  const elements = axes === 0 ? 0 : lengths.reduce((product, length) => product * length, 1);
  const grouped = kind === "random-groups" || extension !== "";
  const count = grouped ? gcount * (pcount + elements) : elements;
  return { kind, extension, bitpix, shape, data_bytes: Math.abs(bitpix) / 8 * count };
}
