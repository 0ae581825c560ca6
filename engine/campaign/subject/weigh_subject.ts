import type { DisplayGrid, NullDistribution, PlateSubject } from "../../figures/mod.ts";
import { makeGrid, type Sampling } from "../../trail/mod.ts";
import { type Hypothesis, type WeighedLine, weighPlate } from "../../weighing/mod.ts";
import { limitMap } from "./limit_subject.ts";

/** Pixels along each side of the map of the detection limit. */
const LIMIT_PIXELS = 121;

/** What a plate of a weighed line shows. */
export interface WeighSubjects {
  /** The data, the model whose every part is needed, the null distribution, the detection limit. */
  readonly best: PlateSubject;
  /** The residual of each hypothesis, best supported first. */
  readonly rivals: readonly PlateSubject[];
}

/**
 * What a plate of a weighed line shows, laid out on one grid of velocity and phase.
 *
 * @param weighed The weighed line.
 * @param common What all plates of the target have in common.
 * @returns Subjects of plates.
 */
export function weighSubjects(
  weighed: WeighedLine,
  common: Pick<PlateSubject, "title" | "binary">,
): WeighSubjects {
  const found = weighPlate(weighed);
  const { sampling, parts, null_distribution } = found;
  const { line } = weighed.trail;
  const { reach_kms } = weighed.prepared.problem.data;
  const on = (values: Float64Array) => onGrid(values, sampling, reach_kms);
  const grid = on(found.flux);
  const base = {
    ...common,
    line,
    systemic_kms: weighed.systemic_kms,
    method: "",
    trail: { grid, sampling },
  };
  return {
    best: {
      ...base,
      model: on(found.model).flux,
      model_name: partsName(parts),
      ...(null_distribution === null ? {} : { null_distribution: distribution(null_distribution) }),
      ...limitOf(weighed),
    },
    rivals: found.residuals.map(({ parts, residual }) => {
      const { flux, error } = on(residual);
      return {
        ...base,
        model_name: partsName(parts),
        // Cells are means of samples of unit error: over their own error they are standard deviations.
        residual: flux.map((value, k) => value / error[k]!),
      };
    }),
  };
}

/** A hypothesis in words, as in "disc + spot". */
function partsName(parts: Hypothesis): string {
  return parts.join(" + ");
}

function distribution(
  found: NonNullable<ReturnType<typeof weighPlate>["null_distribution"]>,
): NullDistribution {
  return {
    null_name: partsName(found.null_parts),
    against_name: partsName(found.against_parts),
    gains: found.gains,
    observed: found.observed,
  };
}

/** The detection limit, where it was computed: on top of the simplest of the sets. */
function limitOf(weighed: WeighedLine): Pick<PlateSubject, "detection_limit"> {
  const { limit, comparison: { hypotheses } } = weighed;
  if (limit === null) return {};
  const [simplest] = hypotheses.toSorted((a, b) => a.parts.length - b.parts.length);
  let light_kms = 0;
  for (const [width] of simplest!.fit.evaluation.amplitudes.values()) light_kms += width!;
  const { half_width_kms } = limit;
  return {
    detection_limit: limitMap({ limit, light_kms }, { pixels: LIMIT_PIXELS, half_width_kms }),
  };
}

/** Samples of unit error on a uniform grid, blank where the data were masked. */
function onGrid(values: Float64Array, sampling: Sampling, reach_kms: number): DisplayGrid {
  const error = new Float64Array(values.length).fill(1);
  const grid = makeGrid(sampling, { flux: values, error }, { reach_kms });
  const flux = grid.flux.slice();
  for (let row = 0; row < grid.rows; row++) {
    let n = sampling.start[row]!;
    const end = sampling.start[row + 1]!;
    for (let column = 0; column < grid.columns; column++) {
      const velocity = grid.first_kms + column * grid.step_kms;
      // Samples stand in order of velocity: the nearest one is never behind.
      const away = (at: number) => Math.abs(sampling.velocity_kms[at]! - velocity);
      while (n + 1 < end && away(n + 1) <= away(n)) n++;
      if (away(n) > 0.75 * sampling.pixel_kms[n]!) flux[row * grid.columns + column] = NaN;
    }
  }
  return { ...grid, flux };
}
