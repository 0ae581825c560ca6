import { InputError } from "../errors.ts";
import { meanFlux } from "../tomography/mod.ts";
import type { Trail } from "../trail/mod.ts";

/** Another line of which the same map is made. */
export interface JoinedLine {
  /** Its name. */
  readonly line: string;
  /** Its flux over that of the mapped line. */
  readonly ratio: number;
  /** Whether the ratio was given or measured on the mean fluxes. */
  readonly ratio_from: "target file" | "mean flux";
}

/**
 * Joins trails of several lines into one, as if each exposure had been taken once more in each further
 * line: fluxes are brought to those of the first, errors with them. The display grid stays that of the
 * first.
 *
 * @param trail The trail of the mapped line.
 * @param options What joins it.
 * @param options.others Trails of the other lines, with their flux ratios where these are known.
 * @param options.systemic_kms Systemic velocity, km/s.
 * @param options.half_width_kms Half the range of velocities over which fluxes are compared, km/s.
 * @returns The joint trail, and the ratios.
 * @throws {InputError} When a line has no flux of the mapped line's sign to measure its ratio by.
 */
export function joinTrails(
  trail: Trail,
  options: {
    others: readonly { readonly trail: Trail; readonly ratio: number | "measured" }[];
    systemic_kms: number;
    half_width_kms: number;
  },
): { joint: Trail; joined: JoinedLine[] } {
  const { others, systemic_kms, half_width_kms } = options;
  const range = { centre_kms: systemic_kms, half_range_kms: half_width_kms };
  const joined = others.map(({ trail: other, ratio }): JoinedLine => {
    const line = other.line.name;
    if (ratio !== "measured") return { line, ratio, ratio_from: "target file" };
    const found = meanFlux(other, range) / meanFlux(trail, range);
    if (found > 0) return { line, ratio: found, ratio_from: "mean flux" };
    throw new InputError({
      action: `map ${trail.line.name} together with ${line}`,
      rule: "both lines must be in emission, or both in absorption",
      value: Number(found.toPrecision(3)),
      unit: "of its mean flux",
      key: "lines.together",
      remedy: "leave it out",
    });
  });
  if (others.length === 0) return { joint: trail, joined };
  const all = [
    { trail, ratio: 1 },
    ...others.map((other, i) => ({ trail: other.trail, ratio: joined[i]!.ratio })),
  ];
  const samplings = all.map((one) => one.trail.sampling);
  const scaled = (take: (trail: Trail) => Float64Array) =>
    concatenated(all.map((one) => take(one.trail).map((value) => value / one.ratio)));
  const start: number[] = [];
  let before = 0;
  for (const sampling of samplings) {
    for (let i = 0; i < sampling.count; i++) start.push(before + sampling.start[i]!);
    before += sampling.velocity_kms.length;
  }
  start.push(before);
  return {
    joined,
    joint: {
      ...trail,
      sampling: {
        count: samplings.reduce((sum, { count }) => sum + count, 0),
        phase: concatenated(samplings.map(({ phase }) => phase)),
        cycle: concatenated(samplings.map(({ cycle }) => cycle)),
        phase_width: concatenated(samplings.map(({ phase_width }) => phase_width)),
        start: Uint32Array.from(start),
        velocity_kms: concatenated(samplings.map(({ velocity_kms }) => velocity_kms)),
        pixel_kms: concatenated(samplings.map(({ pixel_kms }) => pixel_kms)),
        profile_sigma_kms: concatenated(samplings.map((one) => one.profile_sigma_kms)),
      },
      flux: scaled(({ flux }) => flux),
      error: scaled(({ error }) => error),
      sources: all.flatMap((one) => one.trail.sources),
      group: Uint16Array.from(all.flatMap((one) => [...one.trail.group])),
      continuum: concatenated(all.map((one) => one.trail.continuum)),
      continuum_error: concatenated(all.map((one) => one.trail.continuum_error)),
    },
  };
}

function concatenated(parts: readonly Float64Array[]): Float64Array {
  const out = new Float64Array(parts.reduce((sum, { length }) => sum + length, 0));
  let at = 0;
  for (const part of parts) {
    out.set(part, at);
    at += part.length;
  }
  return out;
}
