import { midExposureBjd, type SightLine, type TimePlace } from "./barycentre.ts";
import type { SplitDate } from "./bjd.ts";
import type { Direction } from "./direction.ts";
import type { TimeScale } from "./time_scales.ts";

/**
 * BJD(TDB) of a published instant, such as the zero of an ephemeris: HJD(UTC), HJD(TT), BJD(UTC), or any other
 * place and scale. Heliocentric dates that were made for the centre of the Earth need no site.
 *
 * @param published The date with its scale and place.
 * @param sight Target and observatory.
 * @returns BJD(TDB).
 * @throws {InputError} As {@linkcode midExposureBjd}.
 *
 * @example HJD(UTC) and BJD(TDB) differ by a minute and some seconds
 * ```ts
 * import { daysBetween, publishedToBjd } from "@millrace/millrace/sky";
 * import { assertAlmostEquals } from "@std/assert";
 *
 * const hjd = [2460311, 0.25] as const;
 * const bjd = publishedToBjd(
 *   { date: hjd, scale: "utc", place: "heliocentric" },
 *   { target: { ra_deg: 83, dec_deg: -12 } },
 * );
 * assertAlmostEquals(daysBetween(bjd, hjd) * 86400, 69.184, 5);
 * ```
 */
export function publishedToBjd(
  published: { readonly date: SplitDate; readonly scale: TimeScale; readonly place: TimePlace },
  sight: SightLine,
): SplitDate {
  return midExposureBjd({ ...published, marks: "mid" }, sight).bjd;
}

/**
 * BJD(TDB) of a heliocentric Julian date.
 *
 * @param hjd The date as published.
 * @param options Its scale, and the target.
 * @param options.scale Time scale of the date.
 * @param options.target The target.
 * @returns BJD(TDB).
 * @throws {InputError} As {@linkcode midExposureBjd}.
 *
 * @example
 * ```ts
 * import { heliocentricToBjd } from "@millrace/millrace/sky";
 * import { assertAlmostEquals } from "@std/assert";
 *
 * const [, fraction] = heliocentricToBjd([2460311, 0.25], {
 *   scale: "tt",
 *   target: { ra_deg: 83, dec_deg: -12 },
 * });
 * assertAlmostEquals(fraction, 0.25, 5 / 86400);
 * ```
 */
export function heliocentricToBjd(
  hjd: SplitDate,
  { scale, target }: { scale: TimeScale; target: Direction },
): SplitDate {
  return publishedToBjd({ date: hjd, scale, place: "heliocentric" }, { target });
}
