import { encodeFits, type HduSpec } from "../../fits/mod.ts";
import type { Binary } from "../../binary/mod.ts";
import type { Warning } from "../../errors.ts";
import {
  checkModel,
  type Model,
  modelMap,
  type PartName,
  synthesizeParts,
} from "../../synthesis/mod.ts";
import { fitOfMap } from "../../tomography/mod.ts";
import { makeGrid, type Trail, type TrailGrid } from "../../trail/mod.ts";
import { figureFiles } from "../figure_files.ts";
import { fitsHead, hduName } from "../fits_head.ts";
import { jsonText, type OutputHead, outputHead, uniqueWarnings } from "../output_head.ts";
import { pause } from "../pause.ts";
import { plannedTrail } from "../planned_trail.ts";
import type { LineSettings } from "../schema/lines_section.ts";
import type { Session } from "../session.ts";
import { simulateExposures } from "../simulate.ts";
import { modelOf } from "../model_of.ts";
import { needed } from "../target.ts";
import { velocityAxisCards } from "../trail_fits.ts";
import { mapAxisCards } from "../map_fits.ts";
import { type StepOutput, type StepResult, writeStep } from "./step.ts";

/** `model.json`. */
export interface ModelDocument extends OutputHead {
  /** One entry a line. */
  readonly models: readonly ModelSummary[];
  /** Raw exposures written, when asked for. */
  readonly exposures: readonly string[];
}

/** One line's model in numbers. */
export interface ModelSummary {
  /** Name of the line. */
  readonly line: string;
  /** Rest wavelength in air, Å. */
  readonly rest_air_angstrom: number;
  /** The model. */
  readonly model: Model;
  /** Equivalent width of each part as predicted within the window, mean over exposures, km/s. */
  readonly equivalent_width_kms: Readonly<Partial<Record<PartName, number>>>;
  /** Parts that a fixed map can stand for. */
  readonly mapped_parts: readonly PartName[];
  /** χ² of the data about the model; null without data. */
  readonly chi_square: number | null;
  /** Unmasked samples; null without data. */
  readonly sample_count: number | null;
  /** χ² over the number of samples; null without data. */
  readonly reduced_chi_square: number | null;
}

/** A line's predicted trail beside its data. */
export interface SynthesizedLine {
  /** The trail: of the data, or planned. */
  readonly trail: Trail;
  /** True when the trail holds data. */
  readonly observed: boolean;
  /** The model on native pixels. */
  readonly flux: Float64Array;
  /** The same on the display grid. */
  readonly grid: TrailGrid;
  /** Summary. */
  readonly summary: ModelSummary;
  /** Its map: parts that keep their brightness. */
  readonly map: ReturnType<typeof modelMap>;
  /** What a user should know. */
  readonly warnings: readonly Warning[];
}

/**
 * Predicts the trails of all lines from `[model]`: at the exposures of the data where there are any,
 * else at those that `[observation]` plans.
 *
 * @param session The target at work.
 * @param line The line.
 * @returns The prediction.
 */
export async function synthesizeLine(
  session: Session,
  line: LineSettings,
): Promise<SynthesizedLine> {
  const { target } = session;
  const action = "predict the trail";
  const binary: Binary = needed(target, {
    value: session.binary(),
    key: "binary (any numbers that fix K1 and K2)",
    action,
  });
  const observed = target.settings.exposures.length > 0;
  const trail = observed
    ? await session.trail(line)
    : plannedTrail(target, { line, ephemeris: await session.ephemeris() });
  await pause(session.signal);
  const model = await modelOf(target, { settings: line, line: trail.line });
  const systemic_kms = (await session.systemic()).kms;
  const parts = synthesizeParts(model, { binary, sampling: trail.sampling, systemic_kms });
  const flux = new Float64Array(trail.flux.length);
  for (const part of parts.values()) part.forEach((value, k) => flux[k]! += value);
  const fit = observed ? fitOfMap(trail, { model: flux }) : null;
  const map = modelMap(model, {
    binary,
    half_width_kms: target.settings.map.half_width_kms,
    pixels: target.settings.map.pixels,
  });
  return {
    trail,
    observed,
    flux,
    grid: makeGrid(trail.sampling, { flux, error: trail.error }, {
      reach_kms: line.reach_kms,
      step_kms: trail.grid.step_kms,
      phase_bins: target.settings.trail.phase_bins,
    }),
    map,
    summary: {
      line: trail.line.name,
      rest_air_angstrom: trail.line.air_angstrom,
      model,
      equivalent_width_kms: Object.fromEntries(
        [...parts].map(([name, part]) => [name, meanWidth(part, trail)]),
      ),
      mapped_parts: map.parts,
      chi_square: fit?.chi_square ?? null,
      sample_count: fit?.sample_count ?? null,
      reduced_chi_square: fit?.reduced_chi_square ?? null,
    },
    warnings: [
      ...trail.warnings,
      ...[...checkModel(model, binary), ...map.warnings].map((warning) => ({
        ...warning,
        line: trail.line.name,
      })),
    ],
  };
}

