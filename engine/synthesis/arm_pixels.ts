import { InputError } from "../errors.ts";
import { airToVacuum } from "../sky/mod.ts";
import type { Arm } from "./observation.ts";
import { legendre } from "./quadrature.ts";

/** Places in a pixel whose mean is the pixel's: exact to 1e-4 for a profile of 1.2 pixels. */
export const PLACES = 4;

const FWHM_PER_SIGMA = Math.sqrt(8 * Math.LN2);
const LEAST_PIXELS = 1.2;

/** An arm's pixels. */
export interface ArmPixels {
  /** Centres in the stated medium, N values, Å. */
  readonly wavelength_angstrom: Float64Array;
  /** Wavelength in vacuum of each pixel's places, N × PLACES, Å. */
  readonly places_vacuum_angstrom: Float64Array;
  /** The places, in pixels from the centre. */
  readonly places: Float64Array;
  /** Weights of the places, which add up to one. */
  readonly weights: Float64Array;
  /** Standard deviation of the optics, pixel not included, Å. */
  readonly optics_sigma_angstrom: number;
}

/** Checks an arm and lays out its pixels, shifted by a share of one. */
export function armPixels(arm: Arm, shift = 0): ArmPixels {
  const { first_angstrom, step_angstrom, pixels, resolution_angstrom, medium = "air" } = arm;
  if (!(first_angstrom > 0 && step_angstrom > 0 && Number.isInteger(pixels) && pixels >= 2)) {
    throw new InputError({
      action: "lay out pixels",
      rule: "an arm must have a positive first wavelength and pixel width, and two pixels or more",
      value: [first_angstrom, step_angstrom, pixels],
    });
  }
  if (!(resolution_angstrom >= LEAST_PIXELS * step_angstrom)) {
    throw new InputError({
      action: "lay out pixels",
      rule: `the resolution must be at least ${LEAST_PIXELS} pixels, ${
        (LEAST_PIXELS * step_angstrom).toPrecision(4)
      } Å`,
      value: resolution_angstrom,
      unit: "Å",
      key: "resolution_angstrom",
    });
  }
  const { nodes, weights } = legendre(PLACES);
  const wavelength_angstrom = new Float64Array(pixels);
  const places_vacuum_angstrom = new Float64Array(pixels * PLACES);
  for (let n = 0; n < pixels; n++) {
    const middle = first_angstrom + (n + shift) * step_angstrom;
    wavelength_angstrom[n] = middle;
    for (let p = 0; p < PLACES; p++) {
      const place = middle + nodes[p]! * step_angstrom / 2;
      places_vacuum_angstrom[n * PLACES + p] = medium === "air" ? airToVacuum(place) : place;
    }
  }
  const recorded = resolution_angstrom / FWHM_PER_SIGMA;
  return {
    wavelength_angstrom,
    places_vacuum_angstrom,
    places: Float64Array.from(nodes, (node) => node / 2),
    weights: Float64Array.from(weights, (weight) => weight / 2),
    optics_sigma_angstrom: Math.sqrt(recorded ** 2 - step_angstrom ** 2 / 12),
  };
}

/** Where a wavelength given in air lies on an arm's own scale. */
export function onArm(air_angstrom: number, arm: Arm): number {
  return (arm.medium ?? "air") === "air" ? air_angstrom : airToVacuum(air_angstrom);
}

/** Wavelength in the middle of an arm, in its medium, Å. */
export function armMiddle(arm: Arm): number {
  return arm.first_angstrom + (arm.pixels - 1) / 2 * arm.step_angstrom;
}
