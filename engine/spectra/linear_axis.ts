import { InputError } from "../errors.ts";
import type { FitsHeader } from "../fits/mod.ts";

/** Options of {@linkcode fitsAxis}. */
export interface FitsAxisOptions {
  /** Number of pixels along the axis. */
  readonly count: number;
  /**
   * Number of the axis, from 1.
   * @default 1
   */
  readonly axis?: number;
  /**
   * Row of the image, from 1, where each has its own dispersion.
   * @default 1
   */
  readonly row?: number;
  /** File, for messages. */
  readonly file?: string;
}

/** The linear keys of an axis. */
export interface LinearKeys {
  /** Value at the reference pixel. */
  readonly value: number;
  /** Step from pixel to pixel. */
  readonly step: number;
  /** Reference pixel, from 1. */
  readonly pixel: number;
  /** The keys that were used. */
  readonly keys: string;
}

/**
 * Reads the linear keys of an axis: CD before CDELT, PC counted; null when they are incomplete.
 *
 * @throws {InputError} When the step is 0, or a value is no number.
 */
export function linearKeys(header: FitsHeader, options: FitsAxisOptions): LinearKeys | null {
  const { axis = 1 } = options;
  const value = header.number(`CRVAL${axis}`);
  if (value === undefined) return null;
  const matrix = header.number(`CD${axis}_${axis}`);
  const delta = header.number(`CDELT${axis}`);
  const scale = header.number(`PC${axis}_${axis}`) ?? 1;
  const usesMatrix = matrix !== undefined && matrix !== 0;
  const step = usesMatrix ? matrix : delta === undefined ? matrix : delta * scale;
  if (step === undefined) return null;
  if (step === 0) {
    const key = delta === undefined
      ? `CD${axis}_${axis}`
      : delta === 0
      ? `CDELT${axis}`
      : `PC${axis}_${axis}`;
    throw refuseAxis("the step from pixel to pixel must not be 0", 0, {
      ...options,
      key,
      remedy: "mend the header",
    });
  }
  const keys = `CRVAL${axis}, ${usesMatrix ? `CD${axis}_${axis}` : `CDELT${axis}`}, CRPIX${axis}`;
  return { value, step, pixel: header.number(`CRPIX${axis}`) ?? 1, keys };
}

/** The error for an axis that cannot be read. */
export function refuseAxis(
  rule: string,
  value: unknown,
  options: FitsAxisOptions & { readonly key: string; readonly remedy: string },
): InputError {
  const { file, key, remedy } = options;
  return new InputError({
    action: "read wavelength axis",
    rule,
    value,
    key,
    remedy,
    ...(file === undefined ? {} : { file }),
  });
}

/** Wavelengths of all pixels. */
export function fillAxis(count: number, at: (pixel: number) => number): Float64Array {
  return Float64Array.from({ length: count }, (_, i) => at(i + 1));
}
