import { SPEED_OF_LIGHT_KMS } from "../constants.ts";
import { InputError } from "../errors.ts";
import { median } from "../numerics/mod.ts";
import type { Trail } from "../trail/mod.ts";
import type { CircularFit } from "./circular_fit.ts";
import { measureWings } from "./wing_root.ts";
import { fitOrNull } from "./fit_or_null.ts";
import { exposureMean } from "./exposure_mean.ts";
import { exposureProfile, type LineProfile } from "./line_profile.ts";
import type { VelocityCurve } from "./velocity_curve.ts";
import { scanWings } from "./wing_scan.ts";

/** The orbit that one separation of the two Gaussians gives. */
export interface DiagnosticRow {
  /** Half the separation of the Gaussians, km/s: the speed of the gas they sample. */
  readonly half_separation_kms: number;
  /** Velocities at this separation. */
  readonly curve: VelocityCurve;
  /** The orbit through them, errors with jitter; null when too few were measured. */
  readonly fit: CircularFit | null;
  /** σ_K/K; null without an orbit. */
  readonly relative_error: number | null;
  /** Exposures measured over exposures in all. */
  readonly measured: number;
  /** Median error of a velocity, km/s; infinite when none was measured. */
  readonly typical_error_kms: number;
  /** Red shift that relativity expects γ to have here, over that of slow gas, km/s. */
  readonly expected_drift_kms: number;
}

/** Orbits against separation: the diagnostic diagram. */
export interface DiagnosticDiagram {
  /** Name of the line. */
  readonly line: string;
  /** Standard deviation of the Gaussians, km/s. */
  readonly sigma_kms: number;
  /** Rows of increasing separation, A of them. */
  readonly rows: readonly DiagnosticRow[];
  /**
   * For each exposure the covariance of its velocities at all separations, A × A, row-major, stride
   * A, (km/s)²: neighbouring separations share pixels. 0 where not measured.
   */
  readonly covariance: readonly Float64Array[];
}

/** Options of {@linkcode diagnosticDiagram}. */
export interface DiagnosticOptions {
  /** Half separations, km/s. @default {from σ beyond the half-maximum of the mean profile to where its wings end, every half σ} */
  readonly half_separations_kms?: readonly number[];
  /** Standard deviation of the Gaussians, km/s. @default {100, or twice the instrumental one if that is more} */
  readonly sigma_kms?: number;
  /** Inclination, degrees, for the expected drift of γ. @default {90, which gives the least drift} */
  readonly inclination_deg?: number;
}

/**
 * Red shift of gas in a Keplerian disc that is seen at a projected speed, over gas at rest: with
 * V/c = λ/λ₀ − 1 the two wings' mean is red by 1.5 v²/c, of which v²/2c is the Doppler effect of
 * second order (V²/2c of it in the line of sight, the rest transverse) and v²/c gravitational.
 *
 * @param speed_kms Projected speed V, km/s.
 * @param options Inclination: v = V/sin i.
 * @returns Red shift, km/s.
 *
 * @example
 * ```ts
 * import { expectedDrift } from "@millrace/millrace/orbit";
 * import { assertAlmostEquals } from "@std/assert";
 *
 * assertAlmostEquals(expectedDrift(1000), 5.0, 0.01);
 * ```
 */
export function expectedDrift(speed_kms: number, options: {
  /** @default {90} */
  readonly inclination_deg?: number;
} = {}): number {
  const sine = Math.sin((options.inclination_deg ?? 90) * Math.PI / 180);
  return 1.5 * (speed_kms / sine) ** 2 / SPEED_OF_LIGHT_KMS.value;
}

/** Centre, half-width at half maximum and reach of a mean profile, km/s. */
function extentOf(profile: LineProfile) {
  const { velocity_kms, flux, error } = profile;
  let peak = 0, net = 0, moment = 0;
  flux.forEach((f, k) => {
    if (Math.abs(f) > Math.abs(peak)) peak = f;
    net += f;
    moment += f * velocity_kms[k]!;
  });
  const centre = net === 0 ? 0 : moment / net;
  const widest = (level: (k: number) => number) => {
    let reach = 0;
    flux.forEach((f, k) => {
      if (f * Math.sign(peak) > level(k)) {
        reach = Math.max(reach, Math.abs(velocity_kms[k]! - centre));
      }
    });
    return reach;
  };
  return {
    centre,
    half_width: widest(() => Math.abs(peak) / 2),
    reach: widest((k) => Math.max(0.03 * Math.abs(peak), 3 * error[k]!)),
  };
}

