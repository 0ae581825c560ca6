import { join, relative } from "@std/path";
import { InputError, type Warning } from "../errors.ts";
import { readBytes, sha256 } from "../files/mod.ts";
import type { Direction } from "../sky/mod.ts";
import { type Decision, readExposures, type Spectrum } from "../spectra/mod.ts";
import type { Photometry } from "../trail/mod.ts";
import type { Progress } from "../workers/mod.ts";
import { exposureFiles } from "./exposure_files.ts";
import { groupPhotometry } from "./group_photometry.ts";
import type { InputDigest } from "./output_head.ts";
import { pause } from "./pause.ts";
import type { Target } from "./target.ts";
import { unusedExposures } from "./unused_exposures.ts";
import { type GroupZero, zeroedGroup } from "./wavelength_zeros.ts";

/** All exposures of a target. */
export interface TargetExposures {
  /** Spectra, in order of groups and files. */
  readonly spectra: readonly Spectrum[];
  /** Where the target is, as `[sky]` or the headers say; null when nothing does. */
  readonly direction: Direction | null;
  /** Zeros of wavelength that were corrected, one entry a group that asks for it. */
  readonly zeros: readonly GroupZero[];
  /** Light curves that scale the exposures, one entry a group; null where it has none. */
  readonly photometry: readonly (Photometry | null)[];
  /** What each "auto" decided, and what was corrected. */
  readonly decisions: readonly Decision[];
  /** What a user should know. */
  readonly warnings: readonly Warning[];
  /** Files read, with digests. */
  readonly inputs: readonly InputDigest[];
}

/**
 * Reads every `[[exposures]]` group of a target. Results of Millrace among the files are left out.
 *
 * @param target The target.
 * @param options Progress and interrupt.
 * @param options.progress Told of each group's files.
 * @param options.signal Aborts the work.
 * @returns The exposures.
 * @throws {InputError} When the target names no exposures, a glob finds none, or a file cannot be
 * read as what it should be.
 */
export async function readTargetExposures(
  target: Target,
  options: { progress?: Progress; signal?: AbortSignal } = {},
): Promise<TargetExposures> {
  const { progress, signal } = options;
  const { exposures, sky } = target.settings;
  if (exposures.length === 0) {
    throw new InputError({
      action: "read exposures",
      rule: "the target file must name at least one set of files",
      file: target.file,
      remedy: 'add a table such as [[exposures]] with files = ["night1/*.fits"]',
    });
  }
  const spectra: Spectrum[] = [];
  const decisions: Decision[] = [];
  const warnings: Warning[] = [];
  const inputs = new Map<string, InputDigest>();
  const zeros: GroupZero[] = [];
  let direction: Direction | null = null;
  for (const [group, settings] of exposures.entries()) {
    const paths: string[] = [];
    for (const [index, pattern] of settings.files.entries()) {
      const key = `exposures[${group}].files[${index}]`;
      paths.push(...await exposureFiles(target, { pattern, key }));
    }
    const log = settings.log === undefined ? undefined : join(target.folder, settings.log);
    for (const [done, path] of [...new Set(paths), ...(log === undefined ? [] : [log])].entries()) {
      progress?.(done, paths.length, "digests of exposures");
      const name = relative(target.folder, path);
      inputs.set(name, {
        file: name,
        sha256: sha256(await readBytes(path, { decompress: false })),
      });
      await pause(signal);
    }
    const read = await readExposures([...new Set(paths)], {
      layout: settings.layout,
      log,
      keys: settings.keys,
      site: sky.site,
      target: sky.ra_deg === undefined || sky.dec_deg === undefined
        ? undefined
        : { ra_deg: sky.ra_deg, dec_deg: sky.dec_deg },
      wavelength_medium: settings.wavelength_medium,
      wavelength_frame: settings.wavelength_frame,
      time_scale: settings.time_scale,
      time_place: settings.time_place,
      time_marks: settings.time_marks,
      resolution_angstrom: settings.resolution_angstrom,
      resolution_kms: settings.resolution_kms,
      resolving_power: settings.resolving_power,
      group,
    });
    // Outputs name files from the target file, so that they do not depend on where one stood.
    const named = <T extends { readonly source: string }>(one: T): T => ({
      ...one,
      source: relative(target.folder, one.source),
    });
    const zeroed = await zeroedGroup(read.spectra.map(named), { target, group });
    spectra.push(...zeroed.spectra);
    decisions.push(...read.decisions.map(named), ...zeroed.decisions);
    warnings.push(...read.warnings, ...zeroed.warnings);
    if (zeroed.zero !== null) zeros.push(zeroed.zero);
    for (const input of zeroed.inputs) inputs.set(input.file, input);
    direction ??= read.target;
    await pause(signal);
  }
  const light = await groupPhotometry(target, { spectra });
  for (const input of light.inputs) inputs.set(input.file, input);
  const unused = unusedExposures(target, spectra);
  return {
    spectra,
    direction,
    zeros,
    photometry: light.curves,
    decisions: [...decisions, ...light.decisions],
    warnings: [...warnings, ...light.warnings, ...(unused === null ? [] : [unused])],
    inputs: [...inputs.values()],
  };
}
