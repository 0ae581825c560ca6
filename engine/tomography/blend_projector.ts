import type { Sampling } from "../trail/mod.ts";
import { InputError } from "../errors.ts";
import type { LinearOperator } from "./linear_operator.ts";
import { makeProjector, type Projector, type ProjectorOptions } from "./projector.ts";

/** A member of a blend. */
export interface BlendMember {
  /** Its rest wavelength over the one that made the velocities (vacuum). */
  readonly rest_ratio: number;
  /** Its flux over that of the main line. */
  readonly flux_ratio: number;
}

/**
 * The projector of a blend whose members share one map: each is seen at its own rest wavelength with
 * its share of the flux. The main line itself is added with ratio 1.
 *
 * @param sampling The exposures.
 * @param options Options of the projector, and the other members.
 * @returns The operator; its map is the main line's.
 * @throws {InputError} When a flux ratio is not a positive number.
 *
 * @example
 * ```ts
 * import { blendProjector } from "@millrace/millrace/tomography";
 * import { assertAlmostEquals } from "@std/assert";
 *
 * const sampling = {
 *   count: 1,
 *   phase: Float64Array.of(0),
 *   cycle: Float64Array.of(0),
 *   phase_width: Float64Array.of(0),
 *   start: Uint32Array.of(0, 2),
 *   velocity_kms: Float64Array.of(0, 299.792458),
 *   pixel_kms: Float64Array.of(20, 20),
 *   profile_sigma_kms: Float64Array.of(10),
 * };
 * const projector = blendProjector(sampling, {
 *   pixels: 3,
 *   half_width_kms: 10,
 *   systemic_kms: 0,
 *   members: [{ rest_ratio: 1.001, flux_ratio: 0.5 }],
 * });
 * const data = projector.forward(Float64Array.of(0, 0, 0, 0, 1, 0, 0, 0, 0));
 * assertAlmostEquals(data[1]! / data[0]!, 0.5, 1e-2);
 * ```
 */
export function blendProjector(
  sampling: Sampling,
  options: ProjectorOptions & { readonly members: readonly BlendMember[] },
): Projector {
  const { members, rest_ratio = 1 } = options;
  const main = makeProjector(sampling, options);
  const others = members.map((member) => {
    if (!(member.flux_ratio > 0) || !Number.isFinite(member.flux_ratio)) {
      throw new InputError({
        action: "make projector",
        rule: "flux ratio of a blend's member must be positive",
        value: member.flux_ratio,
        key: "lines.blends",
      });
    }
    return {
      ratio: member.flux_ratio,
      projector: makeProjector(sampling, {
        ...options,
        rest_ratio: rest_ratio * member.rest_ratio,
      }),
    };
  });
  if (others.length === 0) return main;
  const combined = (first: LinearOperator, rest: readonly LinearOperator[]): LinearOperator => {
    const samples = new Float64Array(main.sample_count);
    const image = new Float64Array(main.image_size);
    return {
      image_size: main.image_size,
      sample_count: main.sample_count,
      forward(map, into = new Float64Array(main.sample_count)) {
        first.forward(map, into);
        rest.forEach((member, i) =>
          addScaled(into, member.forward(map, samples), others[i]!.ratio)
        );
        return into;
      },
      adjoint(data, into = new Float64Array(main.image_size)) {
        first.adjoint(data, into);
        rest.forEach((member, i) => addScaled(into, member.adjoint(data, image), others[i]!.ratio));
        return into;
      },
    };
  };
  const projectors = others.map((member) => member.projector);
  return {
    ...main,
    ...combined(main, projectors),
    sparing: (weight) =>
      combined(main.sparing?.(weight) ?? main, projectors.map((p) => p.sparing?.(weight) ?? p)),
  };
}

function addScaled(into: Float64Array, values: Float64Array, factor: number): void {
  for (let i = 0; i < into.length; i++) into[i] = into[i]! + factor * values[i]!;
}
