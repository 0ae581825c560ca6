import { closestString } from "@std/text";
import { InputError } from "../errors.ts";
import type { Model } from "./model.ts";
import {
  type CompleteModel,
  modelParameters,
  type ModelSection,
  partNames,
} from "./model_parameters.ts";

type Section = Record<string, unknown>;

const WORDS: Readonly<Record<string, readonly unknown[]>> = {
  "disc.optical_depth": ["thin", "thick"],
  "donor.light": ["irradiated", "photospheric"],
  "eclipse.enabled": [false, true],
};

const SECTIONS: readonly ModelSection[] = [...partNames, "eclipse"];

/**
 * The model with every option present: those that were left out take their defaults. Radii that
 * follow from others (null) stay null.
 *
 * @param model The model.
 * @returns A new, complete model.
 * @throws {InputError} When a part, section or key is unknown, or a value is of the wrong type or
 * outside its range; the key is named as in the target file.
 *
 * @example
 * ```ts
 * import { completeModel } from "@millrace/millrace/synthesis";
 * import { assertEquals } from "@std/assert";
 *
 * const model = completeModel({ parts: ["disc"], disc: { outer_radius_over_a: 0.4 } });
 * assertEquals(model.disc.outer_radius_over_a, 0.4);
 * assertEquals(model.disc.emissivity_index, 1.5);
 * ```
 */
export function completeModel(model: Model): CompleteModel {
  for (const part of model.parts) {
    if (partNames.includes(part)) continue;
    refuse("model.parts", part, {
      rule: `a part must be one of ${partNames.join(", ")}`,
      remedy: nearest(part, partNames),
    });
  }
  for (const [key, value] of Object.entries(model)) {
    if (key === "parts" || SECTIONS.includes(key as ModelSection) || value === undefined) continue;
    refuse(`model.${key}`, value, {
      rule: `a section must be one of ${SECTIONS.join(", ")}`,
      remedy: nearest(key, SECTIONS),
    });
  }
  const parts = partNames.filter((part) => model.parts.includes(part));
  const sections = SECTIONS.map((section) => [section, completeSection(section, model[section])]);
  return { parts, ...Object.fromEntries(sections) } as CompleteModel;
}

function completeSection(section: ModelSection, given: object = {}): Section {
  const numbers = modelParameters.filter((parameter) => parameter.section === section);
  const words = Object.keys(WORDS).filter((key) => key.startsWith(`${section}.`));
  const complete: Section = {};
  for (const parameter of numbers) complete[parameter.key] = parameter.default;
  for (const word of words) complete[word.slice(section.length + 1)] = WORDS[word]![0];
  if (section === "donor") complete.template = null;
  for (const [key, value] of Object.entries(given)) {
    const path = `model.${section}.${key}`;
    if (value === undefined) continue;
    if (!(key in complete)) {
      refuse(path, value, {
        rule: `the section ${section} has no such key`,
        remedy: nearest(key, Object.keys(complete)),
      });
    }
    const allowed = WORDS[`${section}.${key}`];
    const number = numbers.find((parameter) => parameter.key === key);
    if (allowed !== undefined && !allowed.includes(value)) {
      refuse(path, value, { rule: `it must be ${allowed.join(" or ")}` });
    }
    if (number !== undefined && !(value === null && number.default === null)) {
      const { low, high, unit } = number;
      if (typeof value !== "number" || !(value >= low && value <= high)) {
        refuse(path, value, { rule: `it must be a number from ${low} to ${high}`, unit });
      }
    }
    complete[key] = value;
  }
  return complete;
}

function nearest(word: string, words: readonly string[]): string {
  return `did you mean ${closestString(word, words)}?`;
}

function refuse(
  key: string,
  value: unknown,
  { rule, unit = "", remedy }: { rule: string; unit?: string; remedy?: string },
): never {
  throw new InputError({
    action: "build model",
    rule,
    value,
    key,
    ...(unit === "" || typeof value !== "number" ? {} : { unit }),
    ...(remedy === undefined ? {} : { remedy }),
  });
}
