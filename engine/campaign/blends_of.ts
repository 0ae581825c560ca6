import { InputError } from "../errors.ts";
import { airToVacuum, lineNamed, type SpectralLine, vacuumToAir } from "../sky/mod.ts";
import type { BlendSettings } from "./schema/lines_section.ts";
import type { Target } from "./target.ts";

/** A line that is mapped together with another. */
export interface LineBlend {
  /** Its name, or its wavelength where it has none. */
  readonly name: string;
  /** Rest wavelength in air, Å. */
  readonly rest_air_angstrom: number;
  /** Its rest wavelength over that of the mapped line, vacuum. */
  readonly rest_ratio: number;
  /** Flux over that of the mapped line, or "free"; of no meaning where it has a map of its own. */
  readonly ratio: number | "free";
  /** Whether it shares the line's map, or has its own. */
  readonly map: "shared" | "own";
}

/**
 * The lines that are mapped together with a line.
 *
 * @param line The line.
 * @param options Where its table stands.
 * @param options.target The target.
 * @returns One entry a blend.
 * @throws {InputError} When a blend has no wavelength, or blends cannot be told apart by the inversion.
 */
export function blendsOf(line: SpectralLine, options: { target: Target }): LineBlend[] {
  const { target } = options;
  const { method } = target.settings.map;
  const index = target.settings.lines.findIndex(({ name }) => name === line.name);
  const blends = target.settings.lines[index]?.blends ?? [];
  const refuse = (key: string, rule: string, rest: { value?: unknown; remedy: string }) =>
    new InputError({
      action: `map ${line.name} with its blends`,
      rule,
      file: target.file,
      line: target.places.get(key)?.line ?? target.places.get(`lines[${index}].blends`)?.line,
      key,
      ...rest,
    });
  if (blends.length > 0 && method === "back-projection") {
    throw refuse(`lines[${index}].blends`, "blends can be told apart by a fit alone", {
      value: method,
      remedy: 'use map.method = "entropy"',
    });
  }
  return blends.map((blend, i) => {
    const key = `lines[${index}].blends[${i}]`;
    const vacuum = restOf(blend);
    if (vacuum === null) {
      throw refuse(key, "a blend needs a wavelength", {
        remedy: "give name, air_angstrom or vacuum_angstrom",
      });
    }
    if (blend.map === "own" && method !== "entropy") {
      throw refuse(`${key}.map`, "a blend has a map of its own by entropy alone", {
        value: method,
        remedy: 'use map.method = "entropy", or map = "shared"',
      });
    }
    const rest_air_angstrom = vacuumToAir(vacuum);
    return {
      name: blend.name ?? rest_air_angstrom.toFixed(2),
      rest_air_angstrom,
      rest_ratio: vacuum / line.vacuum_angstrom,
      ratio: blend.ratio,
      map: blend.map,
    };
  });
}

function restOf(blend: BlendSettings): number | null {
  if (blend.vacuum_angstrom !== undefined) return blend.vacuum_angstrom;
  if (blend.air_angstrom !== undefined) return airToVacuum(blend.air_angstrom);
  return blend.name === undefined ? null : lineNamed(blend.name).vacuum_angstrom;
}
