import { InputError, type Warning } from "../errors.ts";
import type { Decision, Spectrum } from "../spectra/mod.ts";
import { brightnessDuring, parsePhotometry, type Photometry } from "../trail/mod.ts";
import type { InputDigest } from "./output_head.ts";
import { readSideFile } from "./side_file.ts";
import type { Target } from "./target.ts";

/** The light curves of all groups of exposures. */
export interface GroupPhotometry {
  /** One a group, null where it has none; groups that name one file share one object. */
  readonly curves: readonly (Photometry | null)[];
  /** What is done with them. */
  readonly decisions: readonly Decision[];
  /** What a user should know. */
  readonly warnings: readonly Warning[];
  /** Files read. */
  readonly inputs: readonly InputDigest[];
}

const ACTION = "scale exposures by photometry";

/**
 * Reads the light curves that `[[exposures]]` tables name.
 *
 * @param target The target.
 * @param options Their exposures.
 * @param options.spectra All exposures.
 * @returns The light curves.
 * @throws {InputError} When a file is missing or wrong, `trail.continuum` is not "scale", or a light
 * curve reaches no exposure of its group.
 */
export async function groupPhotometry(
  target: Target,
  options: { spectra: readonly Spectrum[] },
): Promise<GroupPhotometry> {
  const { exposures, trail } = target.settings;
  const known = new Map<string, Photometry>();
  const curves: (Photometry | null)[] = [];
  const decisions: Decision[] = [];
  const inputs: InputDigest[] = [];
  for (const [group, { photometry: named }] of exposures.entries()) {
    if (named === "none") {
      curves.push(null);
      continue;
    }
    const key = `exposures[${group}].photometry`;
    const place = { file: target.file, line: target.places.get(key)?.line, key };
    if (trail.continuum !== "scale") {
      throw new InputError({
        action: ACTION,
        rule: 'trail.continuum must be "scale" where exposures have photometry',
        value: trail.continuum,
        ...place,
        remedy: 'state continuum = "scale" under [trail], or photometry = "none"',
      });
    }
    let curve = known.get(named);
    if (curve === undefined) {
      const file = await readSideFile(target, {
        key,
        value: named,
        action: "read photometry",
        remedy:
          'it may be "none", or a CSV file with columns bjd_tdb and flux, magnitude, companion_flux or companion_magnitude',
      });
      curve = parsePhotometry(file.text, { file: file.path });
      known.set(named, curve);
      inputs.push(file.input);
    }
    const members = options.spectra.filter((spectrum) => spectrum.group === group);
    const reached = members.filter((spectrum) => brightnessDuring(curve, spectrum) !== null);
    const [first, last] = [curve.time[0]!, curve.time.at(-1)!].map(([d, f]) => (d + f).toFixed(5));
    if (reached.length === 0) {
      throw new InputError({
        action: ACTION,
        rule: "the light curve must reach at least one exposure of its group",
        value: `BJD ${first} to ${last}`,
        ...place,
        remedy: "check that its times are BJD(TDB)",
      });
    }
    decisions.push({
      group,
      what: "photometry",
      value: `${curve.time.length} points of ${
        curve.of === "target" ? "the target's brightness" : "a companion's brightness on the slit"
      }, BJD ${first} to ${last}, scale each exposure`,
      from: `exposures[${group}].photometry = ${named}`,
      assumed: false,
      exposures: reached.length,
      source: reached[0]!.source,
    });
    curves.push(curve);
  }
  const without = curves.filter((curve) => curve === null).length;
  const warnings: Warning[] = without === 0 || without === curves.length ? [] : [{
    code: "photometry-partly",
    text:
      `${without} of ${curves.length} groups of exposures have no photometry: they are divided by the median level of their own, so that line fluxes of different groups do not compare`,
  }];
  return { curves, decisions, warnings, inputs };
}
