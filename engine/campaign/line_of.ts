import { InputError } from "../errors.ts";
import { airToVacuum, lineNamed, type SpectralLine, vacuumToAir } from "../sky/mod.ts";
import type { LineSettings } from "./schema/lines_section.ts";
import type { Target } from "./target.ts";

/**
 * The spectral line that a `[[lines]]` table means: the stated wavelength, or the known one of its
 * name. A multiplet is measured from the mean of its components unless a wavelength is stated.
 *
 * @param settings The table.
 * @param options Where it stands.
 * @param options.target The target, for messages.
 * @returns The line.
 * @throws {InputError} When the name is not known and no wavelength is given.
 */
export function lineOf(
  settings: LineSettings,
  options: { target: Target },
): SpectralLine {
  const { name, air_angstrom, vacuum_angstrom, components_air_angstrom } = settings;
  const stated = `stated in ${options.target.file}`;
  if (vacuum_angstrom !== undefined) {
    return {
      name,
      vacuum_angstrom,
      air_angstrom: vacuumToAir(vacuum_angstrom),
      source: stated,
    };
  }
  const air = air_angstrom ??
    (components_air_angstrom === undefined
      ? undefined
      : components_air_angstrom.reduce((a, b) => a + b, 0) / components_air_angstrom.length);
  if (air !== undefined) {
    return { name, vacuum_angstrom: airToVacuum(air), air_angstrom: air, source: stated };
  }
  try {
    return lineNamed(name);
  } catch (error) {
    if (!(error instanceof InputError)) throw error;
    const index = options.target.settings.lines.indexOf(settings);
    const place = options.target.places.get(`lines[${index}].name`);
    throw error.at({ file: options.target.file, ...place, key: `lines[${index}].name` });
  }
}

/**
 * The `[[lines]]` tables that a command works on.
 *
 * @param target The target.
 * @param options What is being done, for messages.
 * @returns All lines of the target file, at least one.
 * @throws {InputError} When the target file names none, or one twice.
 */
export function linesOf(
  target: Target,
  options: { action: string },
): readonly LineSettings[] {
  const { lines } = target.settings;
  if (lines.length === 0) {
    throw new InputError({
      action: options.action,
      rule: "the target file must name at least one line",
      file: target.file,
      remedy: 'add a table such as [[lines]] with name = "H beta"',
    });
  }
  lines.forEach(({ name }, i) => {
    const first = lines.findIndex((line) => line.name === name);
    if (first !== i) {
      throw new InputError({
        action: options.action,
        rule: "each line must have a name of its own",
        value: name,
        file: target.file,
        ...target.places.get(`lines[${i}].name`),
        key: `lines[${i}].name`,
      });
    }
  });
  return lines;
}

/**
 * The lines of which the same map is made as of a line.
 *
 * @param line The line.
 * @param options Where its table stands.
 * @param options.target The target.
 * @returns Their tables, with the flux ratios asked for.
 * @throws {InputError} When one is not among the target's lines, or is the line itself.
 */
export function linesTogether(
  line: LineSettings,
  options: { target: Target },
): { line: LineSettings; ratio: number | "measured" }[] {
  const { target } = options;
  const { lines, map } = target.settings;
  const index = lines.indexOf(line);
  return line.together.map(({ line: name, ratio }, i) => {
    const key = `lines[${index}].together[${i}].line`;
    const other = lines.find((one) => one.name === name && one !== line);
    const refuse = (rule: string, value: unknown, remedy: string) =>
      new InputError({
        action: `map ${line.name} together with other lines`,
        rule,
        value,
        file: target.file,
        line: target.places.get(key)?.line,
        key,
        remedy,
      });
    if (other === undefined) {
      const names = lines.flatMap((one) => one === line ? [] : [one.name]);
      throw refuse(
        names.length === 0
          ? "the target file must have another line"
          : `the line must be one of ${names.join(", ")}`,
        name,
        "give it a [[lines]] table of its own",
      );
    }
    if (map.baseline) {
      throw refuse("baselines are free for one line alone", name, "set map.baseline = false");
    }
    return { line: other, ratio };
  });
}

/**
 * The lines of which maps are made: those of the gas. A line that moves with the donor is measured
 * by `orbit`; it is mapped only where the target file has no other.
 *
 * @param lines All lines.
 * @returns The lines to map.
 */
export function mappedLines(lines: readonly LineSettings[]): readonly LineSettings[] {
  const gas = lines.filter(({ traces }) => traces === "accretor");
  return gas.length === 0 ? lines : gas;
}
