import { basename, dirname, extname, join } from "@std/path";
import { InputError } from "../errors.ts";
import { readText, sha256 } from "../files/mod.ts";
import { canonicalJson } from "./canonical.ts";
import { overrideSetting } from "./override.ts";
import { ruleError } from "./schema_rules.ts";
import { targetSchema, type TargetSettings } from "./schema/target_schema.ts";
import { parseTomlDocument, pathKey, type TomlPlace } from "./toml_document.ts";

/** A target file, read and checked. */
export interface Target {
  /** Path of the target file as given. */
  readonly file: string;
  /** Its folder: relative paths start here. */
  readonly folder: string;
  /** File name without extension: names the output folder. */
  readonly name: string;
  /** Title, or the name where none is given. */
  readonly title: string;
  /** All settings, defaults filled in, overrides applied. */
  readonly settings: TargetSettings;
  /** SHA-256 of the settings: the same settings give the same digest, however they were written. */
  readonly settings_digest: string;
  /** Text of the target file. */
  readonly text: string;
  /** Overrides in the order applied. */
  readonly overrides: readonly string[];
  /** Place of every value in the file, by path. */
  readonly places: ReadonlyMap<string, TomlPlace>;
}

/**
 * Reads and checks a target file.
 *
 * @param file Path of the TOML file.
 * @param options Changes to apply.
 * @param options.set Overrides `section.key=value`, in order.
 * @param options.seed Overrides `seed`.
 * @returns The target.
 * @throws {InputError} On a missing file, a syntax error, an unknown key or a wrong value, with its
 * place.
 */
export async function readTarget(
  file: string,
  options: { set?: readonly string[]; seed?: number } = {},
): Promise<Target> {
  return parseTarget(await readText(file, { action: "read target file" }), { ...options, file });
}

/**
 * Checks the text of a target file.
 *
 * @param text TOML.
 * @param options Where it comes from, and changes to apply.
 * @param options.file Path for messages and for relative paths. @default "target.toml"
 * @param options.set Overrides `section.key=value`, in order.
 * @param options.seed Overrides `seed`.
 * @returns The target.
 * @throws {InputError} On a syntax error, an unknown key or a wrong value, with its place.
 *
 * @example
 * ```ts
 * import { parseTarget } from "@millrace/millrace/campaign";
 * import { assertEquals } from "@std/assert";
 *
 * const target = parseTarget("format = 1\n[orbit]\nperiod_d = 0.08\n", { set: ["map.pixels=101"] });
 * assertEquals(target.settings.orbit.period_d, 0.08);
 * assertEquals(target.settings.map.pixels, 101);
 * ```
 */
export function parseTarget(
  text: string,
  options: { file?: string; set?: readonly string[]; seed?: number } = {},
): Target {
  const { file = "target.toml", set = [], seed } = options;
  const action = "read target file";
  const document = parseTomlDocument(text, { file, action });
  let value = document.value;
  const fromCall = new Set<string>();
  for (const assignment of set) {
    const change = overrideSetting(value, assignment);
    value = change.value;
    fromCall.add(pathKey(change.path));
  }
  if (seed !== undefined) value = { ...value, seed };
  const checked = targetSchema.safeParse(value, { reportInput: false });
  if (!checked.success) {
    throw ruleError(checked.error.issues[0]!, {
      value,
      schema: targetSchema,
      action,
      placeOf: (path) => {
        for (let depth = path.length; depth > 0; depth--) {
          const key = pathKey(path.slice(0, depth));
          if (fromCall.has(key)) return { file: "--set" };
          const place = document.places.get(key);
          if (place !== undefined) return { file, ...place };
        }
        return { file };
      },
    });
  }
  const settings = checked.data;
  const name = basename(file, extname(file));
  return {
    file,
    folder: dirname(file),
    name,
    title: settings.title ?? name,
    settings,
    settings_digest: sha256(new TextEncoder().encode(canonicalJson(settings))),
    text,
    overrides: [...set],
    places: document.places,
  };
}

/**
 * A value that a command needs and the target file may lack.
 *
 * @param target The target.
 * @param options What is needed and for what.
 * @param options.value The value found, if any.
 * @param options.key Its key, as in "orbit.period_d"; alternatives may follow after "or".
 * @param options.action What is being done, as in "fold the spectra".
 * @returns The value.
 * @throws {InputError} When it is missing.
 */
export function needed<T>(
  target: Target,
  options: { value: T | undefined | null; key: string; action: string },
): T {
  if (options.value !== undefined && options.value !== null) return options.value;
  throw new InputError({
    action: options.action,
    rule: `the target file must give ${options.key}`,
    file: target.file,
    remedy: "add it to the file, or give it with --set",
  });
}

/** Path of the output folder of a target: beside the file, named after it, unless stated. */
export function outputFolder(target: Target, out?: string): string {
  return out ?? join(dirname(target.file), target.name);
}
