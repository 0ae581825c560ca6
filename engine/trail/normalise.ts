import { InputError } from "../errors.ts";
import { median } from "../numerics/mod.ts";
import type { Continuum } from "./continuum.ts";
import type { LineStrip } from "./line_strip.ts";
import { brightnessDuring, type Photometry } from "./photometry.ts";

/** A strip with its continuum and what became of it. */
export interface NormalisedStrip {
  /** The pixels as they were. */
  readonly strip: LineStrip;
  /** Their continuum. */
  readonly continuum: Continuum;
  /** Normalised flux minus one, N values; 0 where masked. */
  readonly flux: Float64Array;
  /** One standard deviation; infinite where masked. */
  readonly error: Float64Array;
}

/** Options of {@linkcode normalise}. */
export interface NormaliseOptions {
  /**
   * "divide" by each continuum, or "scale".
   * @default "divide"
   */
  readonly continuum?: "divide" | "scale";
  /** Brightness by which to scale: for all, or for each group of exposures (null for none). */
  readonly photometry?: Photometry | readonly (Photometry | null)[];
}

/** What {@linkcode normalise} made. */
export interface Normalised {
  /** The strips kept. */
  readonly strips: readonly NormalisedStrip[];
  /** Sources dropped as the photometry does not reach them. */
  readonly unscaled: readonly string[];
}

// Flux minus continuum, over a divisor for each pixel.
function over(
  strip: LineStrip,
  continuum: Continuum,
  divisor: (pixel: number) => number,
): NormalisedStrip {
  const flux = new Float64Array(strip.flux.length);
  const error = new Float64Array(strip.flux.length).fill(Infinity);
  strip.flux.forEach((f, i) => {
    const by = divisor(i);
    if (!Number.isFinite(strip.error[i]!) || !(by > 0)) return;
    flux[i] = (f - continuum.level[i]!) / by;
    error[i] = strip.error[i]! / by;
  });
  return { strip, continuum, flux, error };
}

interface Pair {
  readonly strip: LineStrip;
  readonly continuum: Continuum;
}

// Divides by one level for all.
function scaled(pairs: readonly Pair[]): NormalisedStrip[] {
  const level = median(pairs.map(({ continuum }) => continuum.at_line));
  return pairs.map(({ strip, continuum }) => over(strip, continuum, () => level));
}

// Brings each continuum to what the light curve says, then divides by one level.
function calibrated(pairs: readonly Pair[], photometry: Photometry): NormalisedStrip[] {
  const kept = pairs.flatMap((pair) => {
    const brightness = brightnessDuring(photometry, pair.strip.spectrum);
    if (brightness === null || !(brightness > 0)) return [];
    const relative = photometry.of === "target" ? brightness : pair.continuum.at_line / brightness;
    return [{ ...pair, relative }];
  });
  if (kept.length === 0) {
    throw new InputError({
      action: "scale exposures by photometry",
      rule: "the light curve must reach at least one exposure with a positive flux",
      value: `${photometry.time.length} points`,
      remedy: "check that its times are BJD(TDB)",
    });
  }
  const level = median(kept.map(({ relative }) => relative));
  return kept.map(({ strip, continuum, relative }) =>
    over(strip, continuum, (i) => continuum.level[i]! * level / relative)
  );
}

function isOne(photometry: Photometry | readonly unknown[]): photometry is Photometry {
  return !Array.isArray(photometry);
}

/**
 * Normalises exposures: to flux minus one. Dividing makes every exposure's continuum one, so slit
 * losses vanish, and with them real changes of brightness: the line rises where the continuum sets.
 * Scaling divides all by one level, so that calibrated line flux keeps its changes; photometry of
 * the target, or of a companion on the slit, gives the calibration that the slit spoilt. Each light
 * curve has a level of its own, as does what goes without.
 *
 * @param pairs Strips with their continua.
 * @param options How, and the photometry.
 * @returns The normalised strips.
 * @throws {InputError} When photometry is given and the continuum is divided out, or when nothing
 * is left.
 *
 * @example
 * ```ts
 * import { fitContinuum, normalise } from "@millrace/millrace/trail";
 * import { assertAlmostEquals } from "@std/assert";
 *
 * const velocity_kms = Float64Array.from({ length: 41 }, (_, i) => 100 * (i - 20));
 * const strip = {
 *   spectrum: null as never,
 *   first: 0,
 *   velocity_kms,
 *   pixel_kms: velocity_kms.map(() => 100),
 *   flux: velocity_kms.map((v) => Math.abs(v) < 500 ? 8 : 2),
 *   error: velocity_kms.map(() => 0.1),
 * };
 * const continuum = fitContinuum(strip, { windows_kms: [[-2000, -1000], [1000, 2000]] })!;
 * const { strips } = normalise([{ strip, continuum }]);
 * assertAlmostEquals(strips[0]!.flux[20]!, 3);
 * ```
 */
export function normalise(
  pairs: readonly { readonly strip: LineStrip; readonly continuum: Continuum }[],
  options: NormaliseOptions = {},
): Normalised {
  const { continuum: how = "divide", photometry = [] } = options;
  const curveOf = ({ strip }: Pair) =>
    isOne(photometry) ? photometry : photometry[strip.spectrum.group] ?? null;
  if (how === "divide") {
    if (isOne(photometry) || photometry.some((curve) => curve !== null)) {
      throw new InputError({
        action: "normalise",
        rule: 'photometry scales exposures only where continuum is "scale"',
        value: how,
        key: "trail.continuum",
      });
    }
    return {
      strips: pairs.map(({ strip, continuum }) =>
        over(strip, continuum, (i) => continuum.level[i]!)
      ),
      unscaled: [],
    };
  }
  const parts = Map.groupBy(pairs, curveOf);
  const made = [...parts].flatMap(([curve, members]) =>
    curve === null ? scaled(members) : calibrated(members, curve)
  );
  // As they came: in order of time.
  const byStrip = new Map(made.map((normalised) => [normalised.strip, normalised]));
  return {
    strips: pairs.flatMap(({ strip }) => byStrip.get(strip) ?? []),
    unscaled: pairs.filter(({ strip }) => !byStrip.has(strip))
      .map(({ strip }) => strip.spectrum.source),
  };
}
