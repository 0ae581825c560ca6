import { InputError } from "../errors.ts";
import type { Target } from "./target.ts";

/**
 * Says where in the target file an error is: its file, and the line of its key or of the nearest table
 * that the key stands in, or the override that set it. An error that names another file is left as it is.
 *
 * @param target The target.
 * @param error What was thrown.
 * @returns The error to throw on.
 */
export function inFile(target: Target, error: unknown): unknown {
  if (!(error instanceof InputError) || error.file !== undefined) return error;
  const { key } = error;
  if (key !== undefined && target.overrides.some((set) => set.startsWith(`${key}=`))) {
    return error.at({ file: "--set" });
  }
  return error.at({ file: target.file, ...lineOf(target, error.key ?? "") });
}

function lineOf(target: Target, key: string): { line: number } | undefined {
  for (let part = key; part !== ""; part = part.replace(/(\.|\[)?[^.[]*$/, "")) {
    const place = target.places.get(part);
    if (place !== undefined) return { line: place.line };
  }
  return undefined;
}
