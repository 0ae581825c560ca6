import { join } from "@std/path";
import { makeFolder, writeFileAtomically } from "../files/mod.ts";
import { randomStream } from "../numerics/mod.ts";
import { parseIsoDate } from "../sky/mod.ts";
import { encodeExposures } from "../spectra/mod.ts";
import { observe, planExposures } from "../synthesis/mod.ts";
import type { Progress } from "../workers/mod.ts";
import { binaryOf } from "./binary_of.ts";
import { ephemerisOf } from "./ephemeris_of.ts";
import { lineOf, linesOf } from "./line_of.ts";
import { modelOf } from "./model_of.ts";
import { pause } from "./pause.ts";
import { needed, type Target } from "./target.ts";

/**
 * Simulates the exposures that `[observation]` plans of the `[model]` and writes them as raw files:
 * one folder an arm.
 *
 * @param target A target with `[model]`, `[observation]`, `[binary]`, `[orbit]`, `[sky]`.
 * @param options Where and how.
 * @param options.folder Folder for the arms' folders.
 * @param options.overwrite Whether files that Millrace did not write may be replaced. @default false
 * @param options.progress Told of each file.
 * @param options.signal Aborts the work.
 * @returns Paths written.
 * @throws {InputError} When a section that is needed is missing, or the physics cannot be.
 */
export async function simulateExposures(
  target: Target,
  options: { folder: string; overwrite?: boolean; progress?: Progress; signal?: AbortSignal },
): Promise<string[]> {
  const { folder, overwrite, progress, signal } = options;
  const action = "simulate exposures";
  const { settings } = target;
  const { observation: plan, sky, orbit } = settings;
  const observation = needed(target, { value: plan, key: "observation", action });
  const direction = {
    ra_deg: needed(target, { value: sky.ra_deg, key: "sky.ra_deg", action }),
    dec_deg: needed(target, { value: sky.dec_deg, key: "sky.dec_deg", action }),
  };
  const site = needed(target, { value: sky.site, key: "sky.site", action });
  const binary = needed(target, {
    value: binaryOf(target),
    key: "binary (any numbers that fix K1 and K2)",
    action,
  });
  const exposures = planExposures(parseIsoDate(observation.first_utc), observation);
  const lines = await Promise.all(
    linesOf(target, { action }).map(async (line) => {
      const named = lineOf(line, { target });
      return {
        line: named,
        model: await modelOf(target, { settings: line, line: named }),
      };
    }),
  );
  const raw = observe(settings.model ?? { parts: [] }, {
    object: target.title,
    target: direction,
    site,
    binary,
    ephemeris: ephemerisOf(target, { direction }),
    systemic_kms: orbit.systemic_kms === "search" ? 0 : orbit.systemic_kms,
    exposures,
    arms: observation.arms,
    lines,
    variability: observation.variability,
    instrument: observation.instrument,
    sky: observation.sky,
  }, { stream: randomStream(settings.seed) });
  await pause(signal);
  const written: string[] = [];
  for (const [index, { name }] of observation.arms.entries()) {
    const own = raw.slice(index * exposures.length, (index + 1) * exposures.length);
    const files = encodeExposures(own, { layout: observation.layout, stem: name });
    await makeFolder(join(folder, name));
    for (const [done, file] of files.entries()) {
      const path = join(folder, name, file.name);
      await writeFileAtomically(path, file.bytes, { overwrite });
      written.push(path);
      progress?.(done + 1, files.length, `exposures of ${name}`);
      await pause(signal);
    }
  }
  return written;
}
