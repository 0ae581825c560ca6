import { InputError } from "../errors.ts";

/** Information criteria of one fit; only their differences between fits of the same data count. */
export interface InformationCriteria {
  /** Akaike's criterion. */
  readonly aic: number;
  /** The same corrected for small samples; Infinity when parameters are too many for it. */
  readonly aicc: number;
  /** Schwarz's (Bayesian) criterion. */
  readonly bic: number;
}

/**
 * AIC, AICc and BIC (Akaike 1974; Burnham & Anderson 2002; Schwarz 1978). For known errors give chi-square;
 * when errors are known only to a common factor, counted among the parameters, give
 * n ln(rss/n) instead.
 *
 * @param misfit Chi-square, or n ln(rss/n).
 * @param options Sizes of the fit.
 * @param options.parameters Number k of free parameters, not necessarily whole.
 * @param options.samples Number n of data.
 * @returns The three criteria.
 * @throws {InputError} When there are no samples or fewer than 0 parameters.
 *
 * @example
 * ```ts
 * import { informationCriteria } from "@millrace/millrace/numerics";
 * import { assertAlmostEquals } from "@std/assert";
 *
 * const { aicc } = informationCriteria(43.2, { parameters: 3, samples: 40 });
 * assertAlmostEquals(aicc, 43.2 + 6 + 24 / 36, 1e-12);
 * ```
 */
export function informationCriteria(
  misfit: number,
  { parameters, samples }: { parameters: number; samples: number },
): InformationCriteria {
  if (!(samples >= 1 && parameters >= 0)) {
    throw new InputError({
      action: "find information criteria",
      rule: "there must be samples, and no fewer than 0 parameters",
      value: { parameters, samples },
    });
  }
  const aic = misfit + 2 * parameters;
  const spare = samples - parameters - 1;
  const correction = spare > 0 ? 2 * parameters * (parameters + 1) / spare : Infinity;
  return { aic, aicc: aic + correction, bic: misfit + parameters * Math.log(samples) };
}