function meanWidth(flux: Float64Array, { sampling }: Trail): number {
  let sum = 0;
  flux.forEach((value, k) => sum += value * sampling.pixel_kms[k]!);
  return sum / sampling.count;
}

/**
 * Makes `model.fits` and `model.json`, and raw exposures where asked.
 *
 * @param session The target at work.
 * @param output Where to write.
 * @param options What more to do.
 * @param options.exposures Folder for simulated raw exposures; none when absent.
 * @returns Document, files, warnings.
 */
export async function runSynth(
  session: Session,
  output: StepOutput,
  options: { exposures?: string } = {},
): Promise<StepResult<ModelDocument>> {
  const { target } = session;
  const made: SynthesizedLine[] = [];
  for (const line of session.lines("predict the trail")) {
    made.push(await synthesizeLine(session, line));
  }
  const read = made.some(({ observed }) => observed)
    ? await session.exposures()
    : { inputs: [], warnings: [] };
  const raw = options.exposures === undefined ? [] : await simulateExposures(target, {
    folder: options.exposures,
    overwrite: output.overwrite,
    progress: session.progress,
    signal: session.signal,
  });
  const warnings = uniqueWarnings([
    ...read.warnings,
    ...(await session.systemic()).warnings,
    ...made.flatMap((line) => line.warnings),
  ]);
  const document: ModelDocument = {
    ...outputHead(target, { schema: "model/1", inputs: read.inputs, warnings }),
    models: made.map(({ summary }) => summary),
    exposures: raw,
  };
  const content =
    "Predicted trails: normalised flux minus one on the display grid; maps of the parts that keep their brightness.";
  const files = await writeStep([
    ["model.fits", encodeFits([fitsHead(target, { content }), ...made.flatMap(modelHdus)])],
    ["model.json", jsonText(document)],
    ...await modelPlate(session, made),
  ], output);
  return { document, files: [...files, ...raw], warnings };
}

/** One figure: a row a line, with residuals where there are data. */
async function modelPlate(
  session: Session,
  made: readonly SynthesizedLine[],
): Promise<[name: string, data: Uint8Array | string][]> {
  const { drawPlate } = await import("../../figures/mod.ts");
  const { plate } = session.target.settings;
  const systemic_kms = (await session.systemic()).kms;
  const drawn = drawPlate(
    {
      width: plate.width,
      rows: made.map(({ observed, map }, subject) => ({
        panels: [
          ...(map.parts.length > 0 ? ["map"] as const : []),
          ...(observed ? ["trail"] as const : []),
          { panel: "model" as const, name: "model" },
          ...(observed ? ["residual"] as const : []),
        ],
        subject,
      })),
    },
    made.map(({ trail, grid, map, summary }) => ({
      title: plate.title ?? session.target.title,
      line: trail.line,
      systemic_kms,
      method: "model",
      reduced_chi_square: summary.reduced_chi_square,
      binary: session.binary(),
      map: map.map,
      trail: { grid: trail.grid, sampling: trail.sampling },
      model: grid.flux,
      residual: residualOf(trail, grid),
    })),
  );
  return figureFiles(drawn, { name: "model-plate", plate });
}

/** Data less model on the display grid, standard deviations. */
function residualOf(trail: Trail, grid: TrailGrid): Float64Array {
  return grid.flux.map((value, k) =>
    Number.isFinite(trail.grid.error[k]!)
      ? (trail.grid.flux[k]! - value) / trail.grid.error[k]!
      : NaN
  );
}

function modelHdus({ trail, grid, observed, map }: SynthesizedLine): HduSpec[] {
  const { name } = trail.line;
  const shape = [grid.columns, grid.rows];
  const cards = velocityAxisCards({ line: trail.line, grid });
  const residual = residualOf(trail, grid);
  return [
    { kind: "image", name: hduName(name), shape, data: grid.flux, cards },
    ...(observed
      ? [{ kind: "image" as const, name: hduName(name, "residual"), shape, data: residual, cards }]
      : []),
    {
      kind: "table",
      name: hduName(name, "rows"),
      columns: [
        { name: "PHASE", data: grid.phase, description: "orbital phase, cycles" },
        { name: "PHASE_WIDTH", data: grid.phase_width, description: "exposure in cycles" },
      ],
    },
    {
      kind: "image",
      name: hduName(name, "map"),
      shape: [map.map.pixels, map.map.pixels],
      data: map.map.intensity,
      unit: "s/km",
      cards: mapAxisCards(map.map),
    },
  ];
}
