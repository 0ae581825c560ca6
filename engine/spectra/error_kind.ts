/** What a column, band or HDU beside a spectrum holds. */
export type Beside =
  | "error"
  | "variance"
  | "inverse-variance"
  | "mask"
  | "wavelength"
  | "log-wavelength";

const NAMES: readonly (readonly [RegExp, Beside])[] = [
  [/^(IVAR|INVVAR|INVERSE_?VARIANCE|WEIGHT|WGT)(_?FLUX)?$/, "inverse-variance"],
  [/^(VAR|VARIANCE|STAT)(_?FLUX)?$|^FLUX_?VAR(IANCE)?$/, "variance"],
  [
    /^(ERR|ERROR|ERRORS|ERRS|ERRDATA|SIG|SIGMA|STD|STDDEV|UNC|UNCERT|UNCERTAINTY|NOISE|DFLUX|E_?FLUX)(_?FLUX|_?SPEC)?$|^(FLUX|SPEC)_?(ERR|ERROR|SIGMA|SIG|UNC|STD)$/,
    "error",
  ],
  [/^(MASK|DQ|QUAL|QUALITY|FLAG|FLAGS|BPM|AND_?MASK|BADPIX|MASKED)$/, "mask"],
  [/^(LOG_?LAM|LOG_?LAMBDA|LOG_?WAVE|LOG_?WAVELENGTH|LOGWL)$/, "log-wavelength"],
  [
    /^(WAVE|WAVES|WAVELENGTH|WAVELENGTHS|LAMBDA|LAM|WL|WAV|AWAV|(WAVE|WAVELENGTH|LAMBDA)_?(AIR|VAC|VACUUM|OBS|NM|ANGSTROM|A)|(AIR|VAC|VACUUM)_?(WAVE|WAVELENGTH|LAMBDA))$/,
    "wavelength",
  ],
];

/**
 * What a column, band or HDU holds, by its name.
 *
 * @param name Its name, in any case.
 * @returns What it holds; null when it is none of these.
 *
 * @example
 * ```ts
 * import { besideOf } from "@millrace/millrace/spectra";
 * import { assertEquals } from "@std/assert";
 *
 * assertEquals(["ivar", "FLUX_ERR", "loglam", "flux"].map(besideOf), [
 *   "inverse-variance",
 *   "error",
 *   "log-wavelength",
 *   null,
 * ]);
 * ```
 */
export function besideOf(name: string): Beside | null {
  const plain = name.trim().toUpperCase().replace(/[\s-]+/g, "_");
  return NAMES.find(([pattern]) => pattern.test(plain))?.[1] ?? null;
}

/**
 * Standard deviations from what stands beside a spectrum.
 *
 * @param values Errors, variances or inverse variances.
 * @param kind Which of them they are.
 * @returns One standard deviation; infinite (masked) where an inverse variance is 0, or a value is
 * negative or not finite.
 *
 * @example
 * ```ts
 * import { errorFrom } from "@millrace/millrace/spectra";
 * import { assertEquals } from "@std/assert";
 *
 * assertEquals(errorFrom(Float64Array.of(4, 0), "inverse-variance"), Float64Array.of(0.5, Infinity));
 * ```
 */
export function errorFrom(
  values: Float64Array,
  kind: "error" | "variance" | "inverse-variance",
): Float64Array {
  return values.map((value) => {
    if (!Number.isFinite(value) || !(value > 0)) return Infinity;
    if (kind === "error") return value;
    return kind === "variance" ? Math.sqrt(value) : 1 / Math.sqrt(value);
  });
}

/**
 * Sets masked samples: their error becomes infinite.
 *
 * @param error One standard deviation; null when there is none.
 * @param mask Zero where a sample is good.
 * @returns New errors; without errors, NaN where good, which a later estimate fills.
 *
 * @example
 * ```ts
 * import { withMask } from "@millrace/millrace/spectra";
 * import { assertEquals } from "@std/assert";
 *
 * assertEquals(withMask(Float64Array.of(1, 2), Float64Array.of(0, 4)), Float64Array.of(1, Infinity));
 * ```
 */
export function withMask(error: Float64Array, mask: Float64Array): Float64Array {
  return error.map((e, i) => mask[i] === 0 ? e : Infinity);
}
