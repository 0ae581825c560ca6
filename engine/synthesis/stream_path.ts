import { ballisticStream } from "../binary/mod.ts";
import { InputError } from "../errors.ts";

/** A point of the stream. */
export interface PathPoint {
  /** Place, a, origin at the accretor. */
  readonly x: number;
  /** Place, a, along the donor's motion. */
  readonly y: number;
  /** Inertial velocity, K1 + K2. */
  readonly vx: number;
  /** Inertial velocity, K1 + K2. */
  readonly vy: number;
  /** Length of path per unit of the coordinate along it, a. */
  readonly length: number;
}

/** The ballistic stream of one mass ratio, to be looked up anywhere along it. */
export interface StreamPath {
  /** Distance from the accretor at which the path is taken to begin, just inside L1, a. */
  readonly start_over_a: number;
  /** Closest approach, a. */
  readonly closest_over_a: number;
  /** Coordinate along the path, 0 at the start to 1 at closest approach, at a distance from the accretor (a). */
  readonly along: (radius_over_a: number) => number;
  /** The point at a coordinate. */
  readonly point: (along: number) => PathPoint;
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
  let path = paths.get(mass_ratio);
  if (path === undefined) {
    path = makePath(mass_ratio);
    if (paths.size >= KEPT) paths.delete(paths.keys().next().value!);
    paths.set(mass_ratio, path);
  }
  return path;
}

function makePath(mass_ratio: number): StreamPath {
  const { points } = ballisticStream(mass_ratio, { points: NODES });
  const start_over_a = points[0]!.radius_over_a;
  const closest_over_a = points[NODES - 1]!.radius_over_a;
  const column = (key: "x" | "y" | "vx" | "vy") => Float64Array.from(points, (point) => point[key]);
  const x = column("x"), y = column("y"), vx = column("vx"), vy = column("vy");
  return {
    start_over_a,
    closest_over_a,
    along(radius_over_a) {
      if (!(radius_over_a >= closest_over_a && radius_over_a <= start_over_a)) {
        throw new InputError({
          action: "follow stream",
          rule: `the radius must lie between the stream's closest approach, ` +
            `${closest_over_a.toFixed(4)} a, and L1, ${start_over_a.toFixed(4)} a`,
          value: radius_over_a,
          unit: "a",
        });
      }
      return 1 - Math.sqrt((radius_over_a - closest_over_a) / (start_over_a - closest_over_a));
    },
    point(along) {
      const at = along * (NODES - 1);
      const k = Math.max(1, Math.min(NODES - 3, Math.floor(at)));
      const t = at - k, s = 1 - t;
      // Cubic interpolation through four nodes, and its derivative.
      const a = -t * s * (1 + s) / 6, b = s * (1 + t) * (1 + s) / 2;
      const c = t * (1 + t) * (1 + s) / 2, d = -t * s * (1 + t) / 6;
      const between = (column: Float64Array) =>
        a * column[k - 1]! + b * column[k]! + c * column[k + 1]! + d * column[k + 2]!;
      const slope = (column: Float64Array) =>
        (6 * t - 3 * t * t - 2) / 6 * column[k - 1]! + (3 * t * t - 4 * t - 1) / 2 * column[k]! +
        (2 * t + 2 - 3 * t * t) / 2 * column[k + 1]! + (3 * t * t - 1) / 6 * column[k + 2]!;
      return {
        x: between(x),
        y: between(y),
        vx: between(vx),
        vy: between(vy),
        length: Math.hypot(slope(x), slope(y)) * (NODES - 1),
      };
    },
  };
}
