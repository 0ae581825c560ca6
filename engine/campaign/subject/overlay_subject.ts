import type { Binary } from "../../binary/mod.ts";
import type { MarkedBinary, PlateSubject } from "../../figures/mod.ts";
import type { TargetSettings } from "../schema/target_schema.ts";

/**
 * What `[plate]` and `[binary]` add over a map: contours, rims, and the band of streams where the mass
 * ratio has an error.
 *
 * @param settings The target file's settings.
 * @param binary The binary; null when it is not known.
 * @returns Fields of a plate's subject.
 */
export function overlaySubject(
  settings: TargetSettings,
  binary: Binary | null,
): Pick<PlateSubject, "contour_parts" | "rims" | "binary_range"> {
  const { contours, rims_over_a } = settings.plate;
  const error = settings.binary.mass_ratio_error ?? 0;
  return {
    contour_parts: contours,
    ...(binary === null ? {} : {
      rims: rims_over_a.map((radius) => ({
        speed_kms: keplerSpeed(radius, binary),
        name: `*r* = ${radius} *a*`,
      })),
      ...(error > 0 && error < binary.mass_ratio
        ? { binary_range: [withRatio(binary, -error), withRatio(binary, error)] as const }
        : {}),
    }),
  };
}

/** Projected Keplerian speed about the accretor at a radius, km/s: v = (K1 + K2) / √((1 + q) r/a). */
function keplerSpeed(radius_over_a: number, binary: Binary): number {
  const { k_accretor_kms, k_donor_kms, mass_ratio } = binary;
  return (k_accretor_kms + k_donor_kms) / Math.sqrt((1 + mass_ratio) * radius_over_a);
}

/** The binary of another mass ratio, the donor's speed held: it is the one that was measured. */
function withRatio(binary: Binary, difference: number): MarkedBinary {
  const mass_ratio = binary.mass_ratio + difference;
  const { k_donor_kms } = binary;
  return { mass_ratio, k_donor_kms, k_accretor_kms: mass_ratio * k_donor_kms };
}
