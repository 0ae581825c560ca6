import { NotConverged, type Warning } from "../../errors.ts";
import {
  blendProjector,
  fitOfMap,
  makeProjector,
  type SeparateMaps,
  separateMaps,
  type VelocityMap,
} from "../../tomography/mod.ts";
import type { Trail } from "../../trail/mod.ts";
import type { LineBlend } from "../blends_of.ts";
import { pause } from "../pause.ts";
import { turned } from "../sign_of.ts";
import { entropyOptions, REPLICA_ITERATIONS } from "./by_entropy.ts";
import type { Inverted, InvertOptions } from "./inverted.ts";

/** The map of a blend that has its own. */
export interface OwnMap {
  /** The blend. */
  readonly blend: Pick<LineBlend, "name" | "rest_air_angstrom" | "rest_ratio">;
  /** Its map, with the sign that the line's map has. */
  readonly map: VelocityMap;
  /** Equivalent width of the map over that of the line's. */
  readonly flux_ratio: number;
}

/**
 * Maximum entropy with a map for the line and one for each blend that has its own, all fitted at once.
 *
 * @param trail The trail.
 * @param options How.
 * @param options.own The blends that have maps of their own.
 * @returns The line's map, the others, and the trail less what the others make of it: studies of the line's
 * map hold those of the blends. Its replicas do not: they fit all maps anew.
 */
export async function bySeparateMaps(
  trail: Trail,
  options: InvertOptions & { readonly own: readonly LineBlend[] },
): Promise<{ inverted: Inverted; own_maps: OwnMap[]; data: Trail }> {
  const { settings, sign, own, signal } = options;
  const asked = entropyOptions(options);
  const { blends: _shared, signed: _signed, absorption: _turn, inside_out: _usual, ...shape } =
    asked;
  const upright = sign === "absorption" ? turned(trail) : trail;
  const rest_ratios = [1, ...own.map(({ rest_ratio }) => rest_ratio)];
  const warnings: Warning[] = [];
  let found: SeparateMaps;
  try {
    found = separateMaps(upright, {
      ...shape,
      rest_ratios,
      reduced_chi_square: settings.reduced_chi_square,
      raise_goal: true,
    });
  } catch (error) {
    if (!(error instanceof NotConverged)) throw error;
    found = error.partial as SeparateMaps;
    warnings.push({ code: "goal-not-reached", text: error.message });
  }
  await pause(signal);
  warnings.push(...found.warnings);
  const [map, ...others] = found.maps;
  const turn = sign === "absorption" ? -1 : 1;
  const flux = trail.flux.slice();
  own.forEach(({ rest_ratio }, m) => {
    const seen = makeProjector(trail.sampling, { ...shape, rest_ratio })
      .forward(others[m]!.intensity);
    for (let k = 0; k < flux.length; k++) {
      if (trail.error[k]! < Infinity) flux[k] = flux[k]! - turn * seen[k]!;
    }
  });
  const sum = (one: VelocityMap) => one.intensity.reduce((a, b) => a + b, 0);
  const model = blendProjector(trail.sampling, { ...shape, members: [] })
    .forward(map!.intensity).map((f) => turn * f);
  return {
    data: { ...trail, flux },
    own_maps: own.map((blend, m) => ({
      blend,
      map: others[m]!,
      flux_ratio: sum(others[m]!) / sum(map!),
    })),
    inverted: {
      map: map!,
      scale: turn,
      model,
      reduced_chi_square: found.reduced_chi_square,
      sample_count: fitOfMap(trail, { model }).sample_count,
      goal: found.goal,
      multiplier: found.multiplier,
      iterations: found.iterations,
      converged: found.converged,
      misalignment: found.misalignment,
      warnings: warnings.map((warning) => ({ ...warning, line: trail.line.name })),
      recipe: {
        inversion: "entropy",
        ...asked,
        blends: [],
        max_iterations: REPLICA_ITERATIONS,
        multiplier: found.multiplier,
        start: map!,
        level: found.level,
      },
      resampled: {
        data: upright,
        recipe: {
          inversion: "separate-entropy",
          ...shape,
          rest_ratios,
          multiplier: found.multiplier,
          starts: found.maps,
          level: found.level,
          max_iterations: REPLICA_ITERATIONS,
        },
      },
      remade: null,
    },
  };
}
