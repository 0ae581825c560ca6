import type { Binary } from "../binary/mod.ts";
import { InputError } from "../errors.ts";
import { addDiscToMap } from "./disc_map.ts";
import { shearStrength } from "./disc_shape.ts";
import { discTables } from "./disc_tables.ts";
import type { Emission } from "./emission.ts";
import { addSpotToMap } from "./map_light.ts";
import type { PartName } from "./model.ts";
import type { CompleteModel } from "./model_parameters.ts";
import { cloudAdder, type PointCloud } from "./point_cloud.ts";
import { spotCloud } from "./spot_cloud.ts";

/** What a part needs to be made ready. */
export interface EmissionContext {
  /** The binary. */
  readonly binary: Binary;
  /** Narrowest instrumental profile of any exposure, in the system's frame, km/s. */
  readonly instrument_sigma_kms: number;
}

/** Makes a part ready for a binary: everything that does not depend on the exposure is done here. */
export function prepareEmission(
  part: PartName,
  model: CompleteModel,
  context: EmissionContext,
): Emission {
  switch (part) {
    case "disc":
      return discEmission(model.disc, context);
    case "spot":
      return cloudEmission(
        part,
        spotCloud(model, context.binary),
        "a beamed spot's light varies with phase",
      );
    default:
      throw new Error(part);
  }
}

/** A part that is one cloud; `varies` says why it has no map if its brightness varies. */
function cloudEmission(part: PartName, cloud: PointCloud, varies: string): Emission {
  return {
    part,
    addTo: cloudAdder(cloud),
    no_map: cloud.brightness === null ? null : varies,
    addToMap(map) {
      const { vx_kms, vy_kms, light_kms, sigma_kms } = cloud;
      for (let k = 0; k < light_kms.length; k++) {
        addSpotToMap(map, {
          vx_kms: vx_kms[k]!,
          vy_kms: vy_kms[k]!,
          sigma_kms,
          light: light_kms[k]!,
        });
      }
    },
  };
}

function discEmission(disc: CompleteModel["disc"], context: EmissionContext): Emission {
  const { binary, instrument_sigma_kms } = context;
  const thick = disc.optical_depth === "thick";
  const shear = thick ? shearStrength(inclinationOf(binary), disc.shear_coefficient) : 0;
  return {
    part: "disc",
    addTo: discTables(disc, { binary, instrument_sigma_kms, shear }),
    no_map: thick
      ? "an optically thick disc's surface brightness depends on the direction from which it is seen"
      : null,
    addToMap: (map) => addDiscToMap(map, disc, binary),
  };
}

/** The inclination, degrees. */
export function inclinationOf(binary: Binary): number {
  const { inclination_deg } = binary;
  if (inclination_deg !== null && inclination_deg >= 0 && inclination_deg < 90) {
    return inclination_deg;
  }
  throw new InputError({
    action: "build model",
    rule: "this part of the model needs an inclination of at least 0 and below 90 deg",
    value: inclination_deg,
    unit: "deg",
    key: "binary.inclination_deg",
    remedy: "state it, or leave out the part or option that needs it",
  });
}
