import { type AST, getStaticTOMLValue, parseTOML } from "toml-eslint-parser";
import { InputError } from "../errors.ts";

/** Where a value stands in its file, both from 1. */
export interface TomlPlace {
  /** Line, from 1. */
  readonly line: number;
  /** Column, from 1. */
  readonly column: number;
}

/** A parsed TOML file: its values as plain data and the place of every one. */
export interface TomlDocument {
  /** Tables as objects, arrays as arrays. */
  readonly value: Record<string, unknown>;
  /** Places by path, as made by {@linkcode pathKey}. */
  readonly places: ReadonlyMap<string, TomlPlace>;
}

/**
 * A path into a TOML document as text: `orbit.period_d`, `exposures[0].files[1]`.
 *
 * @param path Keys and array indices from the root.
 * @returns The text.
 *
 * @example
 * ```ts
 * import { pathKey } from "@millrace/millrace/campaign";
 * import { assertEquals } from "@std/assert";
 *
 * assertEquals(pathKey(["exposures", 0, "files"]), "exposures[0].files");
 * ```
 */
export function pathKey(path: readonly PropertyKey[]): string {
  return path.map((part, i) =>
    typeof part === "number" ? `[${part}]` : `${i === 0 ? "" : "."}${String(part)}`
  ).join("");
}

/**
 * Parses TOML and keeps the place of every value, so that a rule found broken later can name its
 * line.
 *
 * @param text The document.
 * @param options Names for messages.
 * @param options.file File name for messages.
 * @param options.action What is being done, for messages.
 * @returns Values and places.
 * @throws {InputError} On a syntax error or a duplicate key, with line and column.
 *
 * @example
 * ```ts
 * import { parseTomlDocument } from "@millrace/millrace/campaign";
 * import { assertEquals } from "@std/assert";
 *
 * const document = parseTomlDocument("format = 1\n[orbit]\nperiod_d = 0.08\n");
 * assertEquals(document.value, { format: 1, orbit: { period_d: 0.08 } });
 * assertEquals(document.places.get("orbit.period_d"), { line: 3, column: 1 });
 * ```
 */
export function parseTomlDocument(
  text: string,
  options: { file?: string; action?: string } = {},
): TomlDocument {
  const { file, action = "read target file" } = options;
  let program: AST.TOMLProgram;
  try {
    program = parseTOML(text);
  } catch (error) {
    const { message, lineNumber, column } = error as {
      message: string;
      lineNumber?: number;
      column?: number;
    };
    throw new InputError({
      action,
      rule: `it is not valid TOML: ${message.charAt(0).toLowerCase()}${message.slice(1)}`,
      file,
      line: lineNumber,
      column: column === undefined ? undefined : column + 1,
    });
  }
  const places = new Map<string, TomlPlace>();
  for (const node of program.body[0].body) {
    if (node.type === "TOMLTable") {
      mark(places, node.resolvedKey, node.loc.start);
      for (const entry of node.body) markEntry(places, node.resolvedKey, entry);
    } else markEntry(places, [], node);
  }
  return { value: getStaticTOMLValue(program) as Record<string, unknown>, places };
}

type Path = readonly (string | number)[];

function mark(
  places: Map<string, TomlPlace>,
  path: Path,
  start: { line: number; column: number },
): void {
  const key = pathKey(path);
  if (!places.has(key)) places.set(key, { line: start.line, column: start.column + 1 });
}

function markEntry(
  places: Map<string, TomlPlace>,
  base: Path,
  entry: AST.TOMLKeyValue,
): void {
  const names = entry.key.keys.map((key) => key.type === "TOMLBare" ? key.name : key.value);
  const path = [...base, ...names];
  for (let depth = 1; depth <= names.length; depth++) {
    mark(places, [...base, ...names.slice(0, depth)], entry.loc.start);
  }
  markContent(places, path, entry.value);
}

function markContent(
  places: Map<string, TomlPlace>,
  path: Path,
  node: AST.TOMLContentNode,
): void {
  if (node.type === "TOMLArray") {
    node.elements.forEach((element, i) => {
      mark(places, [...path, i], element.loc.start);
      markContent(places, [...path, i], element);
    });
  } else if (node.type === "TOMLInlineTable") {
    for (const entry of node.body) markEntry(places, path, entry);
  }
}
