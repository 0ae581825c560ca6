import { uniqueWarnings } from "../output_head.ts";
import { type MapFeature, type MapPeak, mapPeak } from "../../tomography/mod.ts";
import { jsonText, type OutputHead, outputHead } from "../output_head.ts";
import type { JoinedLine } from "../join_trails.ts";
import { mappedLines } from "../line_of.ts";
import { mapFits } from "../map_fits.ts";
import type { MappedBlend } from "../inversion/fit_ratios.ts";
import type { LineSign } from "../inversion/inverted.ts";
import type { MappedLine } from "../map_line.ts";
import type { Session } from "../session.ts";
import type { RegionStudy } from "../studies/modulation_study.ts";
import type { ScanStudy } from "../studies/scan_study.ts";
import type { SensitivityPart } from "../studies/sensitivity_study.ts";
import type { FeatureStudy } from "../studies/structures_study.ts";
import { type StudiedLine, studiesOf } from "../studies/studies_of.ts";
import type { Target } from "../target.ts";
import { type LineTests, type LineTestsSummary, testsSummary } from "../test_line.ts";
import { type StepOutput, type StepResult, writeStep } from "./step.ts";

/** `map.json`. */
export interface MapDocument extends OutputHead {
  /** One entry a line. */
  readonly maps: readonly MapSummary[];
}

/** One line's map in numbers. */
export interface MapSummary {
  /** Name of the line. */
  readonly line: string;
  /** Rest wavelength in air, Å. */
  readonly rest_air_angstrom: number;
  /** Inversion. */
  readonly method: string;
  /** Pixels along each side. */
  readonly pixels: number;
  /** Velocity of the outermost pixel's centre, km/s. */
  readonly half_width_kms: number;
  /** Systemic velocity taken out, km/s. */
  readonly systemic_kms: number;
  /** χ² over the number of samples. */
  readonly reduced_chi_square: number;
  /** Number of unmasked samples. */
  readonly sample_count: number;
  /** χ² per sample asked for; null where the inversion has no such goal. */
  readonly goal_asked: number | null;
  /** χ² per sample aimed for in the end: higher where what was asked for was out of reach. */
  readonly goal_used: number | null;
  /** Multiplier of the entropy or weight of the variation; null for back-projection. */
  readonly multiplier: number | null;
  /** Whether the line was inverted as it is, with its sign turned, or with either sign allowed. */
  readonly sign: LineSign;
  /** Largest gap in phase modulo half an orbit that the map was made in spite of; null where there is none. */
  readonly phase_gap: number | null;
  /** The lines mapped with it. */
  readonly blends: readonly BlendSummary[];
  /** Other lines of which it is the map, too. */
  readonly together: readonly JoinedLine[];
  /** The straight baselines fitted with the map; null when they were held at zero. */
  readonly baseline: {
    /** Root mean square of their levels, parts of the continuum. */
    readonly level_rms: number;
    /** Root mean square of their slopes, parts of the continuum per 1000 km/s. */
    readonly slope_rms: number;
  } | null;
  /** Factor on the predicted trail that fits the data best. */
  readonly scale: number;
  /** Iterations. */
  readonly iterations: number;
  /** Whether the iteration met its goal. */
  readonly converged: boolean;
  /** How far the gradients of entropy and misfit are from parallel; null for other inversions. */
  readonly misalignment: number | null;
  /** Factor applied to the stated errors. */
  readonly noise_scale: number;
  /** Brightest place. */
  readonly peak: MapPeak;
  /** Compact excesses over the part that is axisymmetric about the accretor. */
  readonly features: readonly (MapFeature & Partial<FeatureStudy>)[];
  /** Maps at χ² 5 % lower and higher; null where `map.sensitivity` does not ask for them. */
  readonly sensitivity: SensitivitySummary | null;
  /** Emission that varies with the orbit; null where `map.modulation` does not ask for it. */
  readonly modulation: {
    /** χ² over the number of samples of average and modulation together. */
    readonly reduced_chi_square: number;
    /** Whether the iteration met its goal. */
    readonly converged: boolean;
    /** Amplitudes over regions. */
    readonly regions: readonly RegionStudy[];
  } | null;
  /** γ searched with maps; null where `map.systemic_scan` does not ask for it. */
  readonly systemic_scan: ScanSummary | null;
  /** The period searched with maps; null where `map.period_scan` does not ask for it. */
  readonly period_scan: ScanSummary | null;
  /** Whether any map can fit: probabilities of the tests, null where the data do not allow one. */
  readonly any_map: LineTestsSummary;
}

/** A parameter that was searched with maps, in numbers. */
export type ScanSummary = Omit<ScanStudy, "warnings">;

/** A map at another χ², in numbers. */
export type SensitivityPartSummary = Omit<SensitivityPart, "map">;

/** Maps at χ² 5 % lower and higher, in numbers. */
export interface SensitivitySummary {
  /** Fits the data more closely. */
  readonly closer: SensitivityPartSummary;
  /** Fits the data less closely. */
  readonly looser: SensitivityPartSummary;
}

