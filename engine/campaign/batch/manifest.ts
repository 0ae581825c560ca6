import { basename, dirname, extname, globToRegExp, relative, resolve } from "@std/path";
import { InputError } from "../../errors.ts";
import { expandGlob, readText } from "../../files/mod.ts";
import { ruleError } from "../schema_rules.ts";
import { manifestSchema, type ManifestSettings } from "../schema/manifest_schema.ts";
import { parseTomlDocument, pathKey, type TomlPlace } from "../toml_document.ts";

/** One target file of a manifest. */
export interface ManifestTarget {
  /** Its name: the file's without extension, or its folder's where the file is `target.toml`. */
  readonly name: string;
  /** Path of the target file, from the root. */
  readonly file: string;
  /** The same from the manifest. */
  readonly path: string;
}

/** A manifest, read and checked, with the targets that it names. */
export interface Manifest {
  /** Path of the manifest as given. */
  readonly file: string;
  /** Its folder: relative paths start here. */
  readonly folder: string;
  /** File name without extension: names the output folder. */
  readonly name: string;
  /** Title, or the name where none is given. */
  readonly title: string;
  /** All settings, defaults filled in. */
  readonly settings: ManifestSettings;
  /** The targets, sorted by name. */
  readonly targets: readonly ManifestTarget[];
  /** Place of every value in the file, by path. */
  readonly places: ReadonlyMap<string, TomlPlace>;
}

/**
 * Reads and checks a manifest and finds its target files. The files themselves are not read: one
 * that is wrong fails by itself.
 *
 * @param file Path of the TOML file.
 * @returns The manifest.
 * @throws {InputError} On a missing file, a syntax error, an unknown key, a wrong value, a pattern
 * that finds nothing, or two targets of one name.
 */
export async function readManifest(file: string): Promise<Manifest> {
  const text = await readText(file, { action: "read manifest" });
  const { settings, places } = parseManifest(text, { file });
  const folder = dirname(file);
  const paths = new Set<string>();
  for (const [i, pattern] of settings.targets.entries()) {
    const key = `targets[${i}]`;
    try {
      for (const path of await expandGlob(pattern, { base: folder, key })) paths.add(path);
    } catch (error) {
      if (!(error instanceof InputError)) throw error;
      throw error.at({ file, ...places.get(key), key });
    }
  }
  const targets = [...paths].map((path) => ({
    name: nameOf(path),
    file: resolve(path),
    path: relative(resolve(folder), resolve(path)),
  })).sort((a, b) => (a.name < b.name ? -1 : a.name > b.name ? 1 : 0));
  targets.forEach((target, i) => {
    const next = targets[i + 1];
    if (next?.name !== target.name) return;
    throw new InputError({
      action: "read manifest",
      rule: `each target must have a name of its own: ${target.path} and ${next.path} have one`,
      value: target.name,
      file,
      ...places.get("targets"),
      key: "targets",
      remedy: "rename one of the files: their names become the names of output folders",
    });
  });
  const name = basename(file, extname(file));
  const manifest = {
    file,
    folder,
    name,
    title: settings.title ?? name,
    settings,
    targets,
    places,
  };
  checkPatterns(manifest);
  return manifest;
}

/**
 * Checks the text of a manifest.
 *
 * @param text TOML.
 * @param options Where it comes from.
 * @param options.file Path for messages. @default "manifest.toml"
 * @returns The settings, and the place of every value.
 * @throws {InputError} On a syntax error, an unknown key or a wrong value, with its place.
 *
 * @example
 * ```ts
 * import { parseManifest } from "@millrace/millrace/campaign";
 * import { assertEquals } from "@std/assert";
 *
 * const { settings } = parseManifest('format = 1\ntargets = ["stars/*.toml"]\n');
 * assertEquals(settings.commands, ["check", "trail", "map", "plate"]);
 * ```
 */
export function parseManifest(
  text: string,
  options: { file?: string } = {},
): { settings: ManifestSettings; places: ReadonlyMap<string, TomlPlace> } {
  const { file = "manifest.toml" } = options;
  const action = "read manifest";
  const { value, places } = parseTomlDocument(text, { file, action });
  const checked = manifestSchema.safeParse(value, { reportInput: false });
  if (checked.success) return { settings: checked.data, places };
  // A key that is not known tells more than the one that is missing because of it.
  const { issues } = checked.error;
  throw ruleError(issues.find(({ code }) => code === "unrecognized_keys") ?? issues[0]!, {
    value,
    schema: manifestSchema,
    action,
    document: "the manifest",
    placeOf: (path) => {
      for (let depth = path.length; depth > 0; depth--) {
        const place = places.get(pathKey(path.slice(0, depth)));
        if (place !== undefined) return { file, ...place };
      }
      return { file };
    },
  });
}

/**
 * Whether patterns mean a target: by its path from the manifest or by its name.
 *
 * @param target The target.
 * @param patterns Globs.
 * @returns True when one of them matches.
 *
 * @example
 * ```ts
 * import { isMeant } from "@millrace/millrace/campaign";
 * import { assert } from "@std/assert";
 *
 * const target = { name: "vx-0417", file: "/data/stars/vx-0417.toml", path: "stars/vx-0417.toml" };
 * assert(isMeant(target, ["vx-04*"]));
 * assert(isMeant(target, ["stars/*.toml"]));
 * assert(!isMeant(target, ["vx-05*"]));
 * ```
 */
export function isMeant(target: ManifestTarget, patterns: readonly string[]): boolean {
  return patterns.some((pattern) => {
    const matcher = globToRegExp(pattern, { extended: true, globstar: true });
    return matcher.test(target.name) || matcher.test(target.path);
  });
}

/** Every target file of a folder for each star is called target.toml: the folder's name is meant. */
function nameOf(path: string): string {
  const stem = basename(path, extname(path));
  return stem === "target" ? basename(dirname(resolve(path))) : stem;
}

function checkPatterns({ file, settings, targets, places }: Omit<Manifest, "title" | "name">) {
  for (const section of ["changes", "variants", "sample_plates"] as const) {
    settings[section].forEach((entry, i) => {
      entry.targets.forEach((pattern, j) => {
        if (targets.some((target) => isMeant(target, [pattern]))) return;
        const key = `${section}[${i}].targets[${j}]`;
        throw new InputError({
          action: "read manifest",
          rule: "a pattern must match the name or path of at least one of the targets",
          value: pattern,
          file,
          ...places.get(key),
          key,
        });
      });
    });
  }
}
