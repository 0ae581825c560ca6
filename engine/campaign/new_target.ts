import { basename, join, relative } from "@std/path";
import { InputError, type Warning } from "../errors.ts";
import { expandGlob, readBytes, writeFileAtomically } from "../files/mod.ts";
import { lineNamed } from "../sky/mod.ts";
import { type ExposuresRead, readExposures, recordedIn } from "../spectra/mod.ts";
import { withoutResults } from "./exposure_files.ts";

const SPECTRA = "*.{fits,fit,fts,fits.gz,fit.gz,txt,dat,ascii,asc}";

/** Lines that show gas in accreting binaries, the first covered ones of which a new file names. */
const USUAL = [
  { name: "H alpha", continuum: [[-6000, -3500], [2700, 4200]] },
  { name: "H beta", continuum: [[-6000, -3000], [5800, 7800]] },
  { name: "He II 4686", continuum: [[-9000, -6000], [3000, 6000]] },
  { name: "H gamma", continuum: [[-6000, -3000], [3000, 6000]] },
  { name: "He I 5876", continuum: [[-6000, -3000], [3000, 6000]] },
] as const;

/** What was found in a folder of spectra, and the target file begun from it. */
export interface NewTarget {
  /** Path of the target file written. */
  readonly file: string;
  /** Folders with spectra, relative to the target file, with the number of files in each. */
  readonly groups: readonly { readonly pattern: string; readonly files: number }[];
  /** What the first file of each folder told. */
  readonly read: readonly (ExposuresRead | null)[];
  /** Lines that the first file covers. */
  readonly lines: readonly string[];
  /** What a user should know. */
  readonly warnings: readonly Warning[];
}

/**
 * Starts a commented target file from the spectra found in a folder and its folders, one level
 * down. What the headers say is left to "auto"; what only the observer knows is asked for in
 * comments.
 *
 * @param folder The folder.
 * @param options How to write.
 * @param options.overwrite Whether an existing target file may be replaced. @default false
 * @returns What was found and written.
 * @throws {InputError} When the folder holds no spectra, or a target file exists.
 */
export async function newTarget(
  folder: string,
  options: { overwrite?: boolean } = {},
): Promise<NewTarget> {
  const { overwrite = false } = options;
  const action = "start a target file";
  const file = join(folder, "target.toml");
  // A target file holds the observer's own work: it is never replaced unasked.
  if (!overwrite && await exists(file)) {
    throw new InputError({
      action,
      rule: "the folder must not have one already",
      file,
      remedy: "edit that one, or give --overwrite",
    });
  }
  if (!await exists(folder)) {
    throw new InputError({ action, rule: "the folder must exist", value: folder });
  }
  const groups = await groupsIn(folder);
  if (groups.length === 0) {
    throw new InputError({
      action,
      rule: `the folder must hold spectra (${SPECTRA}), itself or one level down`,
      value: folder,
    });
  }
  const ranges: (WavelengthRange | null)[] = [];
  const read: (ExposuresRead | null)[] = [];
  const warnings: Warning[] = [];
  for (const { pattern, paths } of groups) {
    ranges.push(await rangeOf(paths[0]!));
    try {
      const log = await logOf(folder, pattern);
      read.push(await readExposures(paths.slice(0, 1), log === null ? {} : { log }));
    } catch (error) {
      if (!(error instanceof InputError)) throw error;
      read.push(null);
      warnings.push({ code: "not-read-yet", text: `${pattern}: ${error.message}` });
    }
  }
  const covered = USUAL.filter(({ name }) => ranges.some((range) => covers(range, name)));
  const text = targetText({
    title: basename(folder),
    groups: await Promise.all(groups.map(async ({ pattern, paths }, i) => ({
      pattern,
      paths,
      read: read[i]!,
      range: ranges[i]!,
      log: await logOf(folder, pattern) !== null,
    }))),
    covered,
  });
  await writeFileAtomically(file, text, { overwrite });
  return {
    file,
    groups: groups.map(({ pattern, paths }) => ({ pattern, files: paths.length })),
    read,
    lines: covered.map(({ name }) => name),
    warnings,
  };
}

async function exists(path: string): Promise<boolean> {
  try {
    await Deno.stat(path);
    return true;
  } catch {
    return false;
  }
}

/** Name of the log that belongs to a group of text spectra: in their own folder. */
function logName(pattern: string): string {
  return pattern.includes("/") ? `${pattern.split("/")[0]}/log.csv` : "log.csv";
}

async function logOf(folder: string, pattern: string): Promise<string | null> {
  const log = join(folder, logName(pattern));
  return /\.(fits|fit|fts)(\.gz)?$/.test(pattern) || !await exists(log) ? null : log;
}

