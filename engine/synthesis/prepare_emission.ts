import type { Binary } from "../binary/mod.ts";
import { accretorCloud, outflowClouds } from "./compact_clouds.ts";
import { discClouds } from "./disc_clouds.ts";
import { addDiscToMap } from "./disc_map.ts";
import { shearStrength } from "./disc_shape.ts";
import { discTables } from "./disc_tables.ts";
import { donorCloud } from "./donor_cloud.ts";
import type { Occultation } from "./eclipse.ts";
import type { Emission } from "./emission.ts";
import { inclinationOf } from "./inclination.ts";
import { addSpotToMap } from "./map_light.ts";
import type { PartName } from "./model.ts";
import type { CompleteModel } from "./model_parameters.ts";
import { cloudAdder, type PointCloud } from "./point_cloud.ts";
import { spotCloud } from "./spot_cloud.ts";
import { streamCloud } from "./stream_cloud.ts";
import type { VelocityMap } from "../tomography/mod.ts";

/** What a part needs to be made ready. */
export interface EmissionContext {
  /** The binary. */
  readonly binary: Binary;
  /** Narrowest instrumental profile of any exposure, in the system's frame, km/s. */
  readonly instrument_sigma_kms: number;
  /** What the donor hides; null without eclipses. */
  readonly occultation: Occultation | null;
}

/** Makes a part ready for a binary: everything that does not depend on the exposure is done here. */
export function prepareEmission(
  part: PartName,
  model: CompleteModel,
  context: EmissionContext,
): Emission {
  const { binary } = context;
  switch (part) {
    case "disc":
      return discEmission(model.disc, context);
    case "spot": {
      const beamed = model.spot.beaming > 0;
      return cloudEmission([spotCloud(model, binary)], {
        context,
        no_map: beamed ? "a beamed spot's light varies with phase" : null,
      });
    }
    case "stream":
      return cloudEmission([streamCloud(model, binary)], { context, no_map: null });
    case "donor":
      return cloudEmission([donorCloud(model, context)], {
        context,
        no_map: "each piece of its surface is in sight for part of the orbit only",
      });
    case "accretor":
      return cloudEmission([accretorCloud(model, binary)], {
        context,
        no_map: model.accretor.redshift_kms === 0
          ? null
          : "its redshift is the same at all phases, which no velocity in the map gives",
      });
    case "outflow":
      return cloudEmission(outflowClouds(model, binary), {
        context,
        no_map: model.outflow.trough_equivalent_width_kms === 0
          ? null
          : "its trough is on the blue side at all phases, which no velocity in the map gives",
      });
  }
}

/** A part that is made of clouds of points. */
function cloudEmission(
  clouds: readonly PointCloud[],
  { context, no_map }: { readonly context: EmissionContext; readonly no_map: string | null },
): Emission {
  const adders = clouds.map((cloud) => cloudAdder(cloud, context.occultation));
  return {
    addTo(exposure) {
      for (const add of adders) add(exposure);
    },
    no_map,
    addToMap: (map) => addCloudsToMap(map, clouds),
  };
}

function addCloudsToMap(map: VelocityMap, clouds: readonly PointCloud[]): void {
  for (const { vx_kms, vy_kms, light_kms, sigma_kms } of clouds) {
    for (let k = 0; k < light_kms.length; k++) {
      const place = { vx_kms: vx_kms[k]!, vy_kms: vy_kms[k]! };
      addSpotToMap(map, { ...place, sigma_kms, light: light_kms[k]! });
    }
  }
}

/** The disc: by tables where it may be, by points where places matter. */
function discEmission(disc: CompleteModel["disc"], context: EmissionContext): Emission {
  const { binary, occultation } = context;
  const thick = disc.optical_depth === "thick";
  const shear = thick ? shearStrength(inclinationOf(binary), disc.shear_coefficient) : 0;
  const options = { ...context, shear };
  const circular = disc.eccentricity === 0;
  const edge = disc.outer_radius_over_a * (1 + disc.eccentricity);
  const tables = circular ? discTables(disc, options) : null;
  let byPoints: Emission["addTo"][] | undefined;
  return {
    addTo(exposure) {
      const hidden = occultation?.mayHide(exposure.phase, exposure.phase_width, edge) ?? false;
      if (tables !== null && !hidden) return tables(exposure);
      byPoints ??= discClouds(disc, options).map((cloud) => cloudAdder(cloud, occultation));
      for (const add of byPoints) add(exposure);
    },
    no_map: thick
      ? "an optically thick disc's brightness depends on the direction from which it is seen"
      : null,
    addToMap(map) {
      if (circular) addDiscToMap(map, disc, binary);
      else addCloudsToMap(map, discClouds(disc, options));
    },
  };
}
