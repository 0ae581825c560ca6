// Named latin1, decodes as windows-1252: enough for marks, which are ASCII.
const latin1 = new TextDecoder("latin1");

const startsWith = (bytes: Uint8Array, text: string) =>
  Array.from(text).every((letter, index) => bytes[index] === letter.charCodeAt(0));

function fitsIsOurs(bytes: Uint8Array): boolean {
  for (let at = 0; at + 80 <= bytes.length; at += 80) {
    const card = latin1.decode(bytes.subarray(at, at + 80));
    if (/^END\s*$/.test(card)) return false;
    if (card.startsWith("CREATOR =")) return /^CREATOR = +'Millrace\b/.test(card);
  }
  return false;
}

function jsonIsOurs(bytes: Uint8Array): boolean {
  try {
    const document: unknown = JSON.parse(new TextDecoder("utf-8", { fatal: true }).decode(bytes));
    if (typeof document !== "object" || document === null) return false;
    const { schema, version } = document as { schema?: unknown; version?: unknown };
    return typeof schema === "string" && /^[a-z][a-z-]*\/\d+$/.test(schema) &&
      typeof version === "string";
  } catch {
    return false;
  }
}

function pngIsOurs(bytes: Uint8Array): boolean {
  const view = new DataView(bytes.buffer, bytes.byteOffset, bytes.byteLength);
  for (let at = 8; at + 12 <= bytes.length;) {
    const length = view.getUint32(at);
    if (latin1.decode(bytes.subarray(at + 4, at + 8)) === "tEXt") {
      const text = latin1.decode(bytes.subarray(at + 8, Math.min(at + 8 + length, at + 108)));
      if (text.startsWith("Software\0Millrace")) return true;
    }
    at += 12 + length;
  }
  return false;
}

function ecsvIsOurs(bytes: Uint8Array): boolean {
  const header = new TextDecoder().decode(bytes.subarray(0, 2 ** 18));
  return /^# *(?:- *\{ *|- +)? *creator: *['"]?Millrace\b/m.test(header);
}

function textIsOurs(bytes: Uint8Array): boolean {
  const head = bytes.subarray(0, 2048);
  if (head.includes(0)) return false;
  const text = new TextDecoder().decode(head);
  return /^\s*</.test(text) ? text.includes("Millrace") : /written by Millrace\b/i.test(text);
}

/**
 * Tells whether the content of a file says that Millrace wrote it. Only such a file may be replaced
 * without being asked. Each format carries its own mark:
 *
 * | format | mark |
 * | --- | --- |
 * | FITS | card `CREATOR = 'Millrace…'` in the primary header |
 * | JSON | top-level keys `schema` (such as `"map/1"`) and `version`, both strings |
 * | ECSV | `creator: Millrace…` in the header's `meta` |
 * | PNG | `tEXt` chunk with keyword `Software` and a text that begins with `Millrace` |
 * | PDF | `/Creator (Millrace…)`, `/Producer (Millrace…)`, or in XMP `<xmp:CreatorTool>Millrace…` |
 * | SVG, HTML and other mark-up | the word `Millrace` in the first 2048 bytes |
 * | other text (TOML, CSV, plain) | the words `written by Millrace` (any case) in the first 2048 bytes |
 *
 * @param bytes The file's bytes (not gzipped); of FITS, ECSV and text the beginning is enough.
 * @returns True when the mark is there.
 *
 * @example
 * ```ts
 * import { writtenByMillrace } from "@millrace/millrace/files";
 * import { assert } from "@std/assert";
 *
 * const bytes = (text: string) => new TextEncoder().encode(text);
 * assert(writtenByMillrace(bytes('{"schema": "map/1", "version": "0.1.0"}')));
 * assert(writtenByMillrace(bytes("# Written by Millrace 0.1.0\nformat = 1\n")));
 * assert(!writtenByMillrace(bytes("Notes on the Millrace run")));
 * ```
 */
export function writtenByMillrace(bytes: Uint8Array): boolean {
  if (startsWith(bytes, "SIMPLE  =")) return fitsIsOurs(bytes);
  if (startsWith(bytes, "\x89PNG\r\n\x1a\n")) return pngIsOurs(bytes);
  if (startsWith(bytes, "%PDF-")) {
    const mark = /\/(?:Creator|Producer)\s*\(Millrace\b|<xmp:CreatorTool>Millrace\b/;
    return mark.test(latin1.decode(bytes));
  }
  if (startsWith(bytes, "# %ECSV")) return ecsvIsOurs(bytes);
  if (/^\s*\{/.test(latin1.decode(bytes.subarray(0, 64)))) return jsonIsOurs(bytes);
  return textIsOurs(bytes);
}
