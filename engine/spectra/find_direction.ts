import { InputError } from "../errors.ts";
import {
  type Direction,
  directionFromEquinox,
  parseDeclination,
  parseRightAscension,
} from "../sky/mod.ts";
import type { OneDecision } from "./decision.ts";
import { type Fact, type Facts, firstFact } from "./facts.ts";
import { firstRead, unreadNote } from "./first_read.ts";
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

function orNull(read: () => number): number | null {
  try {
    return read();
  } catch (error) {
    if (error instanceof InputError) return null;
    throw error;
  }
}

const inHours = (ra: Fact) =>
  /[:hms\s]/i.test(ra.text.trim()) ||
  /\bhours?\b|\bhr?s?\b/i.test(ra.comment) && !/deg/i.test(ra.comment);

function rightAscension(ra: Fact): number | null {
  const plain = numberOf(ra.text);
  if (plain === null || !inHours(ra)) return orNull(() => parseRightAscension(ra.text));
  return plain >= 0 && plain <= 24 ? 15 * plain : null;
}

/**
 * Finds where the target is. A right ascension written with colons or letters, or whose comment says
 * hours, is in hours; a plain number is in degrees.
 *
 * @param facts The facts of an exposure.
 * @param options A direction known better; names of keys by what they hold: `ra`, `dec`.
 * @returns The direction; null when nothing says.
 * @throws {InputError} When a coordinate is there and cannot be read, with its value and key.
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
  const action = "read direction of target";
  const ra = firstRead(facts, {
    keys: keys["ra"] === undefined ? DIRECTION_KEYS.ra : [keys["ra"]],
    read: rightAscension,
    action,
    rule: "right ascension must be sexagesimal hours, or a number from 0 to 360 degrees",
  });
  const dec = firstRead(facts, {
    keys: keys["dec"] === undefined ? DIRECTION_KEYS.dec : [keys["dec"]],
    read: (fact) => orNull(() => parseDeclination(fact.text)),
    action,
    rule: "declination must be sexagesimal, or a number from -90 to 90 degrees",
  });
  if (ra === null || dec === null) return null;
  const direction: Direction = { ra_deg: ra.value, dec_deg: dec.value };
  const unit = inHours(ra.fact) ? "hours" : "degrees";
  const from = `${ra.fact.key} (${unit}), ${dec.fact.key}${
    unreadNote([...ra.unread, ...dec.unread])
  }`;
  const equinox = firstFact(facts, ["EQUINOX", "EPOCH"]);
  if (equinox === undefined) return say(direction, from);
  const year = numberOf(equinox.text.replace(/^[BJ]/i, ""));
  const told = `${equinox.key} = ${equinox.text}`;
  // An EPOCH of 0 is one that was never filled in.
  if (year === null || !(year >= 1800 && year <= 2200)) {
    return say(direction, `${from} (${told} is no equinox: taken as 2000)`, true);
  }
  if (Math.abs(year - 2000) < 0.1) return say(direction, from);
  return say(directionFromEquinox(direction, year), `${from}, ${told}`);
}
