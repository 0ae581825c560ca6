import { NotConverged, type Warning } from "../../errors.ts";
import { type ParameterScan, scanPeriod, scanSystemic } from "../../tomography/mod.ts";
import type { MappedLine } from "../map_line.ts";
import { pause } from "../pause.ts";
import type { Target } from "../target.ts";
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
export function systemicStudy(
  mapped: MappedLine,
  options: ScanOptions & { readonly error_kms: number | null },
): Promise<ScanStudy> {
  const { trail, options: around } = entropyAround(mapped, options);
  return study(mapped, {
    ...options,
    parameter: "systemic_kms",
    adopted: mapped.systemic_kms,
    adopted_error: options.error_kms,
    reach: REACH * mapped.map.half_width_kms,
    scan: (values_kms) => scanSystemic(trail, { ...around, values_kms }),
  });
}

/**
 * Searches the period in the same way, phases turned about the middle of the data. Within one orbit a
 * period hardly shows; over several nights a slip by a whole cycle between them is not looked for.
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
  const found = await study(mapped, {
    ...options,
    parameter: "period_d",
    adopted: period_d,
    adopted_error: options.error_d,
    reach: period_d * SLIP / Math.max(1, span),
    scan: (values) => {
      const scanned = scanPeriod(trail, { ...around, ratios: values.map((p) => p / period_d) });
      return {
        ...scanned,
        values: scanned.values.map((ratio) => ratio * period_d),
        best: scanned.best && scanned.best * period_d,
        error: scanned.error && scanned.error * period_d,
      };
    },
  });
  if (span >= FEW_ORBITS) return found;
  return {
    ...found,
    warnings: [...found.warnings, {
      code: "period-scan-short",
      line: trail.line.name,
      text:
        `the data span ${span.toFixed(1)} orbits: what the source does within one of them goes ` +
        "into the period by maps, and its error leaves that out",
    }],
  };
}

async function study(
  mapped: MappedLine,
  options: ScanOptions & {
    readonly parameter: ScanStudy["parameter"];
    readonly adopted: number;
    readonly adopted_error: number | null;
    readonly reach: number;
    readonly scan: (values: readonly number[]) => ParameterScan;
  },
): Promise<ScanStudy> {
  const { parameter, adopted, reach, scan, signal } = options;
  let found = scan(WIDE.map((part) => adopted + part * reach));
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
    ...{ parameter, values, best, error, shape, adopted },
    excess: objective.map((value) => value - least),
    warnings: saidOf(mapped, { ...options, best, error, shape }),
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
