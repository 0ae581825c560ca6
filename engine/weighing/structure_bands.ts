import {
  ballisticStream,
  type Binary,
  lobeOutlineVelocity,
  streamVelocities,
} from "../binary/mod.ts";
import { median, randomStream } from "../numerics/mod.ts";
import { drawBinary, type StructureErrors, type UncertainPlace } from "./structure_errors.ts";

/** Where the structures of a binary may lie in the map, given how well the binary is known. */
export interface StructureBands {
  /** Points of the stream, from L1 inwards, each with its covariance. */
  readonly stream: readonly UncertainPlace[];
  /** Keplerian velocity at the same places. */
  readonly disc_below_stream: readonly UncertainPlace[];
  /** The donor's lobe, a closed curve, each point with its covariance. */
  readonly donor: readonly UncertainPlace[];
  /** Number of binaries that were drawn. */
  readonly draws: number;
}

/** Options of {@linkcode structureBands}. */
export interface StructureBandsOptions {
  /** Errors of the geometry. */
  readonly errors: StructureErrors;
  /**
   * Points along the stream, and around the donor.
   *
   * @default {40}
   */
  readonly points?: number;
  /**
   * Binaries to draw.
   *
   * @default {100}
   */
  readonly draws?: number;
  /**
   * Seed of the draws.
   *
   * @default {1}
   */
  readonly seed?: number;
}

/** Curves of one binary, points in the same order for each. */
interface Curves {
  readonly stream: readonly (readonly [number, number])[];
  readonly below: readonly (readonly [number, number])[];
  readonly donor: readonly (readonly [number, number])[];
}

function curvesOf(binary: Binary, points: number): Curves {
  const path = streamVelocities(ballisticStream(binary.mass_ratio, { points }), binary);
  const lobe = lobeOutlineVelocity(binary, { points });
  const pairs = (x: Float64Array, y: Float64Array) =>
    Array.from(x, (vx, i) => [vx, y[i]!] as const);
  return {
    stream: pairs(path.vx_kms, path.vy_kms),
    below: pairs(path.keplerian_vx_kms, path.keplerian_vy_kms),
    donor: pairs(lobe.vx_kms, lobe.vy_kms),
  };
}

/**
 * Stream and lobe as bands: K1, K2, q and i are drawn from their errors, and the zero of phase turns
 * each draw.
 *
 * @param binary The binary.
 * @param options Errors, and how many draws.
 * @returns Median and covariance of each point.
 *
 * @example
 * ```ts
 * import { structureBands } from "@millrace/millrace/weighing";
 * import { binaryFrom } from "@millrace/millrace/binary";
 * import { assertAlmostEquals } from "@std/assert";
 *
 * const binary = binaryFrom({ k_accretor_kms: 70, k_donor_kms: 320 });
 * const { donor } = structureBands(binary, { errors: { k_donor_kms: 20 }, points: 36, draws: 50 });
 * const along = donor.map(({ covariance: [, , yy] }) => Math.sqrt(yy));
 * assertAlmostEquals(Math.max(...along), 25, 12);
 * ```
 */
export function structureBands(binary: Binary, options: StructureBandsOptions): StructureBands {
  const { errors, points = 40, draws = 100, seed = 1 } = options;
  const random = randomStream(seed);
  const drawn = Array.from({ length: draws }, () => {
    const turn = 2 * Math.PI * (errors.phase ?? 0) * random.normal();
    const cos = Math.cos(turn), sin = Math.sin(turn);
    const curves = curvesOf(drawBinary(binary, { errors, random }), points);
    const turned = (curve: readonly (readonly [number, number])[]) =>
      curve.map(([x, y]) => [cos * x - sin * y, sin * x + cos * y] as const);
    return {
      stream: turned(curves.stream),
      below: turned(curves.below),
      donor: turned(curves.donor),
    };
  });
  const band = (key: keyof Curves) =>
    Array.from({ length: Math.min(...drawn.map((curves) => curves[key].length)) }, (_, k) => {
      const x = drawn.map((curves) => curves[key][k]![0]);
      const y = drawn.map((curves) => curves[key][k]![1]);
      const vx_kms = median(x), vy_kms = median(y);
      const product = (a: readonly number[], b: readonly number[], ma: number, mb: number) =>
        a.reduce((sum, value, i) => sum + (value - ma) * (b[i]! - mb), 0) / a.length;
      return {
        vx_kms,
        vy_kms,
        covariance: [
          product(x, x, vx_kms, vx_kms),
          product(x, y, vx_kms, vy_kms),
          product(y, y, vy_kms, vy_kms),
        ] as const,
      };
    });
  return {
    stream: band("stream"),
    disc_below_stream: band("below"),
    donor: band("donor"),
    draws,
  };
}
