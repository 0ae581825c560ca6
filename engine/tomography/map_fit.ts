import { InputError } from "../errors.ts";

/** Samples with their errors. */
export interface Samples {
  /** Normalised flux minus one, one value per sample. */
  readonly flux: Float64Array;
  /** One standard deviation, the same layout; infinite where masked. */
  readonly error: Float64Array;
}

/** How well a model's data meet the observed ones. */
export interface MapFit {
  /** The model, scaled; laid out as the data. */
  readonly model: Float64Array;
  /** Factor the model was multiplied by. */
  readonly scale: number;
  /** Σ ((data − model)/error)² over the unmasked samples. */
  readonly chi_square: number;
  /** Number of unmasked samples, N. */
  readonly sample_count: number;
  /** Chi-square over N. */
  readonly reduced_chi_square: number;
}

/** Options of {@linkcode fitOfMap}. */
export interface FitOfMapOptions {
  /**
   * `fitted`: the factor that makes chi-square least, right for back-projection, whose map is
   * smoother than the truth. A number: that factor.
   *
   * @default {1}
   */
  readonly scale?: number | "fitted";
}

/**
 * Measures a model against data.
 *
 * @param samples Data and errors.
 * @param options The model's values (as `forward` of a projector gives them) and the scale.
 * @returns Scaled model and chi-square.
 * @throws {InputError} When every sample is masked or an error is not positive.
 *
 * @example
 * ```ts
 * import { fitOfMap } from "@millrace/millrace/tomography";
 * import { assertEquals } from "@std/assert";
 *
 * const samples = { flux: Float64Array.of(2, 4, 99), error: Float64Array.of(1, 1, Infinity) };
 * const fit = fitOfMap(samples, { model: Float64Array.of(1, 2, 3), scale: "fitted" });
 * assertEquals(fit.scale, 2);
 * assertEquals(fit.reduced_chi_square, 0);
 * ```
 */
export function fitOfMap(
  samples: Samples,
  options: FitOfMapOptions & { readonly model: Float64Array },
): MapFit {
  const { model, scale = 1 } = options;
  const { flux, error } = samples;
  let cross = 0, square = 0, count = 0;
  for (let k = 0; k < flux.length; k++) {
    const e = error[k]!;
    if (!(e > 0)) {
      throw new InputError({
        action: "compare map with data",
        rule: "errors must be positive (infinite where masked)",
        value: e,
      });
    }
    if (e === Infinity) continue;
    count++;
    cross += model[k]! * flux[k]! / (e * e);
    square += model[k]! * model[k]! / (e * e);
  }
  if (count === 0) {
    throw new InputError({
      action: "compare map with data",
      rule: "at least one sample must be unmasked",
      value: 0,
    });
  }
  const factor = scale !== "fitted" ? scale : square > 0 ? cross / square : 0;
  let chi_square = 0;
  for (let k = 0; k < flux.length; k++) {
    if (error[k] === Infinity) continue;
    chi_square += ((flux[k]! - factor * model[k]!) / error[k]!) ** 2;
  }
  return {
    model: model.map((m) => factor * m),
    scale: factor,
    chi_square,
    sample_count: count,
    reduced_chi_square: chi_square / count,
  };
}
