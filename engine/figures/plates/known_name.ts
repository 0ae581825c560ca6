import { closestString } from "@std/text";
import { InputError } from "../../errors.ts";

/**
 * Refuses a name that is not among the known ones, and says which is nearest.
 *
 * @param name The name.
 * @param options What it names.
 * @throws {InputError} When it is not known.
 *
 * @example
 * ```ts
 * import { checkName } from "@millrace/millrace/figures";
 * import { assertThrows } from "@std/assert";
 *
 * assertThrows(
 *   () => checkName("mapp", { what: "a panel", known: ["map", "trail"], key: "plate.rows[0]" }),
 *   Error,
 *   'a panel must be one of map, trail: current value is "mapp" (key plate.rows[0]); the nearest is "map"',
 * );
 * ```
 */
export function checkName(
  name: string,
  options: {
    /** What it names, as in "a panel". */
    readonly what: string;
    /** The known names. */
    readonly known: readonly string[];
    /** Key under which it stands. */
    readonly key: string;
  },
): void {
  const { what, known, key } = options;
  if (known.includes(name)) return;
  throw new InputError({
    action: "lay out plate",
    rule: `${what} must be one of ${known.join(", ")}`,
    value: name,
    key,
    remedy: `the nearest is "${closestString(name, known)}"`,
  });
}
