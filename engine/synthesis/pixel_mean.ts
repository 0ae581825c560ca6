import { erf } from "../numerics/mod.ts";
import { radialLight } from "./disc_shape.ts";
import { legendre } from "./quadrature.ts";
import { rotationProfile } from "./rotation_profile.ts";

/** A source of light in velocity, without any instrument. */
export type VelocitySource =
  /** A point. */
  | { readonly kind: "point"; readonly velocity_kms: number }
  /** A thin ring. */
  | { readonly kind: "ring"; readonly velocity_kms: number; readonly centre_kms: number }
  /** An optically thin Keplerian disc, by the velocity of its outer edge. */
  | {
    readonly kind: "disc";
    readonly outer_kms: number;
    readonly centre_kms: number;
    readonly inner_over_outer: number;
    readonly emissivity_index: number;
  }
  /** A round rotating star. */
  | {
    readonly kind: "rotation";
    readonly vsini_kms: number;
    readonly centre_kms: number;
    readonly limb_darkening: number;
  };

/** The pixels of a detector and the optics before them. */
export interface PixelGrid {
  /** Edges of the pixels, N + 1 increasing values, km/s. */
  readonly edges_kms: ArrayLike<number>;
  /** Standard deviation of the Gaussian instrumental profile, pixel not included, km/s. */
  readonly sigma_kms: number;
}

/**
 * What pixels record of a source of unit light: its profile, convolved with a Gaussian instrument,
 * averaged over each pixel. Every share of the source is integrated over the pixel in closed form:
 * slow and exact, the reference for {@linkcode synthesize}.
 *
 * @param source The source.
 * @param pixels The pixels.
 * @returns Mean over each pixel, per km/s, N values.
 *
 * @example A pixel that holds all the light of a point
 * ```ts
 * import { pixelMeans } from "@millrace/millrace/synthesis";
 * import { assertAlmostEquals } from "@std/assert";
 *
 * const point = { kind: "point", velocity_kms: 10 } as const;
 * const [mean] = pixelMeans(point, { edges_kms: [-500, 500], sigma_kms: 30 });
 * assertAlmostEquals(mean! * 1000, 1, 1e-12);
 * ```
 */
export function pixelMeans(source: VelocitySource, pixels: PixelGrid): Float64Array {
  const { edges_kms, sigma_kms } = pixels;
  const means = new Float64Array(edges_kms.length - 1);
  const below = new Float64Array(edges_kms.length);
  for (const { velocity, light } of shares(source, sigma_kms)) {
    for (let k = 0; k < below.length; k++) {
      below[k] = erf((edges_kms[k]! - velocity) / (sigma_kms * Math.SQRT2));
    }
    for (let k = 0; k < means.length; k++) {
      means[k]! += light * (below[k + 1]! - below[k]!) / (2 * (edges_kms[k + 1]! - edges_kms[k]!));
    }
  }
  return means;
}

/** A source as shares of light, close enough for the Gaussian to make their sum exact. */
function* shares(
  source: VelocitySource,
  sigma_kms: number,
): Generator<{ velocity: number; light: number }> {
  switch (source.kind) {
    case "point":
      yield { velocity: source.velocity_kms, light: 1 };
      return;
    case "ring":
      yield* ringShares(source.velocity_kms, source.centre_kms, sigma_kms);
      return;
    case "disc": {
      const { inner_over_outer: inner, emissivity_index: beta, outer_kms, centre_kms } = source;
      // Even in speed: there the widths of the Gaussian are evenly spread.
      const fast = inner ** -0.5;
      const { nodes, weights } = legendre(40);
      const panels = Math.ceil((fast - 1) * outer_kms / (8 * sigma_kms)) + 1;
      const half = (fast - 1) / panels / 2;
      const total = radialLight([inner, 1], beta);
      for (let p = 0; p < panels; p++) {
        for (let k = 0; k < nodes.length; k++) {
          const u = 1 + (2 * p + 1 + nodes[k]!) * half;
          const light = weights[k]! * half * 2 * u ** (2 * beta - 5) / total;
          for (const share of ringShares(u * outer_kms, centre_kms, sigma_kms)) {
            yield { velocity: share.velocity, light: light * share.light };
          }
        }
      }
      return;
    }
    case "rotation": {
      const { vsini_kms, centre_kms, limb_darkening } = source;
      const { nodes, weights } = legendre(200);
      for (let k = 0; k < nodes.length; k++) {
        const angle = nodes[k]! * Math.PI / 2;
        const x = Math.sin(angle);
        const light = weights[k]! * Math.PI / 2 * Math.cos(angle) *
          rotationProfile(x, limb_darkening);
        yield { velocity: centre_kms + vsini_kms * x, light };
      }
    }
  }
}

/** A ring by the midpoint rule, which is of spectral accuracy for a periodic integrand. */
function* ringShares(
  speed: number,
  centre: number,
  sigma: number,
): Generator<{ velocity: number; light: number }> {
  const count = Math.ceil(10 * Math.abs(speed) / sigma) + 16;
  for (let k = 0; k < count; k++) {
    const angle = ((k + 0.5) / count - 0.5) * Math.PI;
    yield { velocity: centre + speed * Math.sin(angle), light: 1 / count };
  }
}