async function groupsIn(folder: string): Promise<{ pattern: string; paths: string[] }[]> {
  const found: string[] = [];
  for (const pattern of [SPECTRA, `*/${SPECTRA}`]) {
    try {
      found.push(...await expandGlob(pattern, { base: folder }));
    } catch (error) {
      if (!(error instanceof InputError)) throw error;
    }
  }
  const spectra = await withoutResults(found);
  const groups = Map.groupBy(spectra, (path) => {
    const name = relative(folder, path);
    const extension = /\.(fits|fit|fts|txt|dat|ascii|asc)(\.gz)?$/.exec(name)![0];
    const inner = name.includes("/") ? `${name.split("/")[0]}/` : "";
    return `${inner}*${extension}`;
  });
  return [...groups].map(([pattern, paths]) => ({ pattern, paths: paths.sort() }))
    .sort((a, b) => (a.pattern < b.pattern ? -1 : 1));
}

/** First and last wavelength of a file as recorded, Å. */
type WavelengthRange = readonly [number, number];

/** What a file covers can be told even where its times cannot be settled yet. */
async function rangeOf(file: string): Promise<WavelengthRange | null> {
  try {
    const { recorded } = recordedIn(await readBytes(file), { file });
    const waves = recorded[0]!.axis.wavelength_angstrom;
    const ends = [waves[0]!, waves[waves.length - 1]!] as const;
    return [Math.min(...ends), Math.max(...ends)];
  } catch (error) {
    if (error instanceof InputError) return null;
    throw error;
  }
}

function covers(range: WavelengthRange | null, name: string): boolean {
  if (range === null) return false;
  const rest = lineNamed(name).air_angstrom;
  return range[0] < rest * 0.99 && range[1] > rest * 1.01;
}

function targetText(found: {
  title: string;
  groups: readonly {
    pattern: string;
    paths: readonly string[];
    read: ExposuresRead | null;
    range: WavelengthRange | null;
    log: boolean;
  }[];
  covered: readonly (typeof USUAL)[number][];
}): string {
  const { title, groups, covered } = found;
  const lacks = (what: string) =>
    groups.some(({ read }) => read === null) ||
    !groups.every(({ read }) => read!.decisions.some((decision) => decision.what === what));
  const exposures = groups.map(({ pattern, paths, read, range: covered, log: hasLog }) => {
    const spectrum = read?.spectra[0];
    const range = covered === null
      ? "could not be read yet: see what `check` says"
      : `${paths.length} file${paths.length === 1 ? "" : "s"}, ${covered[0].toFixed(0)} to ${
        covered[1].toFixed(0)
      } Å`;
    const resolution = spectrum === undefined || spectrum.resolution_angstrom === null
      ? "# resolution_angstrom = 1.0        # full width at half maximum of an arc line: please fill in"
      : "# the headers state the resolution";
    const text = !/\.(fits|fit|fts)(\.gz)?$/.test(pattern);
    const name = JSON.stringify(logName(pattern));
    const log = !text
      ? ""
      : `${hasLog ? "" : "# "}log = ${name}                    # columns file, mid, exposure_s\n`;
    return `[[exposures]]                       # ${range}\nfiles = [${
      JSON.stringify(pattern)
    }]\n${log}${resolution}\n`;
  });
  const lines = (covered.length === 0 ? [USUAL[1]] : covered).map(({ name, continuum }, i) => {
    const table = [
      "[[lines]]",
      `name = ${JSON.stringify(name)}`,
      "reach_kms = 2500",
      `continuum_kms = ${JSON.stringify(continuum)}   # see what check finds in them`,
    ];
    return `${table.map((row) => (i === 0 ? row : `# ${row}`)).join("\n")}\n`;
  });
  return `# Target file, started from the spectra in this folder. Keys that are commented out are optional or
# wait for you. Everything that the headers say is found by itself; \`millrace check\` tells what it found.

format = 1
title = ${JSON.stringify(title)}

[orbit]
# period_d = 0.1                    # please fill in
# period_error_d = 0.0000001
# zero_bjd_tdb = 2460000.0          # donor at inferior conjunction; or zero_hjd_utc, zero_hjd_tt
# zero_error_d = 0.0001
# zero_marks = "donor-conjunction"  # mid-eclipse, emission-crossing: what the zero really is
# systemic_kms = 0.0

[binary]                            # for the marks on the map: any two that fix K1 and K2
# k_donor_kms = 300.0
# mass_ratio = 0.2

${exposures.join("\n")}
[sky]                               # only where the headers lack it${
    lacks("target") ? "\n# ra_deg = 0.0\n# dec_deg = 0.0" : ""
  }${
    lacks("site")
      ? "\n# site = { latitude_deg = 0.0, longitude_east_deg = 0.0, height_m = 0.0 }"
      : ""
  }

${lines.join("\n")}
[map]
half_width_kms = 2000
# method = "entropy"                # or total-variation: fitted to the noise; default back-projection
# resamples = 50                    # for errors and significance
# sensitivity = true                # of a fitted map: maps at χ² 5 % lower and higher, too
# systemic_scan = true              # γ searched with maps
`;
}
