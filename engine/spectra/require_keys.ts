import { closestString } from "@std/text";
import { InputError } from "../errors.ts";
import { type Facts, plainKey } from "./facts.ts";
import type { RecordedExposure } from "./recorded_exposure.ts";

const TIMES = ["mid", "start", "end"];
const OTHERS = [
  "exposure_s",
  "ra",
  "dec",
  "latitude",
  "longitude",
  "longitude_west",
  "height",
  "resolution",
];

/** The error for a name that nothing bears. */
export function unknownName(role: string, options: {
  /** The name. */
  readonly name: string;
  /** Names that are there. */
  readonly known: readonly string[];
  /** What has no such name, as in "the header or the log". */
  readonly where: string;
  /** The file. */
  readonly file: string;
}): InputError {
  const { name, known, where, file } = options;
  const nearest = known.length === 0
    ? ""
    : `the nearest name there is "${closestString(name, [...known])}"; `;
  return new InputError({
    action: "read exposures",
    rule: `${where} must have what keys.${role} names`,
    value: name,
    file,
    key: `keys.${role}`,
    remedy: `${nearest}exposures that lack it go into [[exposures]] of their own`,
  });
}

function has(facts: Facts, name: string): boolean {
  return facts.names().some((one) => plainKey(one) === plainKey(name));
}

/**
 * Refuses names of header keys or columns that an exposure does not have. Every exposure of a group
 * must have them: another key in their place could mean something else. Of `mid`, `start` and `end`
 * one must have a value.
 *
 * @param recorded The exposure.
 * @param keys Names by what they hold.
 * @throws {InputError} When a name is not there, with the nearest that is, or has no value.
 */
export function requireKeys(
  recorded: RecordedExposure,
  keys: Readonly<Record<string, string>>,
): void {
  const { file, facts, times } = recorded;
  const where = "the header, the row or the log of every exposure";
  const asked = (roles: readonly string[]) =>
    Object.entries(keys).filter(([role]) => roles.includes(role));
  const refuse = (role: string, name: string, among: Facts) => {
    if (!has(among, name)) {
      return unknownName(role, { name, known: among.names(), where, file });
    }
    return new InputError({
      action: "read exposures",
      rule: `what keys.${role} names must have a value for every exposure`,
      value: name,
      file,
      key: `keys.${role}`,
      remedy: "fill it in, or leave the exposure out",
    });
  };
  const named = asked(TIMES);
  const without = named.filter(([, name]) => times.find(name) === undefined);
  for (const [role, name] of without) {
    if (!has(times, name) || without.length === named.length) throw refuse(role, name, times);
  }
  for (const [role, name] of asked(OTHERS)) {
    if (facts.find(name) === undefined) throw refuse(role, name, facts);
  }
}
