import { InputError, type Warning } from "../errors.ts";
import { readBytes, readText } from "../files/mod.ts";
import { parseFits } from "../fits/mod.ts";
import type { Direction } from "../sky/mod.ts";
import type { Progress } from "../workers/mod.ts";
import { addUpDecisions, type Decision, type OneDecision } from "./decision.ts";
import { estimateErrors } from "./estimate_errors.ts";
import { fluxHdu } from "./flux_image.ts";
import { pointedElsewhere } from "./pointing.ts";
import { readImage } from "./read_image.ts";
import type { ReadExposuresOptions, SpectraLayout } from "./read_options.ts";
import { isStack, readStack } from "./read_stack.ts";
import { COLUMN_ROLES, readTable, spectrumTable } from "./read_table.ts";
import { readLog } from "./read_log.ts";
import { readText1d } from "./read_text.ts";
import type { RecordedExposure } from "./recorded_exposure.ts";
import { type SettledExposure, settleExposure } from "./settle_exposure.ts";
import type { Spectrum } from "./spectrum.ts";

/** What was read. */
export interface ExposuresRead {
  /** One spectrum an exposure, in the order of the files. */
  readonly spectra: readonly Spectrum[];
  /** Where the target is, as the options or the first file that knows says; null when none does. */
  readonly target: Direction | null;
  /** What was decided, from which key. */
  readonly decisions: readonly Decision[];
  /** What a user should know. */
  readonly warnings: readonly Warning[];
}

const FITS_START = new TextEncoder().encode("SIMPLE  =");

function isFits(bytes: Uint8Array): boolean {
  return FITS_START.every((byte, i) => bytes[i] === byte);
}

// A file that is neither text nor starts as FITS must be told as what it is: no FITS.
function isText(bytes: Uint8Array): boolean {
  return !bytes.subarray(0, 4096).includes(0);
}

// A name that a layout has no use for would be passed over unseen.
function refuseMeaningless(
  keys: Readonly<Record<string, string>>,
  roles: readonly string[],
  options: { readonly file: string; readonly layout: SpectraLayout },
): void {
  const { file, layout } = options;
  const role = roles.find((one) => keys[one] !== undefined);
  if (role === undefined) return;
  throw new InputError({
    action: "read exposures",
    rule: role === "aperture"
      ? `keys.aperture is the row of an image with several objects, and the layout here is ${layout}`
      : `keys.${role} names a column of a FITS table, and the layout here is ${layout}`,
    value: keys[role],
    file,
    key: `keys.${role}`,
    remedy: "leave it out, or state layout",
  });
}

/** Options of {@linkcode recordedIn}. */
export interface RecordedInOptions extends Pick<ReadExposuresOptions, "layout" | "keys"> {
  /** Log of text spectra. */
  readonly log?: ReturnType<typeof readLog>;
}

/**
 * Reads the exposures that one file's bytes hold.
 *
 * @param bytes The file's bytes, decompressed.
 * @param options The file's name for messages, its layout, names of keys, the log.
 * @returns What is recorded, and the layout that was used.
 * @throws {InputError} When the bytes are not of the layout, or damaged.
 *
 * @example
 * ```ts
 * import { recordedIn } from "@millrace/millrace/spectra";
 * import { assertEquals } from "@std/assert";
 *
 * const bytes = new TextEncoder().encode("5000 1\n5001 2\n");
 * assertEquals(recordedIn(bytes, { file: "a.txt" }).layout, "text");
 * ```
 */
export function recordedIn(
  bytes: Uint8Array,
  options: RecordedInOptions & { readonly file: string },
): { readonly recorded: readonly RecordedExposure[]; readonly layout: SpectraLayout } {
  const { file, layout = "auto", keys = {}, log } = options;
  const text = layout === "text" ||
    layout === "auto" && !isFits(bytes) && isText(bytes) && !/\.fits?(\.gz)?$/i.test(file);
  if (text) {
    refuseMeaningless(keys, [...COLUMN_ROLES, "aperture"], { file, layout: "text" });
    const content = new TextDecoder().decode(bytes);
    const facts = log?.factsOf(file);
    return {
      recorded: [readText1d(content, { file, ...(facts === undefined ? {} : { log: facts }) })],
      layout: "text",
    };
  }
  const fits = parseFits(bytes, { file });
  const given = layout === "auto" ? null : layout;
  const table = spectrumTable(fits, { keys });
  const image = fluxHdu(fits);
  const chosen = given ??
    (table !== undefined && (image === undefined || image.shape.length > 2)
      ? "table"
      : image === undefined
      ? "table"
      : isStack(fits, { keys })
      ? "stack"
      : "image");
  if (chosen !== "table") refuseMeaningless(keys, COLUMN_ROLES, { file, layout: chosen });
  if (chosen !== "image") refuseMeaningless(keys, ["aperture"], { file, layout: chosen });
  const read = { image: readImage, stack: readStack, table: readTable, text: readImage }[chosen];
  return { recorded: read(fits, { keys }), layout: chosen };
}

