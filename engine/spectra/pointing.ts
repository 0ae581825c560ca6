import type { Warning } from "../errors.ts";
import { median } from "../numerics/mod.ts";
import type { Direction } from "../sky/mod.ts";

/** Headers of one target may differ by this much: pointing, proper motion, rounding. */
const SAME_TARGET_DEG = 0.1;

const turned = (deg: number) => deg - 360 * Math.round(deg / 360);

/**
 * Finds exposures that point elsewhere than most: of a standard, or of a comparison star, that a
 * pattern of file names took along.
 *
 * @param exposures Where each points; null where nothing says.
 * @returns The warning; null when all point to one place, or fewer than three say where.
 *
 * @example
 * ```ts
 * import { pointedElsewhere } from "@millrace/millrace/spectra";
 * import { assertEquals } from "@std/assert";
 *
 * const at = (ra_deg: number) => ({ source: `${ra_deg}.fits`, target: { ra_deg, dec_deg: 0 } });
 * assertEquals(pointedElsewhere([at(359.99), at(0.01), at(0.02)]), null);
 * assertEquals(pointedElsewhere([at(10), at(10), at(14)])?.code, "pointed-elsewhere");
 * ```
 */
export function pointedElsewhere(
  exposures: readonly { readonly source: string; readonly target: Direction | null }[],
): Warning | null {
  const known = exposures.flatMap(({ source, target }) =>
    target === null ? [] : [{ source, ...target }]
  );
  if (known.length < 3) return null;
  const first = known[0]!;
  const ra = first.ra_deg + median(known.map(({ ra_deg }) => turned(ra_deg - first.ra_deg)));
  const dec = median(known.map(({ dec_deg }) => dec_deg));
  const away = known
    .map((one) => ({
      source: one.source,
      deg: Math.hypot(
        turned(one.ra_deg - ra) * Math.cos(dec * Math.PI / 180),
        one.dec_deg - dec,
      ),
    }))
    .filter(({ deg }) => deg > SAME_TARGET_DEG);
  if (away.length === 0) return null;
  return {
    code: "pointed-elsewhere",
    text: `${away.length} of ${known.length} exposures point elsewhere than the others (${
      away[0]!.source
    } by ${away[0]!.deg.toFixed(2)} deg): are they of another star?`,
  };
}
