import { InputError } from "../../errors.ts";
import type { ColourScale } from "../colour/colour_scale.ts";
import type { Box, Group } from "../display_list.ts";
import type { PlateStyle } from "./plate_description.ts";
import type { PlateSubject } from "./plate_subject.ts";

/** Colours of a panel with the label of its bar. */
export interface PanelScale extends ColourScale {
  /** Unit (markup of `labelRuns`). */
  readonly unit: string;
  /** Values are divided by this on the bar. */
  readonly divide_by: number;
}

/** Where and how one panel of a plate is drawn. */
export interface PanelDrawing {
  /** The plotting area, pt. */
  readonly frame: Box;
  /** Colours, for panels that have them. */
  readonly scale?: PanelScale;
  /** False when the neighbour at the left shows the same vertical axis. */
  readonly first: boolean;
  /** True when this panel names the horizontal axis for itself and its neighbours. */
  readonly names_axis: boolean;
  /** Place of the middle of that name, pt. */
  readonly axis_name_x: number;
  /** Width that the name of the horizontal axis may take, pt. */
  readonly axis_room_pt: number;
  /** The plate's style. */
  readonly style: PlateStyle;
}

/** A kind of panel: how it is laid out, coloured, drawn and told in a caption. */
export interface PanelKind {
  /** Width over height of a panel that keeps its shape; the others fill what is left. */
  readonly aspect?: number;
  /** Part of a row's width that it takes beside others. */
  readonly weight: number;
  /** Height of its frame when nothing else sets it, pt. */
  readonly height_pt: number;
  /** The vertical axis: neighbours with the same one share it. */
  readonly axis?: (subject: PlateSubject) => string;
  /** Name above the panel. */
  readonly name: (subject: PlateSubject) => string;
  /** Colours, over all subjects that share them. */
  readonly scale?: (subjects: readonly PlateSubject[], style: PlateStyle) => PanelScale;
  /** Kinds with the same word have their scale in common within a subject. */
  readonly scale_family?: string;
  /** True where all subjects have the scale in common: it does not come from the data. @default {false} */
  readonly scale_is_common?: boolean;
  /** Draws it. */
  readonly draw: (subject: PlateSubject, drawing: PanelDrawing) => Group;
  /** One or two sentences with the numbers used. */
  readonly tell: (subject: PlateSubject, scale?: PanelScale) => string;
}

/**
 * A field of a subject that a panel cannot do without.
 *
 * @param subject The subject.
 * @param options Field, panel, and what to do where it is missing.
 * @returns The field's value.
 * @throws {InputError} When it is missing, with what to do.
 *
 * @example
 * ```ts
 * import { requireField } from "@millrace/millrace/figures";
 * import { assertThrows } from "@std/assert";
 *
 * const subject = {
 *   title: "", line: { name: "H beta", vacuum_angstrom: 1, air_angstrom: 1, source: "" },
 *   systemic_kms: 0, method: "", binary: null,
 * };
 * assertThrows(
 *   () => requireField(subject, { field: "spread", panel: "spread", remedy: "resample the map" }),
 *   Error,
 *   'Cannot draw panel "spread" as it needs spread of H beta; resample the map',
 * );
 * ```
 */
export function requireField<K extends keyof PlateSubject>(
  subject: PlateSubject,
  options: {
    /** The field. */
    readonly field: K;
    /** The panel that needs it. */
    readonly panel: string;
    /** The key or command that makes it. */
    readonly remedy: string;
  },
): NonNullable<PlateSubject[K]> {
  const value = subject[options.field];
  if (value !== undefined && value !== null) return value as NonNullable<PlateSubject[K]>;
  throw new InputError({
    action: `draw panel "${options.panel}"`,
    rule: `it needs ${options.field.replaceAll("_", " ")} of ${subject.line.name}`,
    remedy: options.remedy,
  });
}

/**
 * A number as captions state it: four significant digits and a true minus sign.
 *
 * @param value The number.
 * @returns Its text.
 *
 * @example
 * ```ts
 * import { captionNumber } from "@millrace/millrace/figures";
 * import { assertEquals } from "@std/assert";
 *
 * assertEquals(captionNumber(-615.04), "−615");
 * assertEquals(captionNumber(0.00012346), "0.0001235");
 * ```
 */
export function captionNumber(value: number): string {
  return String(Number(value.toPrecision(4))).replaceAll("-", "−");
}

/**
 * What a caption says of a colour scale.
 *
 * @param scale The scale.
 * @returns As in "colours from 0 to 3.4, square-root stretch".
 *
 * @example
 * ```ts
 * import { tellScale } from "@millrace/millrace/figures";
 * import { assertEquals } from "@std/assert";
 *
 * assertEquals(tellScale({ limits: [0, 3.4], unit: "", divide_by: 1 }), "colours from 0 to 3.4");
 * ```
 */
export function tellScale(scale: PanelScale | undefined): string {
  if (!scale) return "";
  const [low, high] = scale.limits.map(captionNumber);
  const { stretch = "linear" } = scale;
  return `colours from ${low} to ${high}${stretch === "linear" ? "" : `, ${stretch} stretch`}`;
}
