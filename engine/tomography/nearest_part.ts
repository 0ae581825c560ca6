import {
  ballisticStream,
  type Binary,
  circularisationRadius,
  lobeOutlineVelocity,
  resonanceRadius,
  streamVelocities,
  tidalRadius,
} from "../binary/mod.ts";
import type { MapPlace } from "./axisymmetric_part.ts";

/** The part of a binary that a place in the map may belong to. */
export type BinaryPart = "rim-impact" | "stream" | "donor-face" | "accretor" | "none";

/** Tells which part of a binary a place is nearest to, if any is within reach. */
export type PartFinder = (place: MapPlace, reach_kms: number) => BinaryPart;

/**
 * Prepares to name places by the parts of a binary: the donor's lobe; the stream at its ballistic
 * velocity from L1 to closest approach; the impact on the rim, anywhere between the stream's and
 * the disc's velocity for rims from the circularisation radius to the tidal limit; the accretor.
 * Where the rim can be, the impact goes before the stream unless that is nearer by a tenth of the
 * reach.
 *
 * @param binary The binary, whose zero of phase must be the donor's inferior conjunction.
 * @returns A function from a place and a reach to a name.
 *
 * @example
 * ```ts
 * import { partFinder } from "@millrace/millrace/tomography";
 * import { assertEquals } from "@std/assert";
 *
 * const find = partFinder({ mass_ratio: 0.25, k_accretor_kms: 80, k_donor_kms: 320 });
 * assertEquals(find({ vx_kms: 0, vy_kms: -75 }, 30), "accretor");
 * assertEquals(find({ vx_kms: 10, vy_kms: 300 }, 30), "donor-face");
 * assertEquals(find({ vx_kms: 900, vy_kms: 0 }, 30), "none");
 * ```
 */
export function partFinder(
  binary: Pick<Binary, "mass_ratio" | "k_accretor_kms" | "k_donor_kms">,
): PartFinder {
  const stream = ballisticStream(binary.mass_ratio);
  const path = streamVelocities(stream, binary);
  const least = circularisationRadius(stream);
  const most = tidalRadius(binary.mass_ratio) ?? resonanceRadius(binary.mass_ratio);
  const points = Array.from(path.vx_kms, (vx, i) => ({ x: vx, y: path.vy_kms[i]! }));
  const rims = stream.points.flatMap((point, i) =>
    point.radius_over_a < least || point.radius_over_a > most ? [] : [[
      points[i]!,
      { x: path.keplerian_vx_kms[i]!, y: path.keplerian_vy_kms[i]! },
    ]]
  );
  const lobe = lobeOutlineVelocity(binary);
  const outline = Array.from(lobe.vx_kms, (vx, i) => ({ x: vx, y: lobe.vy_kms[i]! }));
  const closed = [...outline, outline[0]!];

  return ({ vx_kms: x, vy_kms: y }, reach_kms) => {
    const at = { x, y };
    const found: [BinaryPart, number][] = [
      ["rim-impact", Math.min(Infinity, ...rims.map((rim) => distanceToPath(at, rim)))],
      ["donor-face", contains(closed, at) ? 0 : distanceToPath(at, closed)],
      ["stream", distanceToPath(at, points)],
      ["accretor", Math.hypot(x, y + binary.k_accretor_kms)],
    ];
    let best: BinaryPart = "none", least = reach_kms;
    for (const [part, distance] of found) {
      const margin = part === "stream" && best === "rim-impact" ? 0.1 * reach_kms : 0;
      if (distance + margin < least) [best, least] = [part, distance];
    }
    return best;
  };
}

interface Point {
  readonly x: number;
  readonly y: number;
}

function distanceToPath(at: Point, path: readonly Point[]): number {
  let least = Infinity;
  for (let i = 1; i < path.length; i++) {
    const a = path[i - 1]!, b = path[i]!;
    const dx = b.x - a.x, dy = b.y - a.y;
    const length = dx * dx + dy * dy;
    const t = length === 0
      ? 0
      : Math.max(0, Math.min(1, ((at.x - a.x) * dx + (at.y - a.y) * dy) / length));
    least = Math.min(least, Math.hypot(at.x - a.x - t * dx, at.y - a.y - t * dy));
  }
  return least;
}

function contains(closed: readonly Point[], at: Point): boolean {
  let inside = false;
  for (let i = 1; i < closed.length; i++) {
    const a = closed[i - 1]!, b = closed[i]!;
    if ((a.y > at.y) !== (b.y > at.y)) {
      if (at.x < a.x + (at.y - a.y) / (b.y - a.y) * (b.x - a.x)) inside = !inside;
    }
  }
  return inside;
}
