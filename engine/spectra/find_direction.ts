import { InputError } from "../errors.ts";
import {
  type Direction,
  directionFromEquinox,
  parseDeclination,
  parseRightAscension,
} from "../sky/mod.ts";
import type { OneDecision } from "./decision.ts";
import { type Facts, firstFact } from "./facts.ts";
import { numberOf } from "./number_text.ts";

/** Keys looked up for a direction. */
export const DIRECTION_KEYS = {
  ra: [
    "RA",
    "RA_TARG",
    "RA_OBJ",
    "OBJRA",
    "OBJCTRA",
    "TARG_RA",
    "RA-TARG",
    "CAT-RA",
    "RA_DEG",
    "TELRA",
    "RA-TEL",
  ],
  dec: [
    "DEC",
    "DEC_TARG",
    "DEC_OBJ",
    "OBJDEC",
    "OBJCTDEC",
    "TARG_DEC",
    "DEC-TARG",
    "CAT-DEC",
    "DEC_DEG",
    "TELDEC",
    "DEC-TEL",
  ],
} as const;

/** A direction and how it was found. */
export interface FoundDirection {
  /** The direction. */
  readonly target: Direction;
  /** What was decided. */
  readonly decision: OneDecision;
}

/**
 * Finds where the target is. A right ascension written with colons or letters, or whose comment says
 * hours, is in hours; a plain number is in degrees.
 *
 * @param facts The facts of an exposure.
 * @param options A direction known better; names of keys by what they hold: `ra`, `dec`.
 * @returns The direction; null when it cannot be had.
 *
 * @example
 * ```ts
 * import { findDirection, namedFacts } from "@millrace/millrace/spectra";
 * import { assertEquals } from "@std/assert";
 *
 * const found = findDirection(namedFacts([["RA", "05:30:00"], ["DEC", "-12:30:00"]]));
 * assertEquals(found?.target, { ra_deg: 82.5, dec_deg: -12.5 });
 * ```
 */
export function findDirection(
  facts: Facts,
  options: {
    readonly target?: Direction | undefined;
    readonly keys?: Readonly<Record<string, string>>;
  } = {},
): FoundDirection | null {
  const { target, keys = {} } = options;
  const say = (direction: Direction, from: string, assumed = false): FoundDirection => ({
    target: direction,
    decision: {
      what: "target",
      value: `${direction.ra_deg.toFixed(4)} deg, ${direction.dec_deg.toFixed(4)} deg`,
      from,
      assumed,
    },
  });
  if (target !== undefined) return say(target, "sky.ra_deg, sky.dec_deg of the target file");
  const ra = firstFact(facts, keys["ra"] === undefined ? DIRECTION_KEYS.ra : [keys["ra"]]);
  const dec = firstFact(facts, keys["dec"] === undefined ? DIRECTION_KEYS.dec : [keys["dec"]]);
  if (ra === undefined || dec === undefined) return null;
  const inHours = /[:hms\s]/i.test(ra.text.trim()) ||
    /\bhours?\b|\bhr?s?\b/i.test(ra.comment) && !/deg/i.test(ra.comment);
  const plain = numberOf(ra.text);
  const read = (): Direction => ({
    ra_deg: plain !== null && inHours ? 15 * plain : parseRightAscension(ra.text),
    dec_deg: parseDeclination(dec.text),
  });
  let direction: Direction;
  try {
    direction = read();
  } catch (error) {
    if (error instanceof InputError) return null;
    throw error;
  }
  if (direction.ra_deg > 360) return null;
  const from = `${ra.key} (${inHours ? "hours" : "degrees"}), ${dec.key}`;
  const equinox = firstFact(facts, ["EQUINOX", "EPOCH"]);
  const year = equinox === undefined ? null : numberOf(equinox.text.replace(/^[BJ]/i, ""));
  if (year === null || Math.abs(year - 2000) < 0.1 || !(year >= 1800 && year <= 2200)) {
    return say(direction, from);
  }
  return say(directionFromEquinox(direction, year), `${from}, ${equinox!.key} = ${equinox!.text}`);
}
