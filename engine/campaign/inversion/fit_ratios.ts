import { InputError, type Warning } from "../../errors.ts";
import {
  type MaximumEntropyOptions,
  type ParameterScan,
  scanBlendRatio,
} from "../../tomography/mod.ts";
import type { Trail } from "../../trail/mod.ts";
import type { Progress } from "../../workers/mod.ts";
import type { LineBlend } from "../blends_of.ts";
import { pause } from "../pause.ts";

/** A blend as it was mapped. */
export interface MappedBlend extends Omit<LineBlend, "ratio"> {
  /** Flux over that of the mapped line; null where it has a map of its own. */
  readonly ratio: number | null;
  /** One standard deviation of a fitted ratio; null for one that was given. */
  readonly ratio_error: number | null;
}

/** Ratios that are tried first. */
const TRIED = [0.03, 0.1, 0.25, 0.5, 1, 2, 5];

/** What a ratio is multiplied by in the second round, about the best of the first. */
const NEARER = [0.6, 0.75, 0.88, 1, 1.13, 1.3, 1.6];

/** Standard deviations from the best of the second round, in the last one. */
const CLOSE = [-2, -1, 0, 1, 2];

/** Rounds over all free ratios where there are several. */
const ROUNDS = 2;

/**
 * Finds the free ratios of blends: each is the one of least χ² − αS with the multiplier held, by entropy
 * with a uniform default, whatever makes the map afterwards. Several are found in turn, so that the
 * error of each holds the others.
 *
 * @param trail The trail.
 * @param options How maps are made, but for blends.
 * @param options.blends The blends.
 * @param options.progress Told of each scan.
 * @param options.signal Aborts the work.
 * @returns The blends with their ratios, and what a user should know.
 * @throws {InputError} When the data do not tell a ratio.
 */
export async function fitRatios(
  trail: Trail,
  options: Omit<MaximumEntropyOptions, "blends" | "projector"> & {
    readonly blends: readonly LineBlend[];
    readonly progress?: Progress;
    readonly signal?: AbortSignal;
  },
): Promise<{ blends: MappedBlend[]; warnings: Warning[] }> {
  const { blends, progress, signal, ...rest } = options;
  const warnings: Warning[] = [];
  const found = blends.map((blend): MappedBlend => ({
    ...blend,
    ratio: blend.map === "own" ? null : blend.ratio === "free" ? 1 : blend.ratio,
    ratio_error: null,
  }));
  const free = blends.flatMap((blend, i) =>
    blend.map === "shared" && blend.ratio === "free" ? [i] : []
  );
  for (let round = 0; round < (free.length > 1 ? ROUNDS : 1); round++) {
    for (const i of free) {
      const scan = (flux_ratios: readonly number[]) =>
        scanBlendRatio(trail, {
          ...rest,
          prior: { kind: "uniform" },
          raise_goal: true,
          blends: found.flatMap(({ rest_ratio, ratio }, k) =>
            k === i || ratio === null ? [] : [{ rest_ratio, flux_ratio: ratio }]
          ),
          member_rest_ratio: found[i]!.rest_ratio,
          flux_ratios,
        });
      const told = async (step: number, run: () => ParameterScan) => {
        const made = run();
        progress?.(step, 3, `${trail.line.name}: ratio of ${found[i]!.name}`);
        await pause(signal);
        return made;
      };
      const first = await told(1, () => scan(round === 0 ? TRIED : about(found[i]!.ratio!)));
      const second = await told(2, () => scan(about(bestOf(first, found[i]!))));
      const { best, error } = second;
      const near = best !== null && error !== null && 2 * error < best
        ? await told(3, () => scan(CLOSE.map((sigmas) => best + sigmas * error)))
        : second;
      found[i] = {
        ...found[i]!,
        ratio: bestOf(near, found[i]!),
        ratio_error: near.error ?? error,
      };
      if (near.shape === "edge" || near.shape === "several") {
        warnings.push({
          code: `blend-ratio-${near.shape}`,
          line: trail.line.name,
          text: `the ratio of ${found[i]!.name} has ${
            near.shape === "edge" ? "no least within what was tried" : "several least values"
          }: give it, if it is known`,
        });
      }
    }
  }
  if (free.length > 1) {
    warnings.push({
      code: "blend-ratios-in-turn",
      line: trail.line.name,
      text: "several ratios of blends were fitted in turn: the error of each holds the others",
    });
  }
  return { blends: found, warnings };
}

const about = (ratio: number) => NEARER.map((factor) => factor * ratio);

function bestOf(scan: ParameterScan, blend: Pick<MappedBlend, "name">): number {
  if (scan.best !== null && scan.best > 0) return scan.best;
  throw new InputError({
    action: `fit the ratio of ${blend.name}`,
    rule: "the data must tell it: no ratio fits worse than another",
    value: `${scan.values[0]} to ${scan.values.at(-1)}`,
    key: "lines.blends.ratio",
    remedy: "give the ratio as a number",
  });
}
