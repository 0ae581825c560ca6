import { InputError } from "../errors.ts";
import { parseTomlDocument } from "./toml_document.ts";

/**
 * Applies one `section.key=value` to a document: the value is TOML, or a bare word taken as text.
 * List entries are reached by their index, as in `lines[0].reach_kms=1500`.
 *
 * @param document The document; it is not changed.
 * @param assignment The text after `--set`.
 * @returns A new document and the path that was set.
 * @throws {InputError} When the text is not an assignment or the path does not lead anywhere.
 *
 * @example
 * ```ts
 * import { overrideSetting } from "@millrace/millrace/campaign";
 * import { assertEquals } from "@std/assert";
 *
 * const { value } = overrideSetting({ map: { pixels: 201 } }, "map.pixels=101");
 * assertEquals(value, { map: { pixels: 101 } });
 * ```
 */
export function overrideSetting(
  document: Readonly<Record<string, unknown>>,
  assignment: string,
): { value: Record<string, unknown>; path: (string | number)[] } {
  const action = "apply --set";
  const split = assignment.indexOf("=");
  const left = assignment.slice(0, split).trim();
  if (split < 1 || !/^[a-z_0-9]+(\[\d+\])?(\.[A-Za-z_0-9-]+(\[\d+\])?)*$/.test(left)) {
    throw new InputError({
      action,
      rule: "it must read section.key=value",
      value: assignment,
    });
  }
  const path = left.split(".").flatMap((part) => {
    const match = /^([^[]+)(?:\[(\d+)\])?$/.exec(part)!;
    return match[2] === undefined ? [match[1]!] : [match[1]!, Number(match[2])];
  });
  const value = structuredClone(document) as Record<string, unknown>;
  let table: Record<string | number, unknown> = value;
  for (const [depth, part] of path.slice(0, -1).entries()) {
    if (
      table[part] === undefined && typeof path[depth + 1] === "string" && typeof part === "string"
    ) {
      table[part] = {};
    }
    const next = table[part];
    const list = Array.isArray(next);
    // A list is reached by an index, a table by a name: anything else would vanish unseen.
    if (
      next === null || typeof next !== "object" || list !== (typeof path[depth + 1] === "number")
    ) {
      throw new InputError({
        action,
        rule: list
          ? `${path.slice(0, depth + 1).join(".")} is a list`
          : `the target file has no ${path.slice(0, depth + 1).join(".")}`,
        value: assignment,
        remedy: list ? `name an entry, as in ${part}[0]` : undefined,
      });
    }
    table = next as Record<string | number, unknown>;
  }
  table[path.at(-1)!] = parseValue(assignment.slice(split + 1).trim());
  return { value, path };
}

function parseValue(text: string): unknown {
  try {
    const { value } = parseTomlDocument(`value = ${text}\n`);
    if (Object.keys(value).length === 1) return value.value;
  } catch {
    // A bare word is text: the schema then says whether it is one that the key knows.
  }
  return text;
}
