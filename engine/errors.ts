/**
 * The errors and warnings of Millrace: what was being done, the rule, the value with its unit, the
 * place, and what to do next.
 *
 * @module
 */

/** The parts of an {@linkcode InputError}, from which its message is made. */
export interface InputErrorParts {
  /** What was being done, as in "read spectrum". */
  readonly action: string;
  /** The rule that the input breaks, as in "exposure time must be positive". */
  readonly rule: string;
  /** The offending value, as the user wrote it. */
  readonly value?: unknown;
  /** Unit of `value`. */
  readonly unit?: string;
  /** File in which the value stands. */
  readonly file?: string;
  /** Line in `file`, from 1. */
  readonly line?: number;
  /** Column in `line`, from 1. */
  readonly column?: number;
  /** Key of the target file, header or table column. */
  readonly key?: string;
  /** What the user can do next. */
  readonly remedy?: string;
}

/** The parts of a {@linkcode WorkError}, from which its message is made. */
export interface WorkErrorParts {
  /** What was being done. */
  readonly action: string;
  /** Why it failed. */
  readonly reason: string;
  /** File concerned. */
  readonly file?: string;
  /** What the user can do next. */
  readonly remedy?: string;
}

/** Something usable but worth knowing; every JSON output lists its own. */
export interface Warning {
  /** Short stable name, lower-case with hyphens, as in "period-error-missing". */
  readonly code: string;
  /** One sentence for a person. */
  readonly text: string;
  /** Name of the spectral line concerned. */
  readonly line?: string;
}

function show(value: unknown): string {
  if (typeof value === "string") return JSON.stringify(value);
  if (typeof value === "number" || typeof value === "bigint") return String(value);
  return JSON.stringify(value) ?? String(value);
}

function place(parts: { file?: string; line?: number; column?: number; key?: string }): string {
  const at = [parts.file, parts.line, parts.column].filter((part) => part !== undefined).join(":");
  const key = parts.key === undefined ? "" : `key ${parts.key}`;
  const text = [at, key].filter((part) => part !== "").join(", ");
  return text === "" ? "" : ` (${text})`;
}

/**
 * The input or the call is wrong: the user can mend it. The command line exits with status 2.
 *
 * @example The message holds action, rule, value with unit, place and remedy
 * ```ts
 * import { InputError } from "@millrace/millrace/errors";
 * import { assertEquals } from "@std/assert";
 *
 * const error = new InputError({
 *   action: "read target file",
 *   rule: "period must be positive",
 *   value: -0.1,
 *   unit: "d",
 *   file: "star.toml",
 *   line: 4,
 *   key: "orbit.period_d",
 * });
 * assertEquals(
 *   error.message,
 *   "Cannot read target file as period must be positive: current value is -0.1 d (star.toml:4, key orbit.period_d)",
 * );
 * ```
 */
export class InputError extends Error {
  /** The class name, for messages and structured clones. */
  override readonly name = "InputError";
  /** What was being done. */
  readonly action: string;
  /** The rule that the input breaks. */
  readonly rule: string;
  /** The offending value. */
  readonly value?: unknown;
  /** Unit of the value. */
  readonly unit?: string;
  /** File in which the value stands. */
  readonly file?: string;
  /** Line in the file, from 1. */
  readonly line?: number;
  /** Column in the line, from 1. */
  readonly column?: number;
  /** Key of the target file, header or table column. */
  readonly key?: string;
  /** What the user can do next. */
  readonly remedy?: string;

  /**
   * Makes the error and its message.
   *
   * @param parts What was being done, the rule, the value and where it stands.
   */
  constructor(parts: InputErrorParts) {
    const unit = parts.unit === undefined ? "" : ` ${parts.unit}`;
    const value = "value" in parts ? `: current value is ${show(parts.value)}${unit}` : "";
    const remedy = parts.remedy === undefined ? "" : `; ${parts.remedy}`;
    super(`Cannot ${parts.action} as ${parts.rule}${value}${place(parts)}${remedy}`);
    this.action = parts.action;
    this.rule = parts.rule;
    this.value = parts.value;
    this.unit = parts.unit;
    this.file = parts.file;
    this.line = parts.line;
    this.column = parts.column;
    this.key = parts.key;
    this.remedy = parts.remedy;
  }

  /**
   * The same error with more of its place known: a caller adds the file or key that the thrower
   * could not know. Parts already known stand.
   *
   * @param parts The parts to add.
   * @returns A new error.
   */
  at(parts: Partial<InputErrorParts>): InputError {
    const known = Object.fromEntries(
      Object.entries(this).filter(([key, value]) => value !== undefined && key !== "name"),
    );
    return new InputError({ ...parts, ...known } as InputErrorParts);
  }
}

/**
 * The input was right and the work failed: disc full, output not writable, an interrupted helper.
 * The command line exits with status 1.
 *
 * @example
 * ```ts
 * import { WorkError } from "@millrace/millrace/errors";
 * import { assertEquals } from "@std/assert";
 *
 * const error = new WorkError({ action: "write map.fits", reason: "the disc is full" });
 * assertEquals(error.message, "Cannot write map.fits: the disc is full");
 * ```
 */
export class WorkError extends Error {
  /** The class name, for messages and structured clones. */
  override readonly name = "WorkError";
  /** What was being done. */
  readonly action: string;
  /** Why it failed. */
  readonly reason: string;
  /** File concerned. */
  readonly file?: string;
  /** What the user can do next. */
  readonly remedy?: string;

  /**
   * Makes the error and its message.
   *
   * @param parts What was being done and why it failed.
   */
  constructor(parts: WorkErrorParts) {
    const remedy = parts.remedy === undefined ? "" : `; ${parts.remedy}`;
    super(`Cannot ${parts.action}: ${parts.reason}${place(parts)}${remedy}`);
    this.action = parts.action;
    this.reason = parts.reason;
    this.file = parts.file;
    this.remedy = parts.remedy;
  }
}

/**
 * An iteration ended without meeting its goal. It carries what was reached, so that a caller can
 * show or save it. The command line exits with status 1.
 *
 * @typeParam T Type of the partial result.
 *
 * @example
 * ```ts
 * import { NotConverged } from "@millrace/millrace/errors";
 * import { assertEquals } from "@std/assert";
 *
 * const error = new NotConverged("Cannot fit map: reduced chi-square stalled at 1.4", { iterations: 200 });
 * assertEquals(error.partial.iterations, 200);
 * ```
 */
export class NotConverged<T> extends Error {
  /** The class name, for messages and structured clones. */
  override readonly name = "NotConverged";
  /** The result when the iteration ended. */
  readonly partial: T;

  /**
   * Makes the error.
   *
   * @param message What was being done, what was reached, and advice.
   * @param partial The result when the iteration ended.
   */
  constructor(message: string, partial: T) {
    super(message);
    this.partial = partial;
  }
}
