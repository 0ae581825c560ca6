import type { Warning } from "../errors.ts";
import type { Target } from "./target.ts";
import { VERSION } from "./version.ts";

/** A file that a result was made from. */
export interface InputDigest {
  /** Path relative to the target file. */
  readonly file: string;
  /** SHA-256 of its bytes, hexadecimal. */
  readonly sha256: string;
}

/** What every JSON output begins with. */
export interface OutputHead {
  /** Name and version of the document's keys, as in "map/1". */
  readonly schema: string;
  /** Version of Millrace. */
  readonly version: string;
  /** Title of the target. */
  readonly target: string;
  /** Digest of the settings. */
  readonly settings_digest: string;
  /** Files that the result was made from. */
  readonly inputs: readonly InputDigest[];
  /** Seed. */
  readonly seed: number;
  /** What a user should know. */
  readonly warnings: readonly Warning[];
}

/**
 * The head of a JSON output.
 *
 * @param target The target.
 * @param options What differs from output to output.
 * @param options.schema Name and version of the document's keys.
 * @param options.inputs Files that the result was made from.
 * @param options.warnings What a user should know.
 * @returns The head.
 */
export function outputHead(
  target: Target,
  options: {
    schema: string;
    inputs: readonly InputDigest[];
    warnings: readonly Warning[];
  },
): OutputHead {
  return {
    schema: options.schema,
    version: VERSION,
    target: target.title,
    settings_digest: target.settings_digest,
    inputs: options.inputs,
    seed: target.settings.seed,
    warnings: uniqueWarnings(options.warnings),
  };
}

/** Warnings without repetition, in order of first appearance. */
export function uniqueWarnings(warnings: readonly Warning[]): Warning[] {
  const seen = new Map<string, Warning>();
  for (const warning of warnings) {
    const key = JSON.stringify([warning.code, warning.line, warning.text]);
    if (!seen.has(key)) seen.set(key, warning);
  }
  return [...seen.values()];
}

/**
 * A document as the JSON text of an output file: two spaces, one number a line only where it helps,
 * a final line break. Numbers that are not finite become null, never NaN.
 *
 * @param document The document.
 * @returns The text.
 *
 * @example
 * ```ts
 * import { jsonText } from "@millrace/millrace/campaign";
 * import { assertEquals } from "@std/assert";
 *
 * assertEquals(jsonText({ a: [1, 2.5], b: NaN }), '{\n  "a": [1, 2.5],\n  "b": null\n}\n');
 * ```
 */
export function jsonText(document: unknown): string {
  return `${set(document, "")}\n`;
}

function set(value: unknown, indent: string): string {
  if (typeof value === "number") return Number.isFinite(value) ? JSON.stringify(value) : "null";
  if (value === null || typeof value !== "object") return JSON.stringify(value) ?? "null";
  const inner = `${indent}  `;
  if (Array.isArray(value) || ArrayBuffer.isView(value)) {
    const items = Array.from(value as ArrayLike<unknown>);
    if (items.every((item) => item === null || typeof item !== "object")) {
      return `[${items.map((item) => set(item, inner)).join(", ")}]`;
    }
    return `[\n${items.map((item) => inner + set(item, inner)).join(",\n")}\n${indent}]`;
  }
  const entries = Object.entries(value).filter(([, entry]) => entry !== undefined);
  if (entries.length === 0) return "{}";
  return `{\n${
    entries.map(([key, entry]) => `${inner}${JSON.stringify(key)}: ${set(entry, inner)}`).join(
      ",\n",
    )
  }\n${indent}}`;
}
