import { z } from "zod";
import type { Model } from "../../synthesis/mod.ts";
import { positive, range, text } from "./common.ts";
import { modelSection } from "./model_section.ts";

const blend = z.strictObject({
  name: text.optional(),
  air_angstrom: positive.optional(),
  vacuum_angstrom: positive.optional(),
  ratio: z.union([positive, z.literal("free")], { error: 'must be a positive number or "free"' })
    .default(1),
  map: z.enum(["shared", "own"]).default("shared"),
}).superRefine((one, context) => {
  if (one.map === "own" && one.ratio !== 1) {
    context.addIssue({
      code: "custom",
      path: ["ratio"],
      message: 'must not stand beside map = "own": the two maps say how strong each line is',
    });
  }
});

/** A line blended with the mapped one. */
export interface BlendSettings {
  /** Known name. */
  readonly name?: string;
  /** Rest wavelength in air, Å. */
  readonly air_angstrom?: number;
  /** Rest wavelength in vacuum, Å. */
  readonly vacuum_angstrom?: number;
  /** Strength relative to the mapped line, or "free". */
  readonly ratio: number | "free";
  /** Whether it shares the line's map, or has its own. */
  readonly map: "shared" | "own";
}

/** Another line of which the same map is made. */
export interface TogetherSettings {
  /** Its name, as another `[[lines]]` table has it. */
  readonly line: string;
  /** Its flux over that of this line, or "measured" on the mean fluxes. */
  readonly ratio: number | "measured";
}

const together = z.strictObject({
  line: text,
  ratio: z.union([positive, z.literal("measured")], {
    error: 'must be a positive number or "measured"',
  }).default("measured"),
});

/** One `[[lines]]` table. */
export interface LineSettings {
  /** Known name, or any name with its rest wavelength. */
  readonly name: string;
  /** Rest wavelength in air, Å. */
  readonly air_angstrom?: number;
  /** Rest wavelength in vacuum, Å. */
  readonly vacuum_angstrom?: number;
  /** Components of a multiplet, air, Å. */
  readonly components_air_angstrom?: readonly number[];
  /** Velocities used on either side, km/s. */
  readonly reach_kms: number;
  /** Windows of continuum, km/s. */
  readonly continuum_kms?: readonly (readonly [number, number])[];
  /** Instrumental full width at half maximum for this line, Å. */
  readonly resolution_angstrom?: number;
  /** The same, km/s. */
  readonly resolution_kms?: number;
  /** The same as wavelength over width. */
  readonly resolving_power?: number;
  /** Lines mapped with it. */
  readonly blends: readonly BlendSettings[];
  /** Other lines of which the same map is made, at once. */
  readonly together: readonly TogetherSettings[];
  /** Whether it is inverted as it is, with its sign turned, or with either sign allowed. */
  readonly sign: "auto" | "emission" | "absorption" | "mixed";
  /** Star with which the line moves. */
  readonly traces: "accretor" | "donor";
  /** "none", or one or several template spectra. */
  readonly template: string | readonly string[];
  /** What this line's emission is made of, where it differs from `[model]`. */
  readonly model?: Model;
}

/** Schema of LineSettings. */
export const linesSection: z.ZodType<LineSettings> = z.strictObject({
  name: text,
  air_angstrom: positive.optional(),
  vacuum_angstrom: positive.optional(),
  components_air_angstrom: z.array(positive).min(1).optional(),
  reach_kms: positive.default(2500),
  continuum_kms: z.array(range).min(1).optional(),
  resolution_angstrom: positive.optional(),
  resolution_kms: positive.optional(),
  resolving_power: positive.optional(),
  blends: z.array(blend).default([]),
  together: z.array(together).default([]),
  sign: z.enum(["auto", "emission", "absorption", "mixed"]).default("auto"),
  traces: z.enum(["accretor", "donor"]).default("accretor"),
  template: z.union([text, z.array(text)]).default("none"),
  model: modelSection.optional(),
}).superRefine((line, context) => {
  if (line.together.length > 0 && line.blends.length > 0) {
    context.addIssue({
      code: "custom",
      path: ["together"],
      message: "must not stand beside blends: a blend is in one of the lines alone",
    });
  }
  if (line.air_angstrom !== undefined && line.vacuum_angstrom !== undefined) {
    context.addIssue({
      code: "custom",
      path: ["vacuum_angstrom"],
      message: "must not stand beside air_angstrom: give the rest wavelength once",
    });
  }
});