// Errors of those that came without: estimated together, as one set-up has one gain.
function withErrors(settled: readonly SettledExposure[], group: number) {
  const bare = settled.filter((s) => !s.spectrum.errors_given);
  if (bare.length === 0) return { spectra: settled.map((s) => s.spectrum), decision: null };
  const estimated = estimateErrors(bare.map((s) => s.spectrum.flux));
  const spectra = settled.map(({ spectrum }) => {
    if (spectrum.errors_given) return spectrum;
    const at = bare.findIndex((s) => s.spectrum === spectrum);
    const error = estimated?.error[at] ?? spectrum.flux.map(() => Infinity);
    return { ...spectrum, error };
  });
  const decision: Decision | null = estimated === null ? null : {
    group,
    what: "errors",
    value: `variance ${estimated.floor.toPrecision(3)} + ${
      estimated.growth.toPrecision(3)
    } x flux; neighbouring pixels correlate by ${
      estimated.lag_correlation[0].toFixed(2)
    }, the next ones by ${estimated.lag_correlation[1].toFixed(2)}`,
    from: "the files give none: estimated from the scatter of the pixels",
    assumed: true,
    exposures: bare.length,
    source: bare[0]!.spectrum.source,
  };
  return { spectra, decision };
}

/**
 * Reads exposures of one group from files: FITS images, stacks and tables, or text with a log. What
 * the files leave open is decided by the customs of the trade, and every decision is recorded with
 * the key it came from.
 *
 * @param paths Files, plain names.
 * @param options Layout, names of keys, and what the files do not say or say wrongly.
 * @returns Spectra on vacuum barycentric wavelengths and BJD(TDB), decisions and warnings.
 * @throws {InputError} When a file is missing, damaged or foreign, or something needed is missing:
 * the message lists what was tried.
 *
 * @example
 * ```ts
 * import { readExposures } from "@millrace/millrace/spectra";
 * import { assertEquals } from "@std/assert";
 *
 * const folder = await Deno.makeTempDir();
 * await Deno.writeTextFile(`${folder}/a.txt`, "5000 1 0.1\n5001 2 0.1\n");
 * await Deno.writeTextFile(`${folder}/log.csv`, "file,mid_bjd_tdb,exposure_s\na.txt,2460311.5,60\n");
 * const { spectra } = await readExposures([`${folder}/a.txt`], {
 *   log: `${folder}/log.csv`,
 *   wavelength_medium: "vacuum",
 *   wavelength_frame: "barycentric",
 * });
 * assertEquals(spectra[0]!.mid, [2460311, 0.5]);
 * ```
 */
export async function readExposures(
  paths: readonly string[],
  options: ReadExposuresOptions & {
    /** Receives progress, a file at a time. */
    readonly progress?: Progress;
  } = {},
): Promise<ExposuresRead> {
  const { group = 0, progress, log: logPath } = options;
  const log = logPath === undefined ? undefined : readLog(
    await readText(logPath, { action: "read log of spectra" }),
    { file: logPath, ...(options.keys === undefined ? {} : { keys: options.keys }) },
  );
  if (log === undefined && options.keys?.["file"] !== undefined) {
    throw new InputError({
      action: "read exposures",
      rule: "keys.file names a column of the log, and there is no log",
      value: options.keys["file"],
      key: "keys.file",
      remedy: "state log, or leave it out",
    });
  }
  const settled: SettledExposure[] = [];
  const decided: { group: number; source: string; decisions: readonly OneDecision[] }[] = [];
  const warnings = new Map<string, Warning>();
  for (const [index, path] of paths.entries()) {
    const bytes = await readBytes(path, { action: "read spectrum" });
    const { recorded, layout } = recordedIn(bytes, { ...options, file: path, log });
    const from = (options.layout ?? "auto") === "auto" ? "content of the file" : "layout";
    for (const one of recorded) {
      const exposure = settleExposure(one, options);
      settled.push(exposure);
      const decisions = [
        { what: "layout", value: layout, from, assumed: false },
        ...exposure.decisions,
      ];
      decided.push({ group, source: one.source, decisions });
      for (const warning of exposure.warnings) warnings.set(warning.code, warning);
    }
    progress?.(index + 1, paths.length, "exposures");
  }
  if (settled.length === 0) {
    throw new InputError({
      action: "read exposures",
      rule: "there must be at least one file",
      value: 0,
    });
  }
  const unused = log?.unused() ?? [];
  if (unused.length > 0) {
    warnings.set("log-rows-unused", {
      code: "log-rows-unused",
      text: `rows of the log name files that were not read: ${unused.slice(0, 5).join(", ")}${
        unused.length > 5 ? ` and ${unused.length - 5} more` : ""
      }`,
    });
  }
  const elsewhere = pointedElsewhere(
    settled.map(({ spectrum, target }) => ({ source: spectrum.source, target })),
  );
  if (elsewhere !== null) warnings.set(elsewhere.code, elsewhere);
  const { spectra, decision } = withErrors(settled, group);
  return {
    spectra,
    target: settled.find((exposure) => exposure.target !== null)?.target ?? null,
    decisions: [...addUpDecisions(decided), ...(decision === null ? [] : [decision])],
    warnings: [...warnings.values()],
  };
}
