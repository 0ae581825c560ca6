import { InputError } from "../errors.ts";
import { type CircularFit, fitCircular } from "./circular_fit.ts";
import { FEWEST_VELOCITIES, type VelocityCurve } from "./velocity_curve.ts";

/** The orbit of a curve, or null when its velocities are too few or phases too bunched. */
export function fitOrNull(curve: VelocityCurve): CircularFit | null {
  const measured = curve.error_kms.reduce((sum, e) => sum + (e < Infinity ? 1 : 0), 0);
  if (measured < FEWEST_VELOCITIES) return null;
  try {
    return fitCircular(curve);
  } catch (error) {
    if (error instanceof InputError) return null;
    throw error;
  }
}
