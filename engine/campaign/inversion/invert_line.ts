import { InputError, type Warning } from "../../errors.ts";
import type { Trail } from "../../trail/mod.ts";
import { blendsOf } from "../blends_of.ts";
import { invertTrail } from "../invert.ts";
import { signOf, turned } from "../sign_of.ts";
import type { Target } from "../target.ts";
import { type Baselines, fittedBaselines, withoutBaselines } from "./baselines.ts";
import { bySeparateMaps, type OwnMap } from "./by_separate_maps.ts";
import { fitRatios, type MappedBlend } from "./fit_ratios.ts";
import type { Inverted, InvertOptions, LineSign } from "./inverted.ts";
import { blendProjector } from "../../tomography/mod.ts";

/** A line, inverted with all that its table asks for. */
export interface InvertedLine extends Inverted {
  /** Sign of the line. */
  readonly sign: LineSign;
  /**
   * The trail that the recipe takes: the observed one; of back-projected absorption with its sign turned;
   * of a line whose blends have maps of their own less what those make.
   */
  readonly data: Trail;
  /** The lines mapped with it. */
  readonly blends: readonly MappedBlend[];
  /** Maps of blends that have their own. */
  readonly own_maps: readonly OwnMap[];
  /** The baselines fitted with the map; null when they were held at zero. */
  readonly baselines: Baselines | null;
  /** The observed trail less its baselines: what model and residual are to be compared with. */
  readonly straight: Trail;
}

/**
 * Inverts the trail of a line: its sign, its blends with their ratios, its baselines.
 *
 * @param trail The trail.
 * @param options The target and how the map is made.
 * @returns The line, inverted.
 * @throws {InputError} When some blends share the map and others have their own.
 */
export async function invertLine(
  trail: Trail,
  options: Omit<InvertOptions, "sign" | "blends"> & { readonly target: Target },
): Promise<InvertedLine> {
  const { target, settings, pixels, systemic_kms, force, progress, signal } = options;
  const sign = signOf(trail, { target });
  const blends = blendsOf(trail.line, { target });
  const own = blends.filter(({ map }) => map === "own");
  if (own.length > 0 && own.length < blends.length) {
    throw new InputError({
      action: `map ${trail.line.name} with its blends`,
      rule: "its blends must all share its map, or all have maps of their own",
      value: blends.map(({ name, map }) => `${name}: ${map}`).join(", "),
      file: target.file,
      key: "lines.blends.map",
    });
  }
  if (own.length > 0 && (sign === "mixed" || settings.coordinates !== "usual")) {
    throw new InputError({
      action: `map ${trail.line.name} with its blends`,
      rule: "a blend has a map of its own beside a line of one sign, in the usual coordinates",
      value: sign === "mixed" ? sign : settings.coordinates,
      file: target.file,
      key: sign === "mixed" ? "lines.sign" : "map.coordinates",
      remedy: 'use map = "shared"',
    });
  }
  const plain = { blends: [], own_maps: [], sign, baselines: null, straight: trail };
  if (own.length > 0) {
    const { inverted, own_maps, data } = await bySeparateMaps(trail, {
      ...options,
      sign,
      blends: [],
      own,
    });
    return withBaselines({
      ...plain,
      ...inverted,
      data,
      own_maps,
      blends: own.map((blend) => ({ ...blend, ratio: null, ratio_error: null })),
    }, options);
  }
  const fitted = await fitRatios(trail, {
    pixels,
    half_width_kms: settings.half_width_kms,
    systemic_kms,
    absorption: sign === "absorption",
    signed: sign === "mixed",
    free_baselines: settings.baseline,
    force,
    blends,
    progress,
    signal,
  });
  // The linear inversion takes the data as they come: those of absorption with their sign turned.
  const data = settings.method === "back-projection" && sign === "absorption"
    ? turned(trail)
    : trail;
  const inverted = await invertTrail(data, {
    ...options,
    sign,
    blends: fitted.blends.map(({ rest_ratio, ratio }) => ({ rest_ratio, flux_ratio: ratio! })),
  });
  const warnings: Warning[] = [...fitted.warnings, ...inverted.warnings];
  return withBaselines(
    { ...plain, ...inverted, warnings, data, blends: fitted.blends },
    options,
  );
}

/** Adds the baselines that were fitted, where they were free. */
function withBaselines(
  found: InvertedLine,
  { target, settings }: { readonly target: Target; readonly settings: InvertOptions["settings"] },
): InvertedLine {
  if (!settings.baseline) return found;
  const { data, recipe, straight: trail, map, sign } = found;
  const members = "blends" in recipe ? recipe.blends ?? [] : [];
  const turn = sign === "absorption" ? -1 : 1;
  const model = blendProjector(data.sampling, { ...recipe, members }).forward(map.intensity)
    .map((f) => turn * f);
  const line = target.settings.lines.find(({ name }) => name === trail.line.name)!;
  const shape = { reach_kms: line.reach_kms, phase_bins: target.settings.trail.phase_bins };
  const baselines = fittedBaselines(data, { model });
  return {
    ...found,
    model,
    baselines,
    straight: withoutBaselines(trail, { baselines, ...shape }),
  };
}