function defaultSeparations(trail: Trail, sigma_kms: number): number[] {
  const { half_width, reach } = extentOf(exposureMean(trail));
  // The inner flank of the Gaussians clear of the peaks, where rim and spot are.
  const first = Math.max(half_width, sigma_kms) + sigma_kms;
  const step = sigma_kms / 2;
  const count = Math.min(40, Math.max(1, Math.floor((reach - first) / step) + 1));
  return Array.from({ length: count }, (_, k) => first + k * step);
}

/**
 * Measures every exposure with two Gaussians at many separations and fits an orbit to each: the
 * diagnostic diagram (Shafter, Szkody & Thorstensen 1986, ApJ 308, 765). Where K, γ and the phase
 * of crossing no longer change with separation the wings may follow the accretor; where σ_K/K
 * rises steeply they are lost in noise.
 *
 * @param trail The line's trail.
 * @param options Separations and width.
 * @returns A row per separation.
 * @throws {InputError} When separations or width are not positive and increasing.
 *
 * @example
 * ```ts
 * import type { Trail } from "@millrace/millrace/trail";
 * import { diagnosticDiagram } from "@millrace/millrace/orbit";
 *
 * function speeds(trail: Trail): (number | undefined)[] {
 *   return diagnosticDiagram(trail).rows.map((row) => row.fit?.k_kms);
 * }
 * ```
 */
export function diagnosticDiagram(
  trail: Trail,
  options: DiagnosticOptions = {},
): DiagnosticDiagram {
  const { sampling } = trail;
  const instrument = median(sampling.profile_sigma_kms);
  const { sigma_kms = Math.max(100, 2 * instrument), inclination_deg = 90 } = options;
  const separations = options.half_separations_kms ?? defaultSeparations(trail, sigma_kms);
  const rising = separations.every((a, k) => a > (separations[k - 1] ?? 0) && a < Infinity);
  if (!(sigma_kms > 0) || separations.length === 0 || !rising) {
    throw new InputError({
      action: `measure wings of ${trail.line.name}`,
      rule: "half separations and width must be positive, and the former increasing",
      value: [...separations, sigma_kms],
      unit: "km/s",
    });
  }
  const count = sampling.count, width = separations.length;
  const velocity = separations.map(() => new Float64Array(count).fill(NaN));
  const error = separations.map(() => new Float64Array(count).fill(Infinity));
  const { centre } = extentOf(exposureMean(trail));
  const covariance = Array.from({ length: count }, (_, i) => {
    const scan = scanWings(exposureProfile(trail, i), sigma_kms);
    const kernels = separations.map((half_separation_kms, a) => {
      const found = measureWings(scan, {
        half_separation_kms,
        sigma_kms,
        near_kms: centre,
        search_kms: Math.min(half_separation_kms, 1000),
      });
      if (!(found.error_kms < Infinity)) return null;
      velocity[a]![i] = found.velocity_kms;
      error[a]![i] = found.error_kms;
      const kernel = new Float64Array(scan.variance.length);
      scan.addKernel(found.velocity_kms + half_separation_kms, 1 / found.slope, kernel);
      scan.addKernel(found.velocity_kms - half_separation_kms, -1 / found.slope, kernel);
      return kernel;
    });
    const matrix = new Float64Array(width * width);
    kernels.forEach((left, a) => {
      for (let b = 0; b <= a; b++) {
        const right = kernels[b];
        if (!left || !right) continue;
        let sum = 0;
        for (let n = 0; n < left.length; n++) sum += left[n]! * right[n]! * scan.variance[n]!;
        matrix[a * width + b] = matrix[b * width + a] = sum;
      }
    });
    return matrix;
  });
  const orbits = sampling.phase.map((phase, i) => phase + sampling.cycle[i]!);
  const rows = separations.map((half_separation_kms, a): DiagnosticRow => {
    const curve: VelocityCurve = {
      line: trail.line.name,
      method: "double-gaussian",
      star: "accretor",
      orbits,
      exposure_orbits: sampling.phase_width,
      velocity_kms: velocity[a]!,
      error_kms: error[a]!,
    };
    const fit = fitOrNull(curve);
    const measured = curve.error_kms.reduce((sum, e) => sum + (e < Infinity ? 1 : 0), 0);
    return {
      half_separation_kms,
      curve,
      fit,
      relative_error: fit && fit.k_error_kms / fit.k_kms,
      measured: measured / count,
      typical_error_kms: median(curve.error_kms),
      expected_drift_kms: expectedDrift(half_separation_kms, { inclination_deg }),
    };
  });
  return { line: trail.line.name, sigma_kms, rows, covariance };
}
