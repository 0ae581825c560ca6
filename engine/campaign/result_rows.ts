import type { ResultRow } from "../figures/mod.ts";
import type { OrbitReport } from "../orbit/mod.ts";
import type { MappedLine } from "./map_line.ts";

/**
 * The table of results of a report: features of the maps, then the orbit and the masses.
 *
 * @param maps The maps.
 * @param orbit The orbit; null when it could not be measured.
 * @returns The rows.
 */
export function resultRows(maps: readonly MappedLine[], orbit: OrbitReport | null): ResultRow[] {
  return [...maps.flatMap(mapRows), ...(orbit === null ? [] : orbitRows(orbit))];
}

function mapRows(mapped: MappedLine): ResultRow[] {
  return mapped.features.flatMap((feature, i) => {
    const name = `${mapped.trail.line.name}, feature ${i + 1}`;
    const note = feature.nearest === null || feature.nearest === "none"
      ? "map"
      : `map; nearest: ${feature.nearest}`;
    const row = (quantity: string, value: number, error: number | null, unit: string) => ({
      quantity: `${name}: ${quantity}`,
      value,
      error,
      unit,
      note,
    });
    return [
      row("*V*_{x}", feature.vx_kms, feature.vx_error_kms, "km s^{−1}"),
      row("*V*_{y}", feature.vy_kms, feature.vy_error_kms, "km s^{−1}"),
      row("share of the map's flux", feature.flux_fraction, null, ""),
    ];
  });
}

function orbitRows(orbit: OrbitReport): ResultRow[] {
  const { accretor, donor, masses } = orbit;
  const half = (low: number | null, high: number | null) =>
    low === null || high === null ? null : (low + high) / 2;
  const rows: ResultRow[] = [
    {
      quantity: "*P*",
      value: orbit.period_d,
      error: orbit.period_error_d,
      unit: "d",
      note: orbit.period_from,
    },
  ];
  if (accretor !== null) {
    rows.push({
      quantity: "*K*_{1}",
      value: accretor.k_kms,
      error: accretor.k_error_kms,
      unit: "km s^{−1}",
      note: accretor.k_kms === null ? "not measured" : `${accretor.line}, ${accretor.method}`,
    });
  }
  if (donor !== null) {
    rows.push({
      quantity: "*K*_{2}",
      value: donor.k_centre_kms,
      error: donor.k_centre_error_kms,
      unit: "km s^{−1}",
      note: donor.k_centre_kms === null ? "not measured" : `${donor.line}, ${donor.method}`,
    });
  }
  rows.push(
    {
      quantity: "*q* = *M*_{2}/*M*_{1}",
      value: orbit.mass_ratio,
      error: orbit.mass_ratio_error,
      unit: "",
      note: masses.mass_ratio_from.join(", "),
    },
    {
      quantity: "*M*_{1}",
      value: masses.accretor_msun,
      error: half(masses.accretor_error_low_msun, masses.accretor_error_high_msun),
      unit: "M_{☉}",
      note: masses.accretor_msun === null ? "needs both K and the inclination" : "",
    },
    {
      quantity: "*M*_{2}",
      value: masses.donor_msun,
      error: half(masses.donor_error_low_msun, masses.donor_error_high_msun),
      unit: "M_{☉}",
      note: masses.donor_msun === null ? "needs both K and the inclination" : "",
    },
  );
  return rows;
}
