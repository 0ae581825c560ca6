import { closestString } from "@std/text";
import { InputError } from "../errors.ts";
import { vacuumToAir } from "./air.ts";
import { HYDROGENIC_LINES } from "./lines_hydrogenic.ts";
import { OTHER_LINES } from "./lines_other.ts";
import type { SpectralLine } from "./spectral_line.ts";

/** The kept list of lines of accreting binaries and their donors, in order of wavelength. */
export const spectralLines: readonly SpectralLine[] = [...HYDROGENIC_LINES, ...OTHER_LINES]
  .sort((a, b) => a.vacuum_angstrom - b.vacuum_angstrom);

const GREEK: readonly (readonly [letter: string, name: string])[] = [
  ["α", "alpha"],
  ["β", "beta"],
  ["γ", "gamma"],
  ["δ", "delta"],
  ["ε", "epsilon"],
  ["ζ", "8"],
  ["η", "9"],
];

const SHORT: Record<string, string> = {
  a: "alpha",
  b: "beta",
  g: "gamma",
  d: "delta",
  zeta: "8",
  eta: "9",
};

// Case, blanks, hyphens and brackets do not matter: "[O I] 6300" and "OI6300" are one name.
function plain(name: string): string {
  let text = name.normalize("NFKC").toLowerCase();
  for (const [letter, word] of GREEK) text = text.replaceAll(letter, word);
  text = text.replace(/[\s\-_[\](),]|å|λ/g, "");
  const series = /^(h|pa|br)(?:i)?(a|b|g|d|zeta|eta)$/.exec(text);
  return series ? `${series[1]}${SHORT[series[2]!]}` : text.replace(/^hi(?=[a-z\d])/, "h");
}

const BY_NAME = new Map(spectralLines.map((line) => [plain(line.name), line]));
for (
  const [also, name] of [["bowen", "bowenblend"], ["caii3934", "caiik"], ["caii3968", "caiih"], [
    "nad1",
    "naid1",
  ], ["nad2", "naid2"]]
) {
  BY_NAME.set(also!, BY_NAME.get(name!)!);
}

// An ion and a wavelength within 2 Å of one of its lines, however that was rounded.
function byWavelength(text: string): SpectralLine | undefined {
  const parts = /^([a-z]+?)(\d{4,5}(?:\.\d+)?)$/.exec(text);
  if (!parts) return undefined;
  const [, ion, number] = parts;
  const wanted = Number(number);
  const near = spectralLines
    .filter((line) => ionOf(line.name) === ion && Math.abs(line.air_angstrom - wanted) <= 2)
    .sort((a, b) => Math.abs(a.air_angstrom - wanted) - Math.abs(b.air_angstrom - wanted));
  return near[0];
}

function ionOf(name: string): string {
  if (/^(H|Pa|Br) /.test(name)) return "h";
  return plain(name.replace(/ [^ ]+$/, ""));
}

/**
 * A line of the kept list by its name: "H beta", "Hβ", "hb", "He II 4686", "heii4686", "Ca II K". Case,
 * blanks, hyphens and brackets do not matter, nor how a wavelength in the name was rounded.
 *
 * @param name Name of the line.
 * @returns The line.
 * @throws {InputError} When there is no such line; the message names the nearest known one.
 *
 * @example
 * ```ts
 * import { lineNamed } from "@millrace/millrace/sky";
 * import { assertEquals } from "@std/assert";
 *
 * assertEquals(lineNamed("Hβ").name, "H beta");
 * assertEquals(lineNamed("HeI 5875").air_angstrom, 5875.6623);
 * ```
 */
export function lineNamed(name: string): SpectralLine {
  const text = plain(name);
  const found = BY_NAME.get(text) ?? byWavelength(text);
  if (found) return found;
  const nearest = BY_NAME.get(closestString(text, [...BY_NAME.keys()]))!;
  throw new InputError({
    action: "find spectral line",
    rule: "its name must be in the list of lines",
    value: name,
    remedy: `the nearest known name is ${JSON.stringify(nearest.name)}; ` +
      "for another line state its wavelength",
  });
}

/**
 * The lines of the kept list within a range of wavelength.
 *
 * @param low_angstrom Lower end, Å.
 * @param high_angstrom Upper end, Å.
 * @param options Options.
 * @param options.medium Medium of the range.
 * @default medium "air"
 * @returns Lines in order of wavelength.
 *
 * @example
 * ```ts
 * import { linesWithin } from "@millrace/millrace/sky";
 * import { assertEquals } from "@std/assert";
 *
 * const names = linesWithin(4850, 4930).map((line) => line.name);
 * assertEquals(names, ["H beta", "He I 4922", "Fe II 4924"]);
 * ```
 */
export function linesWithin(
  low_angstrom: number,
  high_angstrom: number,
  { medium = "air" }: { medium?: "air" | "vacuum" } = {},
): SpectralLine[] {
  return spectralLines.filter((line) => {
    const at = medium === "air" ? vacuumToAir(line.vacuum_angstrom) : line.vacuum_angstrom;
    return at >= low_angstrom && at <= high_angstrom;
  });
}
