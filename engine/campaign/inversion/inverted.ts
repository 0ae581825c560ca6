import type { Warning } from "../../errors.ts";
import type {
  BlendMember,
  InversionRecipe,
  PriorImage,
  SeparateRecipe,
  TrailSamples,
  VelocityMap,
} from "../../tomography/mod.ts";
import type { Progress } from "../../workers/mod.ts";
import type { MapSettings } from "../schema/map_section.ts";

/** Whether a line is inverted as it is, with its sign turned, or with either sign allowed. */
export type LineSign = "emission" | "absorption" | "mixed";

/** A trail, inverted. */
export interface Inverted {
  /** The map. */
  readonly map: VelocityMap;
  /** Factor on the map's projection that fits the data best: ±1 where the inversion fits them itself. */
  readonly scale: number;
  /** The map's data on native pixels, sign as in the trail, scaled to fit. */
  readonly model: Float64Array;
  /** χ² over the number of unmasked samples. */
  readonly reduced_chi_square: number;
  /** Number of unmasked samples. */
  readonly sample_count: number;
  /** χ² per sample that was aimed for in the end; null where there was no such goal. */
  readonly goal: number | null;
  /** Multiplier of the entropy or weight of the variation; null for back-projection. */
  readonly multiplier: number | null;
  /** Iterations; 1 for a direct inversion. */
  readonly iterations: number;
  /** Whether the iteration met its goals. */
  readonly converged: boolean;
  /** How far the gradients of entropy and misfit are from parallel; null for other inversions. */
  readonly misalignment: number | null;
  /** What a user should know. */
  readonly warnings: readonly Warning[];
  /** How maps of resampled data are made: with the multiplier of this one held, where it has one. */
  readonly recipe: InversionRecipe;
  /**
   * What replicas are made of in place of recipe and trail, where other lines' maps are fitted with this
   * one: the whole trail, and a recipe that fits them all; else null.
   */
  readonly resampled: { readonly recipe: SeparateRecipe; readonly data: TrailSamples } | null;
  /** The map of the map, where what the inversion does to places must be taken off; else null. */
  readonly remade: VelocityMap | null;
}

/** How a trail is inverted. */
export interface InvertOptions {
  /** `[map]`. */
  readonly settings: MapSettings;
  /** Pixels along each side. */
  readonly pixels: number;
  /** Systemic velocity, km/s. */
  readonly systemic_kms: number;
  /** Default image of an entropy map. */
  readonly prior: PriorImage;
  /** Lines mapped with it. */
  readonly blends: readonly BlendMember[];
  /** Sign of the line. */
  readonly sign: LineSign;
  /** Whether to go on in spite of a large gap in phase. */
  readonly force: boolean;
  /** Told of each iteration. */
  readonly progress?: Progress;
  /** Aborts the work. */
  readonly signal?: AbortSignal;
}
