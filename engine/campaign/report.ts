import { phaseError } from "../binary/mod.ts";
import { InputError } from "../errors.ts";
import type { ChecklistRow, ReportSubject, ResultRow } from "../figures/mod.ts";
import { median } from "../numerics/mod.ts";
import type { OrbitReport } from "../orbit/mod.ts";
import { backProject, mapFeatures } from "../tomography/mod.ts";
import { FWHM_OVER_SIGMA } from "../trail/mod.ts";
import { mappedLines } from "./line_of.ts";
import type { MappedLine } from "./map_line.ts";
import type { Session } from "./session.ts";
import { halvesSubject } from "./subject/map_subject.ts";
import { VERSION } from "./version.ts";

/**
 * `report.html`: the page on which a person can touch the data, with results, a referee's checklist,
 * and how it was made.
 *
 * @param session The target at work.
 * @returns The page.
 */
export async function reportHtml(session: Session): Promise<string> {
  const { refereeChecklist, reportPage } = await import("../figures/mod.ts");
  const { target } = session;
  const maps: MappedLine[] = [];
  for (const line of mappedLines(session.lines("write the report"))) {
    maps.push(await session.map(line));
  }
  const orbit = await orbitOrNull(session);
  const binary = session.binary();
  const { disc = {} } = target.settings.model;
  const { inputs } = await session.exposures();
  const facts = await refereeFacts(session, maps[0]!);
  const checklist: ChecklistRow[] = refereeChecklist(facts);
  return reportPage({
    title: target.title,
    version: VERSION,
    subjects: maps.map(reportSubject),
    binary: binary === null ? null : {
      mass_ratio: binary.mass_ratio,
      k_accretor_kms: binary.k_accretor_kms,
      k_donor_kms: binary.k_donor_kms,
      outer_radius_over_a: disc.outer_radius_over_a ?? 0.3,
      inner_radius_over_a: disc.inner_radius_over_a ?? 0.05,
    },
    results: [...maps.flatMap(mapRows), ...(orbit === null ? [] : orbitRows(orbit))],
    checklist,
    made: [
      { name: "Millrace", value: VERSION },
      { name: "settings (SHA-256)", value: target.settings_digest },
      { name: "seed", value: String(target.settings.seed) },
      { name: "files read", value: String(inputs.length) },
      ...target.overrides.map((value) => ({ name: "override", value })),
    ],
    target_text: target.text,
  });
}

async function orbitOrNull(session: Session): Promise<OrbitReport | null> {
  try {
    return (await session.orbit()).report;
  } catch (error) {
    // Too few exposures, say: the page then has no orbit, and the command `orbit` says why.
    if (error instanceof InputError) return null;
    throw error;
  }
}

function reportSubject(mapped: MappedLine): ReportSubject {
  const { trail } = mapped;
  return {
    line: trail.line,
    systemic_kms: mapped.systemic_kms,
    grid: trail.grid,
    sources: trail.grid.rows === trail.sampling.count ? trail.sources : [],
    maps: [{
      method: mapped.method,
      map: mapped.map,
      model: mapped.model,
      residual: mapped.residual,
      reduced_chi_square: mapped.reduced_chi_square,
      features: mapped.features,
    }],
  };
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

/** What the referee's checklist asks, as far as this run knows it. */
async function refereeFacts(session: Session, mapped: MappedLine) {
  const { target } = session;
  const { orbit, trail: settings } = target.settings;
  const { trail } = mapped;
  const ephemeris = await session.ephemeris();
  const systemic = await session.systemic();
  const { spectra } = await session.exposures();
  const resolution_kms = FWHM_OVER_SIGMA * median(trail.sampling.profile_sigma_kms);
  const widest = Math.max(...trail.sampling.phase_width);
  const halves = halvesSubject(mapped);
  const [strongest] = mapped.features;
  const centre = { vx_kms: 0, vy_kms: -(session.binary()?.k_accretor_kms ?? 0) };
  const seen = strongest === undefined
    ? []
    : halves.maps.map((map) =>
      mapFeatures(map, { resolution_kms, centre }).some((feature) =>
        Math.hypot(feature.vx_kms - strongest.vx_kms, feature.vy_kms - strongest.vy_kms) <
          resolution_kms
      )
    );
  return {
    zero: {
      marks: orbit.zero_marks === "donor-conjunction"
        ? "donor at inferior conjunction"
        : orbit.zero_marks,
      source: "target file",
      phase_error: phaseError(ephemeris, spectra[0]!.mid),
    },
    ...(systemic.source === "not given" ? {} : {
      systemic: { kms: systemic.kms, error_kms: systemic.error_kms, source: systemic.source },
    }),
    rest: { air_angstrom: trail.line.air_angstrom, source: trail.line.source },
    ...(strongest === undefined || systemic.error_kms === null
      ? {}
      : { systemic_shift: systemicShift(mapped, systemic.error_kms, centre) }),
    normalisation: settings.continuum === "divide"
      ? "divided by each exposure's continuum"
      : "scaled to one continuum",
    smear: {
      kms: 2 * Math.PI * mapped.map.half_width_kms * widest,
      resolution_kms,
      modelled: mapped.method !== "back-projection",
    },
    sampling: { largest_gap: largestGap(trail.sampling.phase), exposures: trail.sampling.count },
    fit: { reduced_chi_square: mapped.reduced_chi_square, noise_scale: trail.noise_scale },
    ...(seen.length === 0 ? {} : {
      halves: {
        seen: seen.every(Boolean),
        detail: halves.names.map((name, i) => `${name}: ${seen[i] ? "seen" : "not seen"}`)
          .join("; "),
      },
    }),
  };
}

/** How far the strongest feature moves when γ is a standard deviation off. */
function systemicShift(
  mapped: MappedLine,
  error_kms: number,
  centre: { vx_kms: number; vy_kms: number },
) {
  const { trail, map, systemic_kms } = mapped;
  const [strongest] = mapped.features as [MappedLine["features"][number]];
  const resolution_kms = FWHM_OVER_SIGMA * median(trail.sampling.profile_sigma_kms);
  const moves = [-1, 1].map((sign) => {
    const moved = backProject(trail, {
      pixels: map.pixels,
      half_width_kms: map.half_width_kms,
      systemic_kms: systemic_kms + sign * error_kms,
    });
    const distances = mapFeatures(moved, { resolution_kms, centre }).map((feature) =>
      Math.hypot(feature.vx_kms - strongest.vx_kms, feature.vy_kms - strongest.vy_kms)
    );
    return Math.min(...distances, map.half_width_kms);
  });
  const own = strongest.vx_error_kms === null || strongest.vy_error_kms === null
    ? null
    : Math.hypot(strongest.vx_error_kms, strongest.vy_error_kms);
  return { moves_kms: Math.max(...moves), error_kms: own };
}

function largestGap(phases: Float64Array): number {
  const sorted = phases.toSorted();
  return sorted.reduce(
    (gap, phase, i) => Math.max(gap, (sorted[i + 1] ?? sorted[0]! + 1) - phase),
    0,
  );
}
