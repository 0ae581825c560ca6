import type { Binary } from "../binary/mod.ts";
import type { CompleteModel } from "./model_parameters.ts";
import type { PointCloud } from "./point_cloud.ts";

/** Light at the accretor's velocity. */
function atAccretor(
  binary: Binary,
  light: {
    readonly equivalent_width_kms: number;
    readonly sigma_kms: number;
    readonly shift_kms: number;
  },
): PointCloud {
  return {
    vx_kms: Float64Array.of(0),
    vy_kms: Float64Array.of(-binary.k_accretor_kms),
    light_kms: Float64Array.of(light.equivalent_width_kms),
    sigma_kms: light.sigma_kms,
    shift_kms: light.shift_kms,
    place: null,
    brightness: null,
    profile: null,
  };
}

/** The accretor's own line: a Gaussian on its S-wave, redshifted by its gravity. */
export function accretorCloud(model: CompleteModel, binary: Binary): PointCloud {
  const { redshift_kms: shift_kms, ...light } = model.accretor;
  const origin = { x: new Float64Array(1), y: new Float64Array(1), z: new Float64Array(1) };
  return { ...atAccretor(binary, { ...light, shift_kms }), place: origin };
}

/**
 * An outflow: a broad pedestal, and in front of the continuum a trough on the blue side, both
 * moving with the accretor (P Cygni profile; Drew 1987, MNRAS 224, 595). Too large to be eclipsed.
 */
export function outflowClouds(model: CompleteModel, binary: Binary): PointCloud[] {
  const { outflow } = model;
  const pedestal = atAccretor(binary, { ...outflow, shift_kms: 0 });
  if (outflow.trough_equivalent_width_kms === 0) return [pedestal];
  const trough = atAccretor(binary, {
    equivalent_width_kms: -outflow.trough_equivalent_width_kms,
    sigma_kms: outflow.trough_sigma_kms,
    shift_kms: -outflow.trough_speed_kms,
  });
  return [pedestal, trough];
}
