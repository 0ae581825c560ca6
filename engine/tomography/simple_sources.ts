import { CholeskyDecomposition, Matrix } from "ml-matrix";
import { nonNegativeLeastSquares } from "../numerics/mod.ts";
import type { MapPlace } from "./axisymmetric_part.ts";
import { freeBaselines } from "./baseline.ts";
import { blendProjector } from "./blend_projector.ts";
import type { TrailSamples } from "./check_trail.ts";
import type { InversionRecipe } from "./invert_trail.ts";
import type { LinearOperator } from "./linear_operator.ts";
import type { Samples } from "./map_fit.ts";
import { mapStep } from "./map_shape.ts";

/** Options of {@linkcode fitSimpleSources}. */
export interface SimpleSourcesOptions {
  /** How the map is made: its shape, blends, sign, baselines are taken. */
  readonly recipe: InversionRecipe;
  /** Resolution (FWHM) of the map, km/s. */
  readonly resolution_kms: number;
  /**
   * Centre of the disc: the accretor, (0, −K1).
   *
   * @default {{ vx_kms: 0, vy_kms: 0 }}
   */
  readonly centre?: MapPlace;
}

/** A spot, or what is as compact as that. */
export interface SpotPlace extends MapPlace {
  /**
   * Its shape as a map shows it, pixels²; the fit may take it in place of a round spot.
   *
   * @default {a round spot}
   */
  readonly shape?: Float64Array;
}

/** Rings stand so far apart, resolutions. */
const RING_STEP = 0.5;

/** Full widths at half maximum of a spot, resolutions: the fit shares its flux among them. */
const SPOT_WIDTHS = [0.7, 1.4, 2.8];

const UNMOVED: MapPlace = { vx_kms: 0, vy_kms: 0 };

/** Added to the diagonal, so that what the data do not tell stays small. */
const RIDGE = 1e-6;

/**
 * Fits the simplest source to a trail: a perfectly round disc of any profile and spots at given places,
 * none of them negative (of either sign for a signed map), by weighted least squares on the data
 * themselves. No inversion takes part, so that what an inversion makes of such a source can be told.
 *
 * @param trail Exposures, data, errors.
 * @param options Recipe, resolution, centre of the disc.
 * @returns A function from the places of spots, and how far the disc's centre is moved, to the best image,
 * pixels²; the sign of a line in absorption is turned.
 *
 * @example A round disc is found as it is
 * ```ts
 * import { fitSimpleSources, makeProjector } from "@millrace/millrace/tomography";
 * import { assertAlmostEquals } from "@std/assert";
 *
 * const count = 20, bins = 61;
 * const sampling = {
 *   count,
 *   phase: Float64Array.from({ length: count }, (_, i) => i / count),
 *   cycle: new Float64Array(count),
 *   phase_width: new Float64Array(count),
 *   start: Uint32Array.from({ length: count + 1 }, (_, i) => i * bins),
 *   velocity_kms: Float64Array.from({ length: count * bins }, (_, k) => 20 * (k % bins - 30)),
 *   pixel_kms: new Float64Array(count * bins).fill(20),
 *   profile_sigma_kms: new Float64Array(count).fill(40),
 * };
 * const shape = { pixels: 41, half_width_kms: 400, systemic_kms: 0 };
 * const disc = Float64Array.from({ length: 41 * 41 }, (_, k) =>
 *   Math.exp(-0.5 * ((k % 41 - 20) ** 2 + (Math.floor(k / 41) - 20) ** 2) / 36)
 * );
 * const flux = makeProjector(sampling, shape).forward(disc);
 * const fit = fitSimpleSources({ sampling, flux, error: flux.map(() => 1) }, {
 *   recipe: { inversion: "back-projection", ...shape },
 *   resolution_kms: 94,
 * });
 * assertAlmostEquals(fit([])[20 * 41 + 20] ?? NaN, 1, 0.05);
 * ```
 */
export function fitSimpleSources(
  trail: TrailSamples,
  options: SimpleSourcesOptions,
): (places: readonly SpotPlace[], moved?: MapPlace) => Float64Array {
  const { recipe, centre = { vx_kms: 0, vy_kms: 0 }, resolution_kms } = options;
  const signed = "signed" in recipe && recipe.signed === true;
  const { operator, samples } = problemOf(trail, recipe);
  const weight = samples.error.map((e) => e === Infinity ? 0 : 1 / (e * e));
  const weighed = (values: Float64Array) =>
    operator.adjoint(values.map((f, k) => f * weight[k]!)).slice();
  const target = weighed(samples.flux);
  const known = new Map<string, Column>();
  const column = (key: string, image: () => Float64Array): Column => {
    const old = known.get(key);
    if (old !== undefined) return old;
    const made = image();
    const one = { image: made, seen: weighed(operator.forward(made)) };
    known.set(key, one);
    return one;
  };
  const step = Math.max(mapStep(recipe), RING_STEP * resolution_kms);
  const rings = Math.floor(recipe.half_width_kms / step) + 1;
  return (places, moved = UNMOVED) => {
    const middle = { vx_kms: centre.vx_kms + moved.vx_kms, vy_kms: centre.vy_kms + moved.vy_kms };
    const disc = Array.from(
      { length: rings },
      (_, ring) =>
        column(
          `ring ${ring} ${middle.vx_kms} ${middle.vy_kms}`,
          () => ringImage(recipe, { centre: middle, ring, step }),
        ),
    );
    const spots = places.flatMap((place) => [
      ...(place.shape === undefined
        ? []
        : [column(`${place.vx_kms} ${place.vy_kms} shape`, () => place.shape!)]),
      ...SPOT_WIDTHS.map((width) =>
        column(
          `${place.vx_kms} ${place.vy_kms} ${width}`,
          () => spotImage(recipe, { place, fwhm_kms: width * resolution_kms }),
        )
      ),
    ]);
    return sumOf([...disc, ...spots], { target, signed });
  };
}

