import type { Trail } from "../trail/mod.ts";
import type { CircularFit } from "./circular_fit.ts";
import {
  type DiagnosticDiagram,
  diagnosticDiagram,
  type DiagnosticOptions,
} from "./diagnostic_diagram.ts";
import { fitOrNull } from "./fit_or_null.ts";
import { type LightCentre, lightCentre } from "./light_centre.ts";
import { exposureProfile, type LineProfile } from "./line_profile.ts";
import { findPlateau, type Plateau, type PlateauOptions } from "./plateau.ts";
import { bisectorVelocity, centroidVelocity, type ProfileVelocity } from "./profile_velocity.ts";
import type { VelocityCurve } from "./velocity_curve.ts";

/** A velocity curve and the orbit through it. */
export interface FittedCurve {
  /** The velocities. */
  readonly curve: VelocityCurve;
  /** The orbit; null when it could not be fitted. */
  readonly fit: CircularFit | null;
  /** Whether it counts as a measurement of the star. */
  readonly measured: boolean;
  /** Why not; empty when it does. */
  readonly reasons: readonly string[];
}

/** What one line says of the accretor. */
export interface AccretorLine {
  /** The diagnostic diagram. */
  readonly diagram: DiagnosticDiagram;
  /** Its plateau, or why there is none. */
  readonly plateau: Plateau;
  /** The light-centre diagram. */
  readonly light_centre: LightCentre;
  /** Curves: two Gaussians first, then bisector and centroid, which are no measurements of the star. */
  readonly curves: readonly FittedCurve[];
}

function curveOf(trail: Trail, method: string, measure: (p: LineProfile) => ProfileVelocity) {
  const { sampling } = trail;
  const found = Array.from(
    { length: sampling.count },
    (_, i) => measure(exposureProfile(trail, i)),
  );
  return {
    line: trail.line.name,
    method,
    star: "accretor",
    orbits: sampling.phase.map((phase, i) => phase + sampling.cycle[i]!),
    exposure_orbits: sampling.phase_width,
    velocity_kms: Float64Array.from(found, (v) => v.velocity_kms),
    error_kms: Float64Array.from(found, (v) => v.error_kms),
  } as const;
}

/**
 * Measures an emission line of the disc for the accretor's motion: two Gaussians over many
 * separations with the plateau's rule, the light centre as a witness, and bisector and centroid for
 * comparison.
 *
 * @param trail The line's trail.
 * @param options Diagram and plateau.
 * @returns Diagram, plateau and curves.
 * @throws {InputError} When separations or width are not positive and increasing.
 *
 * @example
 * ```ts
 * import type { Trail } from "@millrace/millrace/trail";
 * import { measureAccretor } from "@millrace/millrace/orbit";
 *
 * function speed(trail: Trail): number | null {
 *   const { plateau } = measureAccretor(trail);
 *   return plateau.accepted ? plateau.fit!.k_kms : null;
 * }
 * ```
 */
export function measureAccretor(
  trail: Trail,
  options: DiagnosticOptions & PlateauOptions = {},
): AccretorLine {
  const diagram = diagnosticDiagram(trail, options);
  const plateau = findPlateau(diagram, options);
  const curves: FittedCurve[] = [];
  if (plateau.curve) {
    curves.push({
      curve: plateau.curve,
      fit: plateau.fit,
      measured: plateau.accepted,
      reasons: plateau.reasons,
    });
  }
  const witnesses = [
    curveOf(trail, "bisector", (profile) => bisectorVelocity(profile)),
    curveOf(trail, "centroid", (profile) => centroidVelocity(profile)),
  ];
  for (const curve of witnesses) {
    const reasons = ["follows all of the line's light, spot and stream included"];
    curves.push({ curve, fit: fitOrNull(curve), measured: false, reasons });
  }
  return { diagram, plateau, light_centre: lightCentre(diagram), curves };
}
