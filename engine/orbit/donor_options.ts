import type { DonorOptions } from "./measure_donor.ts";
import type { OrbitLine } from "./orbit_line.ts";

/** What a line says of how its donor is to be measured. */
export function donorOptions({ templates, components_vacuum_angstrom }: OrbitLine): DonorOptions {
  return {
    ...(templates ? { templates } : {}),
    ...(components_vacuum_angstrom ? { components_vacuum_angstrom } : {}),
  };
}