/** A line mapped together with another, in numbers. */
export interface BlendSummary {
  /** Its name, or its wavelength where it has none. */
  readonly name: string;
  /** Rest wavelength in air, Å. */
  readonly rest_air_angstrom: number;
  /** Whether it shares the line's map, or has its own. */
  readonly map: "shared" | "own";
  /** Flux over that of the line: given, fitted, or that of the two maps. */
  readonly ratio: number;
  /** One standard deviation of a fitted ratio; null for another. */
  readonly ratio_error: number | null;
  /** Brightest place of its own map; null where it shares the line's. */
  readonly peak: MapPeak | null;
}

/**
 * Makes `map.fits` and `map.json`: the velocity maps of all lines.
 *
 * @param session The target at work.
 * @param output Where to write.
 * @returns Document, files, warnings.
 */
export async function runMap(
  session: Session,
  output: StepOutput,
): Promise<StepResult<MapDocument>> {
  const maps: MappedLine[] = [];
  const studies: StudiedLine[] = [];
  const tests: LineTests[] = [];
  for (const line of mappedLines(session.lines("make the velocity map"))) {
    tests.push(await session.anyMap(line));
    maps.push(await session.map(line));
    studies.push(await studiesOf(session, line));
  }
  const { inputs, warnings: reading } = await session.exposures();
  const warnings = uniqueWarnings([
    ...reading,
    ...(await session.systemic()).warnings,
    ...tests.flatMap((test) => test.warnings),
    ...maps.flatMap((mapped) => [...mapped.trail.warnings, ...mapped.warnings]),
    ...studies.flatMap((found) => Object.values(found).flatMap((one) => one?.warnings ?? [])),
  ]);
  const document: MapDocument = {
    ...outputHead(session.target, { schema: "map/1", inputs, warnings }),
    maps: maps.map((mapped, i) =>
      summary(session.target, { mapped, any: tests[i]!, studies: studies[i]! })
    ),
  };
  const files = await writeStep([
    ["map.fits", mapFits(session.target, { maps, studies })],
    ["map.json", jsonText(document)],
  ], output);
  return { document, files, warnings };
}

function summary(
  target: Target,
  { mapped, any, studies }: {
    readonly mapped: MappedLine;
    readonly any: LineTests;
    readonly studies: StudiedLine;
  },
): MapSummary {
  const { structures, sensitivity, modulation, systemic_scan, period_scan } = studies;
  const { trail, map } = mapped;
  return {
    line: trail.line.name,
    rest_air_angstrom: trail.line.air_angstrom,
    method: mapped.method,
    pixels: map.pixels,
    half_width_kms: map.half_width_kms,
    systemic_kms: mapped.systemic_kms,
    reduced_chi_square: mapped.reduced_chi_square,
    sample_count: mapped.sample_count,
    goal_asked: mapped.goal === null ? null : target.settings.map.reduced_chi_square,
    goal_used: mapped.goal,
    multiplier: mapped.multiplier,
    sign: mapped.sign,
    phase_gap: mapped.phase_gap,
    blends: mapped.blends.map((blend) => blendSummary(mapped, blend)),
    together: mapped.together,
    baseline: mapped.baselines === null ? null : {
      level_rms: rootMeanSquare(mapped.baselines.level),
      slope_rms: rootMeanSquare(mapped.baselines.slope),
    },
    scale: mapped.scale,
    iterations: mapped.iterations,
    converged: mapped.converged,
    misalignment: mapped.misalignment,
    noise_scale: trail.noise_scale,
    peak: mapped.peak,
    features: mapped.features.map((feature, i) => ({ ...feature, ...structures?.features[i] })),
    sensitivity: sensitivity && {
      closer: withoutMap(sensitivity.closer),
      looser: withoutMap(sensitivity.looser),
    },
    modulation: modulation && {
      reduced_chi_square: modulation.reduced_chi_square,
      converged: modulation.converged,
      regions: modulation.regions,
    },
    systemic_scan: systemic_scan && withoutWarnings(systemic_scan),
    period_scan: period_scan && withoutWarnings(period_scan),
    any_map: testsSummary(any),
  };
}

function blendSummary(mapped: MappedLine, blend: MappedBlend): BlendSummary {
  const { name, rest_air_angstrom, map, ratio, ratio_error } = blend;
  const own = mapped.own_maps.find(({ blend: { rest_ratio } }) => rest_ratio === blend.rest_ratio);
  return {
    name,
    rest_air_angstrom,
    map,
    ratio: own?.flux_ratio ?? ratio ?? NaN,
    ratio_error,
    peak: own === undefined ? null : mapPeak(own.map),
  };
}

function rootMeanSquare(values: Float64Array): number {
  return Math.sqrt(values.reduce((sum, value) => sum + value * value, 0) / values.length);
}

function withoutMap({ map: _map, ...rest }: SensitivityPart): SensitivityPartSummary {
  return rest;
}

function withoutWarnings({ warnings: _warnings, ...rest }: ScanStudy): ScanSummary {
  return rest;
}
