import { robustSigma } from "../numerics/mod.ts";
import { pixelEdges } from "./pixel_edges.ts";
import { rebin } from "./rebin.ts";
import type { Trail } from "./trail.ts";

/** Scatter between pairs of exposures over what their errors say. */
export interface PairNoise {
  /** Scatter of differences over their errors: 1 when the errors are right and nothing changed. */
  readonly scale: number;
  /** One standard deviation of it, from the number of pairs' samples. */
  readonly scale_error: number;
  /** Number of pairs. */
  readonly pairs: number;
}

/** Options of {@linkcode pairNoise}. */
export interface PairNoiseOptions {
  /**
   * Systemic velocity about which a profile is mirrored, km/s.
   * @default 0
   */
  readonly systemic_kms?: number;
  /**
   * How far from the same (or the opposite) phase the two may be, cycles.
   * @default half the median width of an exposure
   */
  readonly within_phase?: number;
}

function apart(a: number, b: number): number {
  const d = a - b;
  return Math.abs(d - Math.round(d));
}

function scatterOf(differences: readonly number[], pairs: number): PairNoise | null {
  if (differences.length < 30) return null;
  const scale = robustSigma(differences, 0);
  return { scale, scale_error: 1.166 * scale / Math.sqrt(differences.length), pairs };
}

/**
 * Measures noise within the line by comparing exposures that should agree: at the same phase in
 * other orbits ("repeat"), and half an orbit apart with the profile mirrored about the systemic
 * velocity ("mirror"), which for transparent gas shows the same. More than one means errors too
 * small, or changes from orbit to orbit; a mirror scale above the repeat scale means gas that is not
 * transparent, or another systemic velocity.
 *
 * @param trail The trail.
 * @param options Systemic velocity, tolerance in phase.
 * @returns Both scales; null where there are too few pairs.
 *
 * @example
 * ```ts
 * import { pairNoise } from "@millrace/millrace/trail";
 * import { assertEquals } from "@std/assert";
 *
 * const sampling = {
 *   count: 0,
 *   phase: new Float64Array(0),
 *   cycle: new Float64Array(0),
 *   phase_width: new Float64Array(0),
 *   start: Uint32Array.of(0),
 *   velocity_kms: new Float64Array(0),
 *   pixel_kms: new Float64Array(0),
 *   profile_sigma_kms: new Float64Array(0),
 * };
 * assertEquals(pairNoise({ sampling, flux: new Float64Array(0), error: new Float64Array(0) }), {
 *   repeat: null,
 *   mirror: null,
 * });
 * ```
 */
export function pairNoise(
  trail: Pick<Trail, "sampling" | "flux" | "error">,
  options: PairNoiseOptions = {},
): { readonly repeat: PairNoise | null; readonly mirror: PairNoise | null } {
  const { sampling, flux, error } = trail;
  const { systemic_kms = 0 } = options;
  const widths = [...sampling.phase_width].sort((a, b) => a - b);
  const within = options.within_phase ?? 0.5 * (widths[widths.length >> 1] ?? 0);
  const rows = Array.from({ length: sampling.count }, (_, i) => {
    const [from, to] = [sampling.start[i]!, sampling.start[i + 1]!];
    const centres = sampling.velocity_kms.subarray(from, to);
    return {
      edges: pixelEdges(centres).map((v) => v - systemic_kms),
      flux: flux.subarray(from, to),
      error: error.subarray(from, to),
      phase: sampling.phase[i]!,
      cycle: sampling.cycle[i]! + sampling.phase[i]!,
    };
  });
  const collect = (mirror: boolean) => {
    const differences: number[] = [];
    let pairs = 0;
    for (let i = 0; i < rows.length; i++) {
      for (let k = i + 1; k < rows.length; k++) {
        const [a, b] = [rows[i]!, rows[k]!];
        if (apart(a.phase, mirror ? b.phase + 0.5 : b.phase) > within) continue;
        if (!mirror && Math.abs(a.cycle - b.cycle) < 0.5) continue;
        pairs++;
        const other = mirror
          ? {
            edges: b.edges.map((v) => -v).reverse(),
            flux: b.flux.slice().reverse(),
            error: b.error.slice().reverse(),
          }
          : b;
        const moved = rebin(other, a.edges);
        moved.flux.forEach((f, j) => {
          const sigma = Math.hypot(a.error[j]!, moved.error[j]!);
          if (Number.isFinite(sigma) && moved.coverage[j]! > 0.99) {
            differences.push((a.flux[j]! - f) / sigma);
          }
        });
      }
    }
    return scatterOf(differences, pairs);
  };
  return { repeat: collect(false), mirror: collect(true) };
}
