import { InputError } from "../errors.ts";
import { findRoot, integrateOde } from "../numerics/mod.ts";
import type { Speeds } from "./corotation.ts";
import { lagrangePoints } from "./lagrange_points.ts";
import { donorMassFraction, rocheGradient, rochePotential } from "./roche_potential.ts";

/**
 * Gas at one point of the stream. Lengths in units of the separation a, velocities in units of
 * K1 + K2 (which carries the sine of the inclination), times in orbits.
 */
export interface StreamPoint {
  /** Distance from the accretor, a. */
  readonly radius_over_a: number;
  /** Time since the stream left L1's neighbourhood (1e-7 a), orbits. */
  readonly time_orbits: number;
  /** From the accretor towards the donor, a. */
  readonly x: number;
  /** Along the donor's orbital motion, a. */
  readonly y: number;
  /** Velocity in the frame that turns with the binary, along x. */
  readonly turning_vx: number;
  /** Velocity in the frame that turns with the binary, along y. */
  readonly turning_vy: number;
  /** The stream's own inertial velocity, along x: map coordinate over K1 + K2. */
  readonly vx: number;
  /** The stream's own inertial velocity, along y: map coordinate over K1 + K2. */
  readonly vy: number;
  /** Velocity along x of a circular Keplerian orbit about the accretor at the same place. */
  readonly keplerian_vx: number;
  /** Velocity along y of a circular Keplerian orbit about the accretor at the same place. */
  readonly keplerian_vy: number;
  /** Specific angular momentum about the accretor in non-turning axes, a (K1+K2). */
  readonly angular_momentum: number;
}

/** The path of gas that falls freely from the inner Lagrangian point. */
export interface BallisticStream {
  /** q = M2/M1. */
  readonly mass_ratio: number;
  /** Points of decreasing radius; the last is the closest approach unless radii were given. */
  readonly points: readonly StreamPoint[];
  /** The first closest approach to the accretor. */
  readonly closest: StreamPoint;
  /** Jacobi constant Φ + v²/2, equal to the potential at L1; units G(M1+M2)/a. */
  readonly jacobi: number;
  /** Largest departure from it along the way: the integration's error. */
  readonly jacobi_drift: number;
  /** Growth rate of the departure from L1, per radian of orbit. */
  readonly launch_rate: number;
  /** Angle between the line from L1 to the accretor and the stream as it sets out, degrees. */
  readonly launch_angle_deg: number;
}

const NUDGE = 1e-7;

/** State on the unstable direction of L1: x, y and their rates per radian of orbit. */
function launch(mass_ratio: number) {
  const { l1_over_a } = lagrangePoints(mass_ratio);
  const mu = donorMassFraction(mass_ratio);
  const k = (1 - mu) / l1_over_a ** 3 + mu / (1 - l1_over_a) ** 3;
  // Growing solution of λ⁴ + (2 − k) λ² + (1 + 2k)(1 − k) = 0 (Lubow & Shu 1975).
  const rate = Math.sqrt((k - 2 + Math.sqrt(9 * k * k - 8 * k)) / 2);
  const slope = (rate * rate - 2 * k - 1) / (2 * rate);
  const angle = Math.atan(-slope);
  const dx = -Math.cos(angle), dy = Math.sin(angle);
  const start = [
    l1_over_a + NUDGE * dx,
    NUDGE * dy,
    NUDGE * rate * dx,
    NUDGE * rate * dy,
  ];
  return { l1_over_a, rate, angle_deg: angle * 180 / Math.PI, start };
}

function pointOf(t: number, state: Float64Array, mu: number): StreamPoint {
  const [x, y, turning_vx, turning_vy] = state as unknown as [number, number, number, number];
  const radius_over_a = Math.hypot(x, y);
  const kepler = Math.sqrt((1 - mu) / radius_over_a);
  return {
    radius_over_a,
    time_orbits: t / (2 * Math.PI),
    x,
    y,
    turning_vx,
    turning_vy,
    vx: turning_vx - y,
    vy: turning_vy + x - mu,
    keplerian_vx: -kepler * y / radius_over_a,
    keplerian_vy: kepler * x / radius_over_a - mu,
    angular_momentum: x * turning_vy - y * turning_vx + radius_over_a ** 2,
  };
}

/** Follows the stream to its closest approach, noting where it first crosses the radii. */
function follow(mass_ratio: number, radii: readonly number[]) {
  const mu = donorMassFraction(mass_ratio);
  const { rate, angle_deg, start } = launch(mass_ratio);
  const jacobiOf = ([x, y, u, v]: Float64Array) =>
    rochePotential({ x: x!, y: y! }, mass_ratio) + (u! * u! + v! * v!) / 2;
  const approach = ([x, y, u, v]: Float64Array) => x! * u! + y! * v!;
  const distance = ([x, y]: Float64Array) => Math.hypot(x!, y!);
  const jacobi = jacobiOf(Float64Array.from(start));
  const points: StreamPoint[] = [];
  let next = 0;
  let jacobi_drift = 0;
  let before: Float64Array | undefined;
  let closest: StreamPoint | undefined;

  integrateOde(
    (_t, [x, y, u, v]) => {
      const [gx, gy] = rocheGradient({ x: x!, y: y! }, mass_ratio);
      return Float64Array.of(u!, v!, 2 * v! - gx, -2 * u! - gy);
    },
    start,
    {
      from: 0,
      to: 60,
      tolerance: 1e-13,
      step_limit: 0.1,
      onStep({ t_before, t, state, at }) {
        jacobi_drift = Math.max(jacobi_drift, Math.abs(jacobiOf(state) - jacobi));
        const from = before;
        before = state;
        if (from === undefined) return true;
        const passed = approach(from) < 0 && approach(state) >= 0;
        const end = passed ? findRoot((s) => approach(at(s)), [t_before, t]) : t;
        const inner = distance(at(end));
        for (; next < radii.length && radii[next]! >= inner; next++) {
          const radius = radii[next]!;
          if (radius > distance(from)) continue;
          const when = radius === inner
            ? end
            : findRoot((s) => distance(at(s)) - radius, [t_before, end]);
          points.push(pointOf(when, at(when), mu));
        }
        if (passed) closest = pointOf(end, at(end), mu);
        return !passed;
      },
    },
  );
  return { points, closest: closest!, jacobi, jacobi_drift, rate, angle_deg };
}

