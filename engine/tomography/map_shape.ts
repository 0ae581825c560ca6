import { InputError } from "../errors.ts";

/** Size of a velocity map. */
export interface MapShape {
  /** Pixels along each side, odd. */
  readonly pixels: number;
  /** Velocity of the centre of the outermost pixel, km/s. */
  readonly half_width_kms: number;
}

/**
 * Refuses a map whose shape cannot be.
 *
 * @param shape Pixels along a side and half-width.
 * @throws {InputError} When the number of pixels is not odd and at least 3, or the half-width is
 * not positive.
 *
 * @example
 * ```ts
 * import { checkMapShape } from "@millrace/millrace/tomography";
 * import { assertThrows } from "@std/assert";
 *
 * assertThrows(() => checkMapShape({ pixels: 200, half_width_kms: 2000 }));
 * ```
 */
export function checkMapShape(shape: MapShape): void {
  const { pixels, half_width_kms } = shape;
  if (!Number.isInteger(pixels) || pixels < 3 || pixels % 2 === 0) {
    throw new InputError({
      action: "make velocity map",
      rule: "the number of pixels along a side must be odd and at least 3",
      value: pixels,
      key: "map.pixels",
      remedy: "an odd number puts the middle pixel at (0, 0)",
    });
  }
  if (!(half_width_kms > 0) || !Number.isFinite(half_width_kms)) {
    throw new InputError({
      action: "make velocity map",
      rule: "half-width must be positive",
      value: half_width_kms,
      unit: "km/s",
      key: "map.half_width_kms",
    });
  }
}

/**
 * Distance between the centres of neighbouring map pixels.
 *
 * @param shape Pixels along a side and half-width.
 * @returns Step, km/s; its square is the pixel's area.
 *
 * @example
 * ```ts
 * import { mapStep } from "@millrace/millrace/tomography";
 * import { assertEquals } from "@std/assert";
 *
 * assertEquals(mapStep({ pixels: 201, half_width_kms: 2000 }), 20);
 * ```
 */
export function mapStep(shape: MapShape): number {
  return 2 * shape.half_width_kms / (shape.pixels - 1);
}
