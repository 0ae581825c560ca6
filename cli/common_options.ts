import { Command, InvalidArgumentError } from "@commander-js/extra-typings";
import { InputError } from "../engine/errors.ts";

/** Options that every command takes. */
export type CommonOptions = ReturnType<ReturnType<typeof commandWith>["opts"]>;

/** A subcommand with the options that every command takes. */
export function commandWith(name: string, summary: string) {
  return new Command(name)
    .description(summary)
    .option("--out <dir>", "output folder (default: named after the target file, beside it)")
    .option("--json", "one JSON document on standard output")
    .option("--quiet", "no progress, no warnings")
    .option("--overwrite", "replace files that Millrace did not write")
    .option("--seed <n>", "seed of everything with chance in it", wholeNumber)
    .option("--workers <n>", "number of workers", positiveWholeNumber)
    .option(
      "--set <section.key=value>",
      "override one setting (repeatable)",
      (value: string, before: string[] | undefined) => [...before ?? [], value],
    );
}

/**
 * Refuses options that every command takes and that one has no use for: what would have no effect is
 * not passed over in silence.
 *
 * @param options The options of the call.
 * @param refused What is done instead, by option, and the command's action.
 */
export function refuseOptions(
  options: CommonOptions,
  refused: { readonly action: string } & Partial<Record<RefusableOption, string>>,
): void {
  const { action, ...reasons } = refused;
  for (const [name, reason] of Object.entries(reasons)) {
    const given = options[name as RefusableOption];
    const value = Array.isArray(given) ? given[0] : given;
    if (value === undefined) continue;
    const rule = `${reason}, so --${name} has no meaning`;
    throw new InputError({ action, rule, value, remedy: "leave it out" });
  }
}

/** Options with a value that a command may have no use for. */
type RefusableOption = "out" | "set" | "seed" | "workers";

/** Reads a whole number, zero or above. */
export function wholeNumber(text: string): number {
  if (!/^\d+$/.test(text)) throw new InvalidArgumentError("It must be a whole number.");
  return Number(text);
}

/** Reads a whole number above zero. */
export function positiveWholeNumber(text: string): number {
  if (!/^\d+$/.test(text) || Number(text) < 1) {
    throw new InvalidArgumentError("It must be a whole number above zero.");
  }
  return Number(text);
}

/** Reads a number. */
export function decimalNumber(text: string): number {
  if (text.trim() === "" || !Number.isFinite(Number(text))) {
    throw new InvalidArgumentError("It must be a number.");
  }
  return Number(text);
}
