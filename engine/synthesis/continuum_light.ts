import { smearingRule } from "../tomography/mod.ts";
import type { Binary } from "../binary/mod.ts";
import { requirePossible } from "./check_model.ts";
import type { CloudPlace } from "./cloud_place.ts";
import { completeModel } from "./complete_model.ts";
import { donorOccultation, type Occultation } from "./eclipse.ts";
import { inclinationOf } from "./inclination.ts";
import type { Model } from "./model.ts";
import type { CompleteModel } from "./model_parameters.ts";
import { legendre } from "./quadrature.ts";
import { spotHead } from "./rim_gas.ts";

const RADII = 24;
const AZIMUTHS = 120;
const ABRUPT = 5;

/** {@linkcode continuumLight} of a model whose eclipse may be off. */
export function continuumInSight(
  model: Model,
  binary: Binary,
): (phase: number, phase_width: number) => number {
  const complete = completeModel(model);
  if (!complete.eclipse.enabled) return () => 1;
  requirePossible(complete, binary);
  const occultation = donorOccultation(binary.mass_ratio, inclinationOf(binary));
  return continuumLight(complete, { binary, occultation });
}

/**
 * The share of the continuum that is in sight during an exposure: one minus what the donor hides
 * of the accretor, the disc and the spot.
 */
export function continuumLight(
  model: CompleteModel,
  { binary, occultation }: { readonly binary: Binary; readonly occultation: Occultation },
): (phase: number, phase_width: number) => number {
  const { continuum_accretor, continuum_disc, continuum_spot, continuum_index } = model.eclipse;
  const { inner_radius_over_a: low, outer_radius_over_a: high } = model.disc;
  const points: [x: number, y: number, light: number][] = [];
  if (continuum_accretor > 0) points.push([0, 0, continuum_accretor]);
  if (continuum_spot > 0) {
    const { x, y } = spotHead(model, binary);
    points.push([x, y, continuum_spot]);
  }
  if (continuum_disc > 0) {
    const { nodes, weights } = legendre(RADII);
    const rings = Array.from(nodes, (node, k) => {
      const radius = low + (high - low) * (1 + node) / 2;
      return { radius, light: weights[k]! * radius ** (1 - continuum_index) };
    });
    const total = rings.reduce((sum, { light }) => sum + light, 0);
    for (const { radius, light } of rings) {
      for (let j = 0; j < AZIMUTHS; j++) {
        const azimuth = (j + 0.5) * 2 * Math.PI / AZIMUTHS;
        points.push([
          radius * Math.cos(azimuth),
          radius * Math.sin(azimuth),
          continuum_disc * light / total / AZIMUTHS,
        ]);
      }
    }
  }
  const reach = points.reduce((far, [x, y]) => Math.max(far, Math.hypot(x, y)), 0);
  const place: CloudPlace = {
    x: Float64Array.from(points, ([x]) => x),
    y: Float64Array.from(points, ([, y]) => y),
    z: new Float64Array(points.length),
  };
  const share = new Float64Array(points.length);
  return (phase, phase_width) => {
    if (points.length === 0 || !occultation.mayHide(phase, phase_width, reach)) return 1;
    const { offset, weight } = smearingRule(phase_width, phase_width === 0 ? 0 : ABRUPT);
    let hidden = 0;
    for (let q = 0; q < offset.length; q++) {
      occultation.hide(phase + offset[q]!, place, share.fill(1));
      for (let k = 0; k < share.length; k++) hidden += weight[q]! * points[k]![2] * (1 - share[k]!);
    }
    return 1 - hidden;
  };
}
