import { relative, resolve } from "@std/path";
import { InputError } from "../errors.ts";
import { expandGlob, readBytes, sha256 } from "../files/mod.ts";
import { exposureFiles } from "./exposure_files.ts";
import type { InputDigest } from "./output_head.ts";
import { pause } from "./pause.ts";
import type { Target } from "./target.ts";

/** A file that a target names. */
export interface NamedFile {
  /** Its path as it can be opened. */
  readonly path: string;
  /** Key of the target file under which it is named. */
  readonly key: string;
}

/**
 * All files that a target names: exposures, logs, tables beside them, templates, prior images.
 * Results of Millrace are no exposures.
 *
 * @param target The target.
 * @returns The files in the order of the target file; each one once.
 * @throws {InputError} When a pattern finds none, with its place.
 */
export async function namedFiles(target: Target): Promise<NamedFile[]> {
  const found = new Map<string, NamedFile>();
  for (const [key, pattern] of patterns(target)) {
    try {
      const paths = key.includes(".files")
        ? await exposureFiles(target, { pattern, key })
        : await expandGlob(pattern, { base: target.folder, key });
      for (const path of paths) if (!found.has(path)) found.set(path, { path, key });
    } catch (error) {
      if (!(error instanceof InputError)) throw error;
      throw error.at({ file: target.file, line: target.places.get(key)?.line, key });
    }
  }
  return [...found.values()];
}

/**
 * Digests of all files that a target names: with settings and version they say what a run can give.
 *
 * @param target The target.
 * @param options Interrupt.
 * @param options.signal Aborts the work.
 * @returns One digest a file, in the order of {@linkcode namedFiles}; paths relative to the target file.
 * @throws {InputError} When a file cannot be found or read.
 */
export async function inputDigests(
  target: Target,
  options: { signal?: AbortSignal } = {},
): Promise<InputDigest[]> {
  const digests: InputDigest[] = [];
  for (const { path } of await namedFiles(target)) {
    digests.push({
      file: relative(resolve(target.folder), resolve(path)),
      sha256: sha256(await readBytes(path, { decompress: false })),
    });
    await pause(options.signal);
  }
  return digests;
}

/** Words that stand where a file name may. */
const WORDS: Readonly<Record<string, readonly string[]>> = {
  wavelength_zero_kms: ["none", "sky-lines", "telluric"],
  photometry: ["none"],
  template: ["none"],
  prior_image: ["uniform", "blurred", "axisymmetric", "mixed"],
};

function patterns(target: Target): [key: string, pattern: string][] {
  const { exposures, lines, map, model } = target.settings;
  const named: [key: string, pattern: string][] = [];
  const add = (key: string, value: string | readonly string[] | undefined) => {
    const word = key.slice(key.lastIndexOf(".") + 1);
    if (value === undefined) return;
    for (const [i, pattern] of (typeof value === "string" ? [value] : value).entries()) {
      const at = typeof value === "string" ? key : `${key}[${i}]`;
      if (!WORDS[word]?.includes(pattern)) named.push([at, pattern]);
    }
  };
  for (const [i, group] of exposures.entries()) {
    add(`exposures[${i}].files`, group.files);
    add(`exposures[${i}].log`, group.log);
    add(`exposures[${i}].wavelength_zero_kms`, group.wavelength_zero_kms);
    add(`exposures[${i}].photometry`, group.photometry);
  }
  // In a target file the template of a model's donor is the name of its spectrum.
  const templateOf = (of: typeof model) => {
    const template: unknown = of?.donor?.template;
    return typeof template === "string" ? template : undefined;
  };
  for (const [i, line] of lines.entries()) {
    add(`lines[${i}].template`, line.template);
    add(`lines[${i}].model.donor.template`, templateOf(line.model));
  }
  add("model.donor.template", templateOf(model));
  add("map.prior_image", map.prior_image);
  return named;
}

/** Size of all files that a target names, bytes: what reading them is expected to cost. */
export async function inputBytes(target: Target): Promise<number> {
  let bytes = 0;
  for (const { path } of await namedFiles(target)) {
    bytes += (await Deno.stat(path)).size;
  }
  return bytes;
}
