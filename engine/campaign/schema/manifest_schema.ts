import { z } from "zod";
import { commandNames, type StepName } from "../step_table.ts";
import { count, text } from "./common.ts";

/** A panel that a sample plate can show: what is in the targets' FITS files. */
export type SamplePanel = "map" | "asymmetric" | "trail" | "model" | "residual";

const samplePanels: [SamplePanel, ...SamplePanel[]] = [
  "map",
  "asymmetric",
  "trail",
  "model",
  "residual",
];

/** Overrides for some of a manifest's targets. */
export interface ManifestChange {
  /** Patterns of target files or names that it is for. */
  readonly targets: readonly string[];
  /** Overrides `section.key=value`, after those for all. */
  readonly set: readonly string[];
}

/** Another treatment of the targets, in a folder of its own under each one's. */
export interface ManifestVariant {
  /** Its name and that of its folders. */
  readonly name: string;
  /** Patterns of target files or names that it is for. */
  readonly targets: readonly string[];
  /** Commands to run. */
  readonly commands: readonly StepName[];
  /** Overrides `section.key=value`, after those of the target's own treatment. */
  readonly set: readonly string[];
}

/** A plate of many targets, for comparison. */
export interface SamplePlateSettings {
  /** Name of its files. */
  readonly name: string;
  /** Variant whose maps it shows; the targets' own treatment when absent. */
  readonly variant?: string;
  /** Patterns of target files or names that it shows. */
  readonly targets: readonly string[];
  /** Name of the line; the first line of each target when absent. */
  readonly line?: string;
  /** Panels of each target, side by side. */
  readonly panels: readonly SamplePanel[];
  /** Targets in a row. */
  readonly columns: number;
  /** Rows on a page; further targets go to further pages. */
  readonly rows: number;
  /** Whether all maps have one scale of intensity. */
  readonly shared_scale: boolean;
  /** Formats to write. */
  readonly formats: readonly ("svg" | "png" | "pdf")[];
  /** Width of the figure in a journal. */
  readonly width: "one-column" | "two-column";
}

/** The settings of a manifest, defaults filled in. */
export interface ManifestSettings {
  /** Version of the manifest's format. */
  readonly format: 1;
  /** Title of the page. */
  readonly title?: string;
  /** Target files: paths or globs, relative to the manifest. */
  readonly targets: readonly string[];
  /** Commands to run on each. */
  readonly commands: readonly StepName[];
  /** Overrides `section.key=value` for all. */
  readonly set: readonly string[];
  /** Overrides for some. */
  readonly changes: readonly ManifestChange[];
  /** Further treatments. */
  readonly variants: readonly ManifestVariant[];
  /** Plates of many targets. */
  readonly sample_plates: readonly SamplePlateSettings[];
}

const folderName = z.string().regex(/^[A-Za-z0-9][A-Za-z0-9._-]*$/, {
  error: "must be a name for a folder or file: letters, digits, dots, hyphens, underscores",
});
const commands = z.array(z.enum(commandNames as [StepName, ...StepName[]])).min(1);
const set = z.array(text).default([]);
const patterns = z.array(text).min(1);

/** The whole manifest. */
export const manifestSchema: z.ZodType<ManifestSettings> = z.strictObject({
  format: z.literal(1),
  title: text.optional(),
  targets: patterns,
  commands: commands.default(["check", "trail", "map", "plate"]),
  set,
  changes: z.array(z.strictObject({ targets: patterns, set: z.array(text).min(1) })).default([]),
  variants: z.array(z.strictObject({
    name: folderName,
    targets: patterns.default(["*"]),
    commands: commands.default(["map", "plate"]),
    set,
  })).default([]),
  sample_plates: z.array(z.strictObject({
    name: folderName.default("sample"),
    variant: folderName.optional(),
    targets: patterns.default(["*"]),
    line: text.optional(),
    panels: z.array(z.enum(samplePanels)).min(1).default(["map"]),
    columns: count.default(3),
    rows: count.default(4),
    shared_scale: z.boolean().default(false),
    formats: z.array(z.enum(["svg", "png", "pdf"])).min(1).default(["png"]),
    width: z.enum(["one-column", "two-column"]).default("two-column"),
  })).default([]),
}).superRefine((manifest, context) => {
  const issue = (path: (string | number)[], message: string) =>
    context.addIssue({ code: "custom", path, message });
  const { variants, sample_plates } = manifest;
  variants.forEach(({ name }, i) => {
    if (variants.findIndex((other) => other.name === name) !== i) {
      issue(["variants", i, "name"], "must not come twice");
    }
  });
  sample_plates.forEach(({ name, variant }, i) => {
    if (sample_plates.findIndex((other) => other.name === name) !== i) {
      issue(["sample_plates", i, "name"], "must not come twice");
    }
    if (variant !== undefined && !variants.some((other) => other.name === variant)) {
      issue(["sample_plates", i, "variant"], "must be the name of one of the variants");
    }
  });
});
