import type { Warning } from "../../errors.ts";
import type { Trail } from "../../trail/mod.ts";
import { type OutputHead, outputHead, uniqueWarnings } from "../output_head.ts";
import type { Session } from "../session.ts";
import { trailFits } from "../trail_fits.ts";
import { type StepOutput, type StepResult, writeStep } from "./step.ts";

/** What `trail --json` prints. */
export interface TrailDocument extends OutputHead {
  /** One entry a line. */
  readonly trails: readonly TrailSummary[];
}

/** One line's trail in a few numbers. */
export interface TrailSummary {
  /** Name of the line. */
  readonly line: string;
  /** Rest wavelength in air, Å. */
  readonly rest_air_angstrom: number;
  /** Exposures used. */
  readonly exposures: number;
  /** Rows of the display grid. */
  readonly rows: number;
  /** Velocity bins of the display grid. */
  readonly columns: number;
  /** Bin of the display grid, km/s. */
  readonly step_kms: number;
  /** Samples on native pixels. */
  readonly samples: number;
  /** Of these masked. */
  readonly masked: number;
  /** Factor applied to the stated errors. */
  readonly noise_scale: number;
}

/**
 * Makes `trail.fits`: the trails of all lines.
 *
 * @param session The target at work.
 * @param output Where to write.
 * @returns Document, files, warnings.
 */
export async function runTrail(
  session: Session,
  output: StepOutput,
): Promise<StepResult<TrailDocument>> {
  const lines = session.lines("make the trail");
  const trails: Trail[] = [];
  for (const line of lines) trails.push(await session.trail(line));
  const { inputs, warnings: reading } = await session.exposures();
  const warnings: Warning[] = uniqueWarnings([
    ...reading,
    ...trails.flatMap((trail) => trail.warnings),
  ]);
  const files = await writeStep([["trail.fits", trailFits(session.target, { trails })]], output);
  return {
    document: {
      ...outputHead(session.target, { schema: "trail/1", inputs, warnings }),
      trails: trails.map(summary),
    },
    files,
    warnings,
  };
}

function summary(trail: Trail): TrailSummary {
  let masked = 0;
  for (const error of trail.error) if (!Number.isFinite(error)) masked++;
  return {
    line: trail.line.name,
    rest_air_angstrom: trail.line.air_angstrom,
    exposures: trail.sampling.count,
    rows: trail.grid.rows,
    columns: trail.grid.columns,
    step_kms: trail.grid.step_kms,
    samples: trail.flux.length,
    masked,
    noise_scale: trail.noise_scale,
  };
}