/**
 * The ballistic stream of a binary: free fall in the frame that turns with it, from the unstable
 * direction of the inner Lagrangian point to the first closest approach to the accretor (Lubow &
 * Shu 1975, ApJ 198, 383). Starting on that direction is the limit of a vanishing push; a start at
 * rest a distance δ inside L1 would be wrong by about 2δ all along.
 *
 * @param mass_ratio q = M2/M1.
 * @param options At which radii the path is wanted.
 * @returns The path.
 * @throws {InputError} When the mass ratio is not in (0, 100], or a radius lies outside the path.
 *
 * @example
 * ```ts
 * import { ballisticStream } from "@millrace/millrace/binary";
 * import { assertAlmostEquals, assertLess } from "@std/assert";
 *
 * const { closest, jacobi_drift } = ballisticStream(0.1);
 * assertAlmostEquals(closest.radius_over_a, 0.0488 * 0.1 ** -0.464, 0.03 * 0.14); // Warner 1995
 * assertLess(jacobi_drift, 1e-8);
 * ```
 */
export function ballisticStream(mass_ratio: number, options: {
  /** Distances from the accretor, a; any order. @default {undefined} */
  readonly radii_over_a?: readonly number[];
  /** Without radii: number of points, nearly even along the path. @default {200} */
  readonly points?: number;
} = {}): BallisticStream {
  const { radii_over_a, points = 200 } = options;
  if (!Number.isInteger(points) || points < 2) {
    throw new InputError({
      action: "follow stream",
      rule: "the number of points must be a whole number of at least 2",
      value: points,
    });
  }
  const { l1_over_a } = lagrangePoints(mass_ratio);
  const first = follow(mass_ratio, []);
  const nearest = first.closest.radius_over_a;
  for (const radius of radii_over_a ?? []) {
    if (radius >= nearest && radius <= l1_over_a - 10 * NUDGE) continue;
    throw new InputError({
      action: "follow stream",
      rule: `the stream of mass ratio ${mass_ratio} runs from ${l1_over_a.toFixed(4)} a (L1) to ` +
        `${nearest.toFixed(4)} a (closest approach), so the radius must lie between`,
      value: radius,
      unit: "a",
      key: "radius_over_a",
    });
  }
  // Radius grows with the square of the path from closest approach: even in its root, even in path.
  const start = l1_over_a - 1e-4;
  const wanted = radii_over_a ?? Array.from({ length: points - 1 }, (_, k) => {
    const rest = 1 - k / (points - 1);
    return nearest + (start - nearest) * rest * rest;
  });
  const second = follow(mass_ratio, [...wanted].sort((a, b) => b - a));
  return {
    mass_ratio,
    points: radii_over_a ? second.points : [...second.points, second.closest],
    closest: second.closest,
    jacobi: second.jacobi,
    jacobi_drift: second.jacobi_drift,
    launch_rate: second.rate,
    launch_angle_deg: second.angle_deg,
  };
}

/** The stream in the velocity map: its own velocity, and that of the disc underneath it. */
export interface StreamVelocities {
  /** The stream's own velocity, km/s. */
  readonly vx_kms: Float64Array;
  /** The stream's own velocity, km/s. */
  readonly vy_kms: Float64Array;
  /** Keplerian velocity at the same places, km/s. */
  readonly keplerian_vx_kms: Float64Array;
  /** Keplerian velocity at the same places, km/s. */
  readonly keplerian_vy_kms: Float64Array;
}

/**
 * Map coordinates of a stream's points: gas that still moves as the stream does, and gas at the
 * same places that has joined the disc's Keplerian motion. Bright spots are found between the two.
 *
 * @param stream The stream.
 * @param binary The binary whose speeds turn it into km/s; its mass ratio should be the stream's.
 * @returns One velocity of each kind per point.
 *
 * @example The stream sets out with the donor's inner face
 * ```ts
 * import { ballisticStream, corotationVelocity, streamVelocities } from "@millrace/millrace/binary";
 * import { assertAlmostEquals } from "@std/assert";
 *
 * const speeds = { mass_ratio: 0.25, k_accretor_kms: 80, k_donor_kms: 320 };
 * const stream = ballisticStream(0.25);
 * const { vy_kms } = streamVelocities(stream, speeds);
 * assertAlmostEquals(vy_kms[0]!, corotationVelocity(stream.points[0]!, speeds).vy_kms, 0.5);
 * ```
 */
export function streamVelocities(stream: BallisticStream, binary: Speeds): StreamVelocities {
  const sum = binary.k_accretor_kms + binary.k_donor_kms;
  const column = (key: "vx" | "vy" | "keplerian_vx" | "keplerian_vy") =>
    Float64Array.from(stream.points, (point) => sum * point[key]);
  return {
    vx_kms: column("vx"),
    vy_kms: column("vy"),
    keplerian_vx_kms: column("keplerian_vx"),
    keplerian_vy_kms: column("keplerian_vy"),
  };
}
