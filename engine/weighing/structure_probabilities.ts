import {
  ballisticStream,
  type Binary,
  circularisationRadius,
  lobeOutlineVelocity,
  resonanceRadius,
  streamVelocities,
  tidalRadius,
} from "../binary/mod.ts";
import { InputError } from "../errors.ts";
import { randomStream } from "../numerics/mod.ts";
import type { BinaryPart } from "../tomography/mod.ts";
import { drawBinary, type StructureErrors, type UncertainPlace } from "./structure_errors.ts";

/** Probability of each structure as the seat of a compact source; they add up to one. */
export type StructureProbabilities = Readonly<Record<BinaryPart, number>>;

/** Options of {@linkcode structureProbabilities}. */
export interface StructureProbabilityOptions {
  /** The binary. */
  readonly binary: Binary;
  /** Errors of its geometry; the zero of phase and γ belong into the place's covariance. */
  readonly errors: StructureErrors;
  /** Half-width of the square in which a source of no structure may lie, km/s. */
  readonly half_width_kms: number;
  /**
   * How far a source may lie from the idealised place of its structure, km/s: the gas there is not
   * all at one velocity.
   *
   * @default {30}
   */
  readonly width_kms?: number;
  /**
   * Weight of each structure before the place is looked at.
   *
   * @default All equal
   */
  readonly prior?: Partial<Record<BinaryPart, number>>;
  /**
   * Binaries to draw.
   *
   * @default {60}
   */
  readonly draws?: number;
  /**
   * Seed of the draws.
   *
   * @default {1}
   */
  readonly seed?: number;
}

type Points = readonly (readonly [vx_kms: number, vy_kms: number])[];

/** Points that cover each structure evenly, so that their mean likelihood is the structure's. */
function structuresOf(binary: Binary): Readonly<Record<Exclude<BinaryPart, "none">, Points>> {
  const path = ballisticStream(binary.mass_ratio, { points: 120 });
  const velocity = streamVelocities(path, binary);
  const low = circularisationRadius(path);
  const high = tidalRadius(binary.mass_ratio) ?? resonanceRadius(binary.mass_ratio);
  const rim = path.points.flatMap(({ radius_over_a }, i) => {
    if (radius_over_a < low || radius_over_a > high) return [];
    return [0, 0.125, 0.25, 0.375, 0.5, 0.625, 0.75, 0.875, 1].map((m) =>
      [
        (1 - m) * velocity.vx_kms[i]! + m * velocity.keplerian_vx_kms[i]!,
        (1 - m) * velocity.vy_kms[i]! + m * velocity.keplerian_vy_kms[i]!,
      ] as const
    );
  });
  const stream = evenly(Array.from(velocity.vx_kms, (vx, i) => [vx, velocity.vy_kms[i]!] as const));
  // The face between the terminator through the donor's centre and L1, filled.
  const lobe = lobeOutlineVelocity(binary, { points: 72 });
  const donor = Array.from(lobe.vx_kms, (vx, i) => [vx, lobe.vy_kms[i]!] as const)
    .filter(([, vy]) => vy <= binary.k_donor_kms)
    .flatMap(([vx, vy]) => [0.2, 0.6, 1].map((share) => [share * vx, vy] as const));
  return {
    "rim-impact": rim,
    stream,
    "donor-face": donor,
    accretor: [[0, -binary.k_accretor_kms]],
  };
}

/** Points at equal steps along a path. */
function evenly(path: Points): Points {
  const along = [0];
  for (let i = 1; i < path.length; i++) {
    const [x, y] = path[i]!, [px, py] = path[i - 1]!;
    along.push(along[i - 1]! + Math.hypot(x - px, y - py));
  }
  const points: [number, number][] = [];
  const step = along[along.length - 1]! / 100;
  for (let k = 0, i = 1; k <= 100; k++) {
    while (i < path.length - 1 && along[i]! < k * step) i++;
    const t = (k * step - along[i - 1]!) / (along[i]! - along[i - 1]!);
    const [x, y] = path[i]!, [px, py] = path[i - 1]!;
    points.push([px + t * (x - px), py + t * (y - py)]);
  }
  return points;
}

/**
 * How probable it is that a compact source belongs to each structure of the binary, or to none:
 * Bayes' rule with the place's error as likelihood, each structure evenly bright, binaries drawn from
 * their errors, and "none" even over the square.
 *
 * @param place The place with its whole covariance, see `placeErrors`.
 * @param options The binary, its errors and the square.
 * @returns Probabilities.
 * @throws {InputError} When the covariance is not positive.
 *
 * @example A source far from everything belongs to none
 * ```ts
 * import { structureProbabilities } from "@millrace/millrace/weighing";
 * import { binaryFrom } from "@millrace/millrace/binary";
 * import { assertGreater } from "@std/assert";
 *
 * const binary = binaryFrom({ k_accretor_kms: 70, k_donor_kms: 320 });
 * const place = { vx_kms: 800, vy_kms: -600, covariance: [400, 0, 400] } as const;
 * const { none } = structureProbabilities(place, { binary, errors: {}, half_width_kms: 1200 });
 * assertGreater(none, 0.99);
 * ```
 */
export function structureProbabilities(
  place: UncertainPlace,
  options: StructureProbabilityOptions,
): StructureProbabilities {
  const { binary, errors, half_width_kms, prior = {}, draws = 60, seed = 1 } = options;
  const { width_kms = 30 } = options;
  const xx = place.covariance[0] + width_kms ** 2;
  const xy = place.covariance[1];
  const yy = place.covariance[2] + width_kms ** 2;
  const determinant = xx * yy - xy * xy;
  if (!(xx > 0 && determinant > 0)) {
    throw new InputError({
      action: "name the seat of a source",
      rule: "the covariance of its place must be positive",
      value: place.covariance.join(", "),
      unit: "km²/s²",
    });
  }
  const scale = 1 / (2 * Math.PI * Math.sqrt(determinant));
  const likelihood = ([vx, vy]: readonly [number, number]) => {
    const x = place.vx_kms - vx, y = place.vy_kms - vy;
    return scale * Math.exp(-0.5 * (yy * x * x - 2 * xy * x * y + xx * y * y) / determinant);
  };
  const random = randomStream(seed);
  const exact = [errors.k_accretor_kms, errors.k_donor_kms, errors.mass_ratio]
    .concat(errors.inclination_deg).every((error) => !(error! > 0));
  const rounds = exact ? 1 : draws;
  const sums: Record<BinaryPart, number> = {
    "rim-impact": 0,
    stream: 0,
    "donor-face": 0,
    accretor: 0,
    none: (2 * half_width_kms) ** -2,
  };
  for (let k = 0; k < rounds; k++) {
    const structures = structuresOf(exact ? binary : drawBinary(binary, { errors, random }));
    for (const [name, points] of Object.entries(structures)) {
      if (points.length === 0) continue;
      sums[name as BinaryPart] += points.reduce((sum, point) => sum + likelihood(point), 0) /
        points.length / rounds;
    }
  }
  const weighted = Object.entries(sums).map(([name, sum]) =>
    [name, sum * (prior[name as BinaryPart] ?? 1)] as const
  );
  const total = weighted.reduce((sum, [, value]) => sum + value, 0);
  return Object.fromEntries(
    weighted.map(([name, value]) => [name, value / total]),
  ) as unknown as StructureProbabilities;
}
