import { InputError } from "../errors.ts";
import { airToVacuum, lineNamed, type SpectralLine } from "../sky/mod.ts";
import type { BlendMember } from "../tomography/mod.ts";
import type { BlendSettings } from "./schema/lines_section.ts";
import type { Target } from "./target.ts";

/**
 * The lines that are mapped together with a line, each with a fixed strength relative to it.
 *
 * @param line The line.
 * @param options Where its table stands.
 * @param options.target The target.
 * @returns One member a blend.
 * @throws {InputError} When a blend has no wavelength, or a ratio is to be fitted.
 */
export function blendsOf(line: SpectralLine, options: { target: Target }): BlendMember[] {
  const { target } = options;
  const index = target.settings.lines.findIndex(({ name }) => name === line.name);
  const blends = target.settings.lines[index]?.blends ?? [];
  return blends.map((blend, i) => {
    const key = `lines[${index}].blends[${i}]`;
    const refuse = (rule: string, remedy: string) =>
      new InputError({
        action: `map ${line.name} with its blends`,
        rule,
        file: target.file,
        line: target.places.get(key)?.line,
        key,
        remedy,
      });
    const vacuum = restOf(blend);
    if (vacuum === null) {
      throw refuse("a blend needs a wavelength", "give name, air_angstrom or vacuum_angstrom");
    }
    if (blend.ratio === "free") {
      throw refuse("the ratio of a blend must be a number", "give the ratio, or try several");
    }
    return { rest_ratio: vacuum / line.vacuum_angstrom, flux_ratio: blend.ratio };
  });
}

function restOf(blend: BlendSettings): number | null {
  if (blend.vacuum_angstrom !== undefined) return blend.vacuum_angstrom;
  if (blend.air_angstrom !== undefined) return airToVacuum(blend.air_angstrom);
  return blend.name === undefined ? null : lineNamed(blend.name).vacuum_angstrom;
}
