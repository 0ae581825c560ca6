import { NotConverged, type Warning } from "../../errors.ts";
import { type ParameterScan, scanPeriod, scanSystemic } from "../../tomography/mod.ts";
import type { MappedLine } from "../map_line.ts";
import { pause } from "../pause.ts";
import type { Target } from "../target.ts";
import { type CycleSlip, cycleSlips, nightGaps } from "./cycle_slips.ts";
import { entropyAround } from "./entropy_around.ts";

/** A parameter that was searched with maps of one multiplier. */
export interface ScanStudy {
  /** Name of the parameter with its unit, as in `systemic_kms`. */
  readonly parameter: "systemic_kms" | "period_d";
  /** Values tried, increasing. */
  readonly values: Float64Array;
  /** χ² − αS at each, over its least. */
  readonly excess: Float64Array;
  /** The best value; null for a flat curve. */
  readonly best: number | null;
  /** Its standard deviation; null for a flat curve. */
  readonly error: number | null;
  /** One clear minimum, none, one at the end, or several. */
  readonly shape: ParameterScan["shape"];
  /** The value that the map was made with. */
  readonly adopted: number;
  /** Between which values it was looked for: the first, wide look, about the best slip where one is. */
  readonly searched: readonly [number, number];
  /** Of the period, what comes of one cycle more or less between nights; none for γ. */
  readonly slips: readonly CycleSlip[];
  /** What a user should know. */
  readonly warnings: readonly Warning[];
}

/** Values of the first look, over its reach. */
const WIDE = [-1, -0.75, -0.5, -0.25, 0, 0.25, 0.5, 0.75, 1];

/** Values of the second look, standard deviations from the best of the first. */
const CLOSE = [-5, -4, -3, -2, -1, 0, 1, 2, 3, 4, 5];

/** The first look for γ goes so far, half-widths of the map. */
const REACH = 0.05;

/** The first look for the period lets phases slip by so much over the data, cycles. */
const SLIP = 0.2;

/** Over fewer orbits than this a period found by maps is not to be trusted. */
const FEW_ORBITS = 3;

/** Errors by which best and adopted value may differ in silence. */
const APART = 3;

interface ScanOptions {
  /** The target. */
  readonly target: Target;
  /** Aborts the work. */
  readonly signal?: AbortSignal;
}

/**
 * Searches the systemic velocity: entropy maps with one multiplier, χ² − αS against γ.
 *
 * @param mapped The map of the line.
 * @param options The target, and the error of the adopted γ, km/s.
 * @returns The curve.
 */
export async function systemicStudy(
  mapped: MappedLine,
  options: ScanOptions & { readonly error_kms: number | null },
): Promise<ScanStudy> {
  const { trail, options: around } = entropyAround(mapped, options);
  const { found } = await study(mapped, {
    ...options,
    parameter: "systemic_kms",
    adopted: mapped.systemic_kms,
    adopted_error: options.error_kms,
    reach: REACH * mapped.map.half_width_kms,
    scan: (values_kms) => scanSystemic(trail, { ...around, values_kms }),
  });
  return found;
}

/** How often a slipped period that fits better is gone to. */
const MOST_SLIPS = 3;

/** A slipped period is told as possible up to this excess: three standard deviations. */
const POSSIBLE = 9;

/**
 * Searches the period in the same way, phases turned about the middle of the data, as far as phases slip by
 * a fifth of a cycle over the data. Within one orbit a period hardly shows. Over several nights the periods
 * with one cycle more or less between them are tried, too, for up to three gaps of different length; where
 * one of these fits better, it is looked at in the same way, three times at most.
 *
 * @param mapped The map of the line.
 * @param options The target, the period and its error, d.
 * @returns The curve.
 */
