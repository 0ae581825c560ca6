import { join, relative, resolve } from "@std/path";
import { InputError, type Warning } from "../errors.ts";
import { readText, sha256, writeFileAtomically } from "../files/mod.ts";
import { canonicalJson } from "./canonical.ts";
import { type InputDigest, jsonText } from "./output_head.ts";
import { parseTarget, type Target } from "./target.ts";
import { VERSION } from "./version.ts";

/** Name of the file, in every output folder, that says how what is there was made. */
export const PROVENANCE_FILE = "provenance.json";

/** A file as it was written. */
export interface WrittenFile {
  /** Name within the output folder. */
  readonly file: string;
  /** Size, bytes. */
  readonly bytes: number;
  /** SHA-256 of its bytes, hexadecimal. */
  readonly sha256: string;
}

/** Why a step gave nothing. */
export interface StepError {
  /** What kind: the input is wrong, the work failed, or a fault of Millrace. */
  readonly kind: "InputError" | "WorkError" | "NotConverged" | "fault";
  /** The message. */
  readonly message: string;
}

/** One command's work as it was done. */
export interface StepRecord {
  /** The command. */
  readonly command: string;
  /** Whether its files are whole. */
  readonly status: "done" | "failed";
  /** Start, ISO 8601 in UTC; null when no clock was at hand. */
  readonly started: string | null;
  /** End, likewise. */
  readonly ended: string | null;
  /** Files written. */
  readonly files: readonly WrittenFile[];
  /** Warnings given. */
  readonly warnings: readonly Warning[];
  /** Why it failed; null when it did not. */
  readonly error: StepError | null;
}

/** What the outputs of a run depend on, and nothing else: the same again gives the same bytes. */
export interface RunIdentity {
  /** Version of Millrace. */
  readonly version: string;
  /** Name of the target: its file's, without extension. */
  readonly target_name: string;
  /** Text of the target file. */
  readonly target_text: string;
  /** Overrides `section.key=value`, in order. */
  readonly set: readonly string[];
  /** Seed, overrides included. */
  readonly seed: number;
  /** Whether maps were made in spite of a large gap in phase. */
  readonly force: boolean;
  /** SHA-256 of the settings, overrides included. */
  readonly settings_digest: string;
  /** Files read, relative to the target file. */
  readonly inputs: readonly InputDigest[];
}

/** Steps of one identity. */
export interface RunRecord extends RunIdentity {
  /** Digest of the identity. */
  readonly key: string;
  /** Path of the target file from the output folder. */
  readonly target_file: string;
  /** The machine's part, for the case that bytes differ one day. */
  readonly runtime: Runtime;
  /** What was done, one entry a command. */
  readonly steps: readonly StepRecord[];
}

/** What ran the program. */
export interface Runtime {
  /** Version of Deno. */
  readonly deno: string;
  /** Version of V8. */
  readonly v8: string;
  /** Operating system and processor. */
  readonly platform: string;
}

/** `provenance.json`. */
export interface Provenance {
  /** Name and version of the document's keys. */
  readonly schema: "provenance/1";
  /** Version of Millrace that wrote it. */
  readonly version: string;
  /** Runs whose outputs are in the folder, the latest last: usually one. */
  readonly runs: readonly RunRecord[];
}

/** The runtime of this process. */
export function thisRuntime(): Runtime {
  const { deno, v8 } = Deno.version;
  return { deno, v8, platform: `${Deno.build.os} ${Deno.build.arch}` };
}

/**
 * What a target's outputs depend on.
 *
 * @param target The target.
 * @param options What is not in the target itself.
 * @param options.inputs Digests of its files.
 * @param options.force Whether maps are made in spite of a large gap in phase. @default false
 * @returns The identity.
 */
export function runIdentity(
  target: Target,
  options: { inputs: readonly InputDigest[]; force?: boolean },
): RunIdentity {
  const { inputs, force = false } = options;
  return {
    version: VERSION,
    target_name: target.name,
    target_text: target.text,
    set: target.overrides,
    seed: target.settings.seed,
    force,
    settings_digest: target.settings_digest,
    inputs,
  };
}

/** Digest of an identity: equal where outputs are equal. */
export function identityKey(identity: RunIdentity): string {
  return sha256(canonicalJson(identity));
}

/**
 * Reads the provenance of an output folder.
 *
 * @param folder The folder.
 * @returns The document; null when there is none, or what is there is not one.
 */
export async function readProvenance(folder: string): Promise<Provenance | null> {
  try {
    const document = JSON.parse(await Deno.readTextFile(join(folder, PROVENANCE_FILE)));
    return document?.schema === "provenance/1" && Array.isArray(document.runs) ? document : null;
  } catch {
    return null;
  }
}

/**
 * Reads a provenance file that a user named.
 *
 * @param file Its path.
 * @returns The document.
 * @throws {InputError} When it is missing or something else.
 */
export async function readProvenanceFile(file: string): Promise<Provenance> {
  const text = await readText(file, { action: "read provenance" });
  const refuse = (rule: string) =>
    new InputError({
      action: "read provenance",
      rule,
      file,
      remedy: `give a ${PROVENANCE_FILE} from an output folder`,
    });
  let document: Partial<Provenance> | null;
  try {
    document = JSON.parse(text);
  } catch {
    throw refuse("it is not valid JSON");
  }
  if (document?.schema !== "provenance/1" || !Array.isArray(document.runs)) {
    throw refuse('its schema must be "provenance/1"');
  }
  return document as Provenance;
}

/**
 * A provenance with one more step: an earlier record of the same command gives way, whatever run it
 * belonged to, because its files have been replaced.
 *
 * @param provenance What is known; null for nothing.
 * @param run The run that the step belongs to.
 * @param step The step.
 * @returns A new document.
 */
export function withStep(
  provenance: Provenance | null,
  run: Omit<RunRecord, "steps">,
  step: StepRecord,
): Provenance {
  const before = provenance?.runs.find(({ key }) => key === run.key)?.steps ?? [];
  const at = before.findIndex(({ command }) => command === step.command);
  const steps = at < 0 ? [...before, step] : before.with(at, step);
  const others = withoutStep(provenance, step.command).runs.filter(({ key }) => key !== run.key);
  return { schema: "provenance/1", version: VERSION, runs: [...others, { ...run, steps }] };
}

/** A provenance in which a command has no record. */
export function withoutStep(provenance: Provenance | null, command: string): Provenance {
  const runs = (provenance?.runs ?? []).map((run) => ({
    ...run,
    steps: run.steps.filter((step) => step.command !== command),
  }));
  return {
    schema: "provenance/1",
    version: VERSION,
    runs: runs.filter(({ steps }) => steps.length > 0),
  };
}

/** Writes the provenance of an output folder. */
export async function writeProvenance(folder: string, provenance: Provenance): Promise<string> {
  const path = join(folder, PROVENANCE_FILE);
  await writeFileAtomically(path, jsonText(provenance));
  return path;
}

/** Path of a target file as its outputs record it: from their folder. */
export function recordedPath(target: Target, folder: string): string {
  return relative(resolve(folder), resolve(target.file));
}

/**
 * The target of a recorded run: its text as it was, at the place where it was.
 *
 * @param run The run.
 * @param folder Folder of its outputs.
 * @returns The target.
 */
export function recordedTarget(run: RunRecord, folder: string): Target {
  const { target_text, target_file, set, seed } = run;
  return parseTarget(target_text, { file: join(folder, target_file), set, seed });
}
