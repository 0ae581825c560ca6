import { InputError, NotConverged, type Warning } from "../../errors.ts";
import {
  type MapRegion,
  type ModulatedMap,
  modulatedMap,
  modulationIn,
  type RegionModulation,
} from "../../tomography/mod.ts";
import type { MappedLine } from "../map_line.ts";
import { pause } from "../pause.ts";
import { uprightTrail } from "../sign_of.ts";
import type { Target } from "../target.ts";

/** How the emission of a region varies with the orbit. */
export interface RegionStudy extends MapRegion, RegionModulation {
  /** What the region is. */
  readonly name: string;
}

/** Maps of emission that varies with the orbit. */
export interface Modulation
  extends Pick<ModulatedMap, "average" | "cosine" | "sine" | "reduced_chi_square" | "converged"> {
  /** Amplitudes over regions: the features of the map, those of `map.regions`, and the whole map. */
  readonly regions: readonly RegionStudy[];
  /** What a user should know. */
  readonly warnings: readonly Warning[];
}

/**
 * Maps the emission of a line that varies with the orbit, as cosine and sine images of either sign about
 * an average (Steeghs 2003, MNRAS 344, 448), with γ held: only what is summed over a region counts.
 *
 * @param mapped The map of the line.
 * @param options The target.
 * @param options.target The target: the goal, the regions.
 * @param options.signal Aborts the work.
 * @returns Maps and amplitudes.
 * @throws {InputError} When the line has blends or both signs, of which there is no modulated map.
 */
export async function modulationStudy(
  mapped: MappedLine,
  options: { target: Target; signal?: AbortSignal },
): Promise<Modulation> {
  const { target, signal } = options;
  const { trail, systemic_kms, features, resolution_kms, blends, sign, recipe } = mapped;
  const { pixels, half_width_kms } = mapped.map;
  const line = trail.line.name;
  if (blends.length > 0 || sign === "mixed") {
    throw new InputError({
      action: `map the modulation of ${line}`,
      rule: "the line must be one alone, and of one sign" +
        (blends.length === 0
          ? ""
          : ": a blend is as little a mirror of itself about the systemic velocity as modulation"),
      value: blends.length === 0
        ? sign
        : blends.length === 1
        ? "1 blend"
        : `${blends.length} blends`,
      file: target.file,
      key: "map.modulation",
      remedy: "leave the blends out, or map.modulation",
    });
  }
  const { reduced_chi_square } = target.settings.map;
  const data = uprightTrail(mapped);
  const shape = { pixels, half_width_kms, systemic_kms, force: recipe.force === true };
  const warnings: Warning[] = [];
  let maps: ModulatedMap;
  try {
    maps = modulatedMap(data, { ...shape, reduced_chi_square, raise_goal: true });
  } catch (error) {
    if (!(error instanceof NotConverged)) throw error;
    maps = error.partial as ModulatedMap;
    warnings.push({ code: "goal-not-reached", text: error.message });
  }
  await pause(signal);
  if (target.settings.orbit.systemic_kms === "search") {
    warnings.push({
      code: "modulation-with-searched-systemic",
      text:
        "the systemic velocity was searched in the same data: a wrong one imitates modulation, " +
        "so give it from elsewhere before modulation is believed",
    });
  }
  const places: { name: string; region: MapRegion }[] = [
    ...features.map(({ vx_kms, vy_kms }, i) => ({
      name: `feature ${i + 1}`,
      region: { vx_kms, vy_kms, radius_kms: resolution_kms },
    })),
    ...target.settings.map.regions.map(({ name, ...region }, i) => ({
      name: name ?? `region ${i + 1}`,
      region,
    })),
    { name: "whole map", region: { vx_kms: 0, vy_kms: 0, radius_kms: 2 * half_width_kms } },
  ];
  const regions = places.map(({ name, region }) => ({
    name,
    ...region,
    ...modulationIn(data, { maps, region, systemic_kms }),
  }));
  const { average, cosine, sine, reduced_chi_square: reached, converged } = maps;
  return {
    ...{ average, cosine, sine, converged, regions },
    reduced_chi_square: reached,
    warnings: [...maps.warnings, ...warnings].map((warning) => ({ ...warning, line })),
  };
}