export async function periodStudy(
  mapped: MappedLine,
  options: ScanOptions & { readonly period_d: number; readonly error_d: number | null },
): Promise<ScanStudy> {
  const { trail, options: around } = entropyAround(mapped, options);
  const { sampling } = trail;
  const orbits = sampling.phase.map((phase, i) => phase + sampling.cycle[i]!);
  const span = Math.max(...orbits) - Math.min(...orbits);
  const { period_d } = options;
  const scan = (values: readonly number[]): ParameterScan => {
    const scanned = scanPeriod(trail, { ...around, ratios: values.map((p) => p / period_d) });
    return {
      ...scanned,
      values: scanned.values.map((ratio) => ratio * period_d),
      best: scanned.best && scanned.best * period_d,
      error: scanned.error && scanned.error * period_d,
    };
  };
  const reach = period_d * SLIP / Math.max(1, span);
  const asked = {
    ...options,
    parameter: "period_d",
    adopted: period_d,
    adopted_error: options.error_d,
    reach,
    scan,
  } as const;
  const gaps_cycles = nightGaps(sampling, { period_d });
  const slipsAbout = (counted: Counted) =>
    slipsOf(counted, { gaps_d: gaps_cycles.map((gap) => gap * period_d), scan, ...options });
  let counted = await study(mapped, asked);
  let slips = await slipsAbout(counted);
  for (let slipped = 0; slipped < MOST_SLIPS; slipped++) {
    const better = slips.toSorted((a, b) => a.excess - b.excess)[0];
    if (better === undefined || !(better.excess < 0)) break;
    counted = await study(mapped, { ...asked, around: better.period_d });
    slips = await slipsAbout(counted);
  }
  const { found } = counted;
  const line = trail.line.name;
  const possible = slips.filter(({ excess }) => excess < POSSIBLE);
  return {
    ...found,
    slips,
    shape: possible.length > 0 && found.shape === "minimum" ? "several" : found.shape,
    warnings: [
      ...found.warnings,
      ...possible.map(({ cycles, gap_cycles, period_d, excess }) => ({
        code: "period-scan-several",
        line,
        text: `a period of ${period_d.toFixed(7)} d, with one cycle ${
          cycles > 0 ? "more" : "less"
        } in ${gap_cycles.toFixed(1)} between nights, fits nearly as well: χ² − αS is only ${
          excess.toFixed(1)
        } higher`,
      })),
      ...(span >= FEW_ORBITS ? [] : [{
        code: "period-scan-short",
        line,
        text:
          `the data span ${span.toFixed(1)} orbits: what the source does within one of them goes ` +
          "into the period by maps, and its error leaves that out",
      }]),
    ],
  };
}

/** Both slips over each gap, about a period that was found; none about a curve that tells nothing. */
async function slipsOf(
  { found: { best }, least }: Counted,
  options: {
    readonly gaps_d: readonly number[];
    readonly scan: (values: readonly number[]) => ParameterScan;
    readonly signal?: AbortSignal;
  },
): Promise<CycleSlip[]> {
  if (best === null) return [];
  const slips: CycleSlip[] = [];
  for (const gap_d of options.gaps_d) {
    try {
      slips.push(...cycleSlips(gap_d, { ...options, period_d: best, least }));
    } catch (error) {
      // Maps of a period that is far off may not settle: they do not fit.
      if (!(error instanceof NotConverged)) throw error;
    }
    await pause(options.signal);
  }
  return slips;
}

interface Counted {
  readonly found: ScanStudy;
  /** Least χ² − αS. */
  readonly least: number;
}

async function study(
  mapped: MappedLine,
  options: ScanOptions & {
    readonly parameter: ScanStudy["parameter"];
    readonly adopted: number;
    readonly adopted_error: number | null;
    /** Middle of the first look. @default {adopted} */
    readonly around?: number;
    readonly reach: number;
    readonly scan: (values: readonly number[]) => ParameterScan;
  },
): Promise<Counted> {
  const { parameter, adopted, around = adopted, reach, scan, signal } = options;
  let found = scan(WIDE.map((part) => around + part * reach));
  await pause(signal);
  const { best: middle, error: sigma } = found;
  if (found.shape === "minimum" && middle !== null && sigma !== null && sigma < reach / 5) {
    try {
      found = scan(CLOSE.map((sigmas) => middle + sigmas * sigma));
    } catch (error) {
      // The wide look stands where the close one does not settle.
      if (!(error instanceof NotConverged)) throw error;
    }
    await pause(signal);
  }
  const { values, objective, least, best, error, shape } = found;
  return {
    least,
    found: {
      ...{ parameter, values, best, error, shape, adopted },
      searched: [around - reach, around + reach],
      slips: [],
      excess: objective.map((value) => value - least),
      warnings: saidOf(mapped, { ...options, best, error, shape }),
    },
  };
}

function saidOf(
  mapped: MappedLine,
  found: Pick<ScanStudy, "parameter" | "adopted" | "best" | "error" | "shape"> & {
    readonly adopted_error: number | null;
  },
): Warning[] {
  const { parameter, adopted, adopted_error, best, error, shape } = found;
  const [name, unit, code, digits] = parameter === "systemic_kms"
    ? ["systemic velocity", "km/s", "systemic-scan", 1]
    : ["period", "d", "period-scan", 7];
  const line = mapped.trail.line.name;
  const say = (end: string, text: string) => [{ code: `${code}-${end}`, line, text }];
  if (shape === "flat") {
    return say("flat", `maps of every ${name} tried fit alike: these data do not tell it`);
  }
  if (shape === "edge") {
    return say("edge", `the best ${name} lies at the end of what was tried, or beyond`);
  }
  if (shape === "several") {
    return say("several", `more than one ${name} fits: the data do not choose between them`);
  }
  if (best === null || error === null) return [];
  const sigma = Math.hypot(error, adopted_error ?? 0);
  if (Math.abs(best - adopted) <= APART * sigma) return [];
  return say(
    "disagrees",
    `maps ask for a ${name} of ${best.toFixed(Number(digits))} ± ${
      error.toFixed(Number(digits))
    } ${unit}, not ${adopted}`,
  );
}
