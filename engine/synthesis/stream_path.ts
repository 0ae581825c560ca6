import { ballisticStream, type StreamPoint } from "../binary/mod.ts";
import { InputError } from "../errors.ts";

/** The ballistic stream of one mass ratio, to be looked up at any radius. */
export interface StreamPath {
  /** Distance from the accretor at which the path is taken to begin, just inside L1, a. */
  readonly start_over_a: number;
  /** Closest approach, a. */
  readonly closest_over_a: number;
  /** Place (a) and inertial velocity (K1 + K2) at a distance from the accretor (a). */
  readonly at: (radius_over_a: number) => Pick<StreamPoint, "x" | "y" | "vx" | "vy">;
}

const NODES = 400;
const KEPT = 8;
const paths = new Map<number, StreamPath>();

/**
 * The stream of a mass ratio. The integration takes milliseconds and depends on nothing else, so
 * that of the last few mass ratios is kept; in between, cubic interpolation in the root of the
 * radius beyond closest approach, which is nearly even along the path.
 */
export function streamPath(mass_ratio: number): StreamPath {
  const kept = paths.get(mass_ratio);
  if (kept !== undefined) return kept;
  const { points } = ballisticStream(mass_ratio, { points: NODES });
  const start_over_a = points[0]!.radius_over_a;
  const closest_over_a = points[points.length - 1]!.radius_over_a;
  const path: StreamPath = {
    start_over_a,
    closest_over_a,
    at(radius_over_a) {
      if (!(radius_over_a >= closest_over_a && radius_over_a <= start_over_a)) {
        throw new InputError({
          action: "follow stream",
          rule: `the radius must lie between the stream's closest approach, ` +
            `${closest_over_a.toFixed(4)} a, and L1, ${start_over_a.toFixed(4)} a`,
          value: radius_over_a,
          unit: "a",
        });
      }
      const rest = (radius_over_a - closest_over_a) / (start_over_a - closest_over_a);
      const x = (1 - Math.sqrt(rest)) * (points.length - 1);
      const k = Math.max(1, Math.min(points.length - 3, Math.floor(x)));
      const t = x - k, s = 1 - t;
      const weights = [
        -t * s * (1 + s) / 6,
        s * (1 + t) * (1 + s) / 2,
        t * (1 + t) * (1 + s) / 2,
        -t * s * (1 + t) / 6,
      ];
      const between = (key: "x" | "y" | "vx" | "vy") =>
        weights.reduce((sum, weight, j) => sum + weight * points[k - 1 + j]![key], 0);
      return { x: between("x"), y: between("y"), vx: between("vx"), vy: between("vy") };
    },
  };
  if (paths.size >= KEPT) paths.delete(paths.keys().next().value!);
  paths.set(mass_ratio, path);
  return path;
}
