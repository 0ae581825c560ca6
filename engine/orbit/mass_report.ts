import { donorDensity } from "../binary/mod.ts";
import type { MassSolution } from "./mass_solution.ts";
import type { MassReport } from "./orbit_report.ts";

/**
 * Masses as `orbit.json` holds them.
 *
 * @param solution The solution; null when no star was measured.
 * @param period_d Period, d.
 * @returns The report.
 */
export function massReport(solution: MassSolution | null, period_d: number): MassReport {
  const median = (key: keyof MassSolution) => {
    const found = solution?.[key] as { median: number } | null | undefined;
    return found?.median ?? null;
  };
  const side = (key: keyof MassSolution, which: "error_low" | "error_high" | "deviation") => {
    const found = solution?.[key] as Record<string, number> | null | undefined;
    return found?.[which] ?? null;
  };
  const q = median("mass_ratio");
  return {
    accretor_msun: median("accretor_msun"),
    accretor_error_low_msun: side("accretor_msun", "error_low"),
    accretor_error_high_msun: side("accretor_msun", "error_high"),
    donor_msun: median("donor_msun"),
    donor_error_low_msun: side("donor_msun", "error_low"),
    donor_error_high_msun: side("donor_msun", "error_high"),
    inclination_deg: median("inclination_deg"),
    inclination_error_low_deg: side("inclination_deg", "error_low"),
    inclination_error_high_deg: side("inclination_deg", "error_high"),
    separation_rsun: median("separation_rsun"),
    separation_error_low_rsun: side("separation_rsun", "error_low"),
    separation_error_high_rsun: side("separation_rsun", "error_high"),
    donor_radius_rsun: median("donor_radius_rsun"),
    donor_density_g_cm3: q === null ? null : donorDensity(period_d, q),
    accretor_m_sin3i_msun: median("accretor_m_sin3i_msun"),
    accretor_m_sin3i_error_msun: side("accretor_m_sin3i_msun", "deviation"),
    donor_m_sin3i_msun: median("donor_m_sin3i_msun"),
    donor_m_sin3i_error_msun: side("donor_m_sin3i_msun", "deviation"),
    accretor_mass_function_msun: median("accretor_mass_function_msun"),
    donor_mass_function_msun: median("donor_mass_function_msun"),
    mass_ratio_from: solution?.mass_ratio_from ?? [],
  };
}
