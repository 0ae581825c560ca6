import { z } from "zod";
import { nonNegative, number, positive, range } from "./common.ts";

/** `[trail]`: continuum, phases and masks. */
export interface TrailSettings {
  /** Divide by the continuum, or scale calibrated fluxes. */
  readonly continuum: "divide" | "scale";
  /** Order of the continuum polynomial. */
  readonly continuum_order: number;
  /** Phases left out, cycles; a range may pass 1. */
  readonly skip_phases: readonly (readonly [number, number])[];
  /** Number of phase bins; 0 keeps every exposure on its own. */
  readonly phase_bins: number;
  /** Whether cosmic rays are searched and masked. */
  readonly cosmic_rays: boolean;
  /** Kept lists masked in the observer's frame. */
  readonly mask: readonly ("sky" | "telluric" | "interstellar")[];
  /** More masks in the observer's frame, Å. */
  readonly mask_observed_angstrom: readonly (readonly [number, number])[];
  /** Factor on the stated errors, or "measured". */
  readonly noise_scale: number | "measured";
}

/** Schema of TrailSettings. */
export const trailSection: z.ZodType<TrailSettings> = z.strictObject({
  continuum: z.enum(["divide", "scale"]).default("divide"),
  continuum_order: number.int().gte(0).lte(5).default(1),
  skip_phases: z.array(range).default([]),
  phase_bins: nonNegative.int().default(0),
  cosmic_rays: z.boolean().default(true),
  mask: z.array(z.enum(["sky", "telluric", "interstellar"])).default([]),
  mask_observed_angstrom: z.array(range).default([]),
  noise_scale: z.union([positive, z.literal("measured")], {
    error: 'must be a positive number or "measured"',
  }).default("measured"),
});
