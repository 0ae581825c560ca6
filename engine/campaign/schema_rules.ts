import { closestString } from "@std/text";
import type { z } from "zod";
import { InputError } from "../errors.ts";
import { pathKey } from "./toml_document.ts";

type Issue = z.core.$ZodIssue;

/** What is known about the place of a broken rule. */
export interface RulePlace {
  /** File name for messages. */
  readonly file?: string;
  /** Line, from 1. */
  readonly line?: number;
  /** Column, from 1. */
  readonly column?: number;
}

const UNITS: readonly (readonly [suffix: string, unit: string])[] = [
  ["_kms", "km/s"],
  ["_angstrom", "Å"],
  ["_deg", "deg"],
  ["_msun", "solar masses"],
  ["_rsun", "solar radii"],
  ["_d2", "d²"],
  ["_d", "d"],
  ["_s", "s"],
  ["_m", "m"],
];

/**
 * Turns the first broken rule of a schema into an error that names file, line, key, rule and value,
 * and the nearest known key or word.
 *
 * @param issue The broken rule.
 * @param context Where the value came from.
 * @param context.value The whole document.
 * @param context.schema Its schema, for the names of known keys.
 * @param context.action What is being done, for the message.
 * @param context.placeOf Place of a path in the document.
 * @param context.document What the document is, for messages. @default "the target file"
 * @returns The error.
 */
export function ruleError(
  issue: Issue,
  context: {
    value: unknown;
    schema: z.ZodType;
    action: string;
    placeOf: (path: readonly PropertyKey[]) => RulePlace;
    document?: string;
  },
): InputError {
  const { value, schema, action, placeOf, document = "the target file" } = context;
  if (issue.code === "unrecognized_keys") {
    const unknown = issue.keys[0]!;
    const path = [...issue.path, unknown];
    const known = keysAt(schema, issue.path);
    const section = issue.path.length === 0 ? document : `[${sectionName(issue.path)}]`;
    return new InputError({
      action,
      rule: `key "${unknown}" is not known in ${section}`,
      ...placeOf(path),
      key: pathKey(path),
      remedy: known.length === 0
        ? undefined
        : `the nearest known key is "${nearest(unknown, known)}"`,
    });
  }
  const key = pathKey(issue.path);
  const name = key === "" ? document : String(lastName(issue.path));
  const current = valueAt(value, issue.path);
  const unit = typeof current === "number"
    ? UNITS.find(([suffix]) => name.replace(/\[\d+\]$/, "").endsWith(suffix))?.[1]
    : undefined;
  const remedy = issue.code === "invalid_value" && typeof current === "string"
    ? `the nearest is "${nearest(current, issue.values.map(String))}"`
    : undefined;
  return new InputError({
    action,
    rule: `${name} ${ruleText(issue, current)}`,
    ...(current === undefined ? {} : { value: current }),
    unit,
    ...placeOf(issue.path),
    key: key === "" ? undefined : key,
    remedy,
  });
}

/** A name that the word begins, else the one with the fewest letters to change. */
function nearest(word: string, known: readonly string[]): string {
  return known.find((name) => name.startsWith(word)) ?? closestString(word, known);
}

function sectionName(path: readonly PropertyKey[]): string {
  return pathKey(path);
}

function lastName(path: readonly PropertyKey[]): string {
  const last = path.at(-1);
  return typeof last === "number" && path.length > 1
    ? `${String(path.at(-2))}[${last}]`
    : String(last);
}

function valueAt(value: unknown, path: readonly PropertyKey[]): unknown {
  let current = value;
  for (const part of path) {
    if (current === null || typeof current !== "object") return undefined;
    current = (current as Record<PropertyKey, unknown>)[part];
  }
  return current;
}

const TYPES: Readonly<Record<string, string>> = {
  number: "a number",
  int: "a whole number",
  string: "text in quotes",
  boolean: "true or false",
  array: "a list",
  object: "a table",
  record: "a table",
  tuple: "a list",
};

function ruleText(issue: Issue, current: unknown): string {
  switch (issue.code) {
    case "custom":
      return issue.message;
    case "invalid_type":
      if (current === undefined) return "must be given";
      if (typeof current === "number" && !Number.isFinite(current)) return "must be finite";
      return `must be ${TYPES[issue.expected] ?? `of type ${issue.expected}`}`;
    case "too_small":
    case "too_big": {
      const small = issue.code === "too_small";
      const limit = small ? issue.minimum : issue.maximum;
      if (issue.origin === "string") return "must not be empty";
      if (issue.origin === "array") {
        return `must have ${small ? "at least" : "at most"} ${limit} item${limit === 1 ? "" : "s"}`;
      }
      const word = small ? "greater than" : "less than";
      return `must be ${word} ${issue.inclusive ? "or equal to " : ""}${limit}`;
    }
    case "invalid_value": {
      const words = issue.values.map((v) => JSON.stringify(v));
      return words.length === 1 ? `must be ${words[0]}` : `must be one of ${words.join(", ")}`;
    }
    default:
      return issue.message;
  }
}

interface Definition {
  readonly type: string;
  readonly innerType?: { def: Definition };
  readonly element?: { def: Definition };
  readonly options?: readonly { def: Definition }[];
  readonly shape?: Readonly<Record<string, { def: Definition }>>;
}

/** Names of the keys that a schema knows at a path; none where the path is not a table. */
function keysAt(schema: z.ZodType, path: readonly PropertyKey[]): string[] {
  let found: Definition | undefined = unwrap((schema as unknown as { def: Definition }).def);
  for (const part of path) {
    const next: { def: Definition } | undefined = typeof part === "number"
      ? found?.element
      : found?.shape?.[String(part)];
    found = next === undefined ? undefined : unwrap(next.def);
  }
  return Object.keys(found?.shape ?? {});
}

function unwrap(definition: Definition): Definition {
  let inner = definition;
  while (inner.innerType !== undefined) inner = inner.innerType.def;
  return inner;
}