interface Column {
  /** Image of unit strength. */
  readonly image: Float64Array;
  /** What the weighted data of it are back on the map: its products with other images are those of data. */
  readonly seen: Float64Array;
}

/** The data as the recipe takes them, and the operator that makes them. */
function problemOf(
  trail: TrailSamples,
  recipe: InversionRecipe,
): { operator: LinearOperator; samples: Samples } {
  const { sampling, error } = trail;
  const turn = "absorption" in recipe && recipe.absorption === true ? -1 : 1;
  const flux = trail.flux.map((f, k) => error[k] === Infinity ? 0 : turn * f);
  const members = "blends" in recipe ? recipe.blends ?? [] : [];
  const operator = blendProjector(sampling, { ...recipe, members });
  const samples = { flux, error };
  return "free_baselines" in recipe && recipe.free_baselines === true
    ? freeBaselines(operator, { sampling, samples })
    : { operator, samples };
}

/** The best sum of columns, by their normal equations. */
function sumOf(
  columns: readonly Column[],
  { target, signed }: { readonly target: Float64Array; readonly signed: boolean },
): Float64Array {
  const size = columns.length;
  const scale = columns.map(({ image, seen }) => 1 / Math.sqrt(Math.max(dot(image, seen), 1e-300)));
  const products = Matrix.zeros(size, size);
  columns.forEach(({ image }, i) => {
    for (let j = 0; j <= i; j++) {
      const value = scale[i]! * scale[j]! * dot(image, columns[j]!.seen) + (i === j ? RIDGE : 0);
      products.set(i, j, value);
      products.set(j, i, value);
    }
  });
  const right = columns.map(({ image }, i) => scale[i]! * dot(image, target));
  const lower = new CholeskyDecomposition(products).lowerTriangularMatrix;
  const data = forwardSolved(lower, right);
  const strength = signed
    ? backSolved(lower, data)
    : nonNegativeLeastSquares(lower.transpose(), data);
  const out = new Float64Array(target.length);
  columns.forEach(({ image }, i) => {
    const factor = strength[i]! * scale[i]!;
    if (factor === 0) return;
    for (let k = 0; k < out.length; k++) out[k] = out[k]! + factor * image[k]!;
  });
  return out;
}

function dot(a: Float64Array, b: Float64Array): number {
  let sum = 0;
  for (let k = 0; k < a.length; k++) if (a[k] !== 0) sum += a[k]! * b[k]!;
  return sum;
}

function forwardSolved(lower: Matrix, right: readonly number[]): Float64Array {
  const out = new Float64Array(right.length);
  for (let i = 0; i < out.length; i++) {
    let value = right[i]!;
    for (let j = 0; j < i; j++) value -= lower.get(i, j) * out[j]!;
    out[i] = value / lower.get(i, i);
  }
  return out;
}

function backSolved(lower: Matrix, data: Float64Array): Float64Array {
  const out = new Float64Array(data.length);
  for (let i = out.length - 1; i >= 0; i--) {
    let value = data[i]!;
    for (let j = i + 1; j < out.length; j++) value -= lower.get(j, i) * out[j]!;
    out[i] = value / lower.get(i, i);
  }
  return out;
}

/** A ring whose profile rises and falls linearly from one ring to the next. */
function ringImage(
  shape: InversionRecipe,
  { centre, ring, step }: {
    readonly centre: MapPlace;
    readonly ring: number;
    readonly step: number;
  },
): Float64Array {
  return imageOf(shape, centre, (speed) => Math.max(0, 1 - Math.abs(speed / step - ring)));
}

function spotImage(
  shape: InversionRecipe,
  { place, fwhm_kms }: { readonly place: MapPlace; readonly fwhm_kms: number },
): Float64Array {
  const variance = (Math.max(fwhm_kms, 2 * mapStep(shape))) ** 2 / (8 * Math.LN2);
  return imageOf(shape, place, (speed) => Math.exp(-0.5 * speed * speed / variance));
}

function imageOf(
  shape: InversionRecipe,
  centre: MapPlace,
  profile: (speed_kms: number) => number,
): Float64Array {
  const { pixels, half_width_kms } = shape;
  const step = mapStep(shape);
  return Float64Array.from({ length: pixels * pixels }, (_, k) => {
    const vx = (k % pixels) * step - half_width_kms - centre.vx_kms;
    const vy = Math.floor(k / pixels) * step - half_width_kms - centre.vy_kms;
    return profile(Math.hypot(vx, vy));
  });
}
