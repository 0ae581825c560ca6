import { phaseError } from "../binary/mod.ts";
import type { RefereeFacts } from "../figures/mod.ts";
import { median } from "../numerics/mod.ts";
import type { OrbitReport } from "../orbit/mod.ts";
import { backProject, type MapFeature, mapFeatures, type VelocityMap } from "../tomography/mod.ts";
import { FWHM_OVER_SIGMA } from "../trail/mod.ts";
import type { MappedLine } from "./map_line.ts";
import type { Session } from "./session.ts";
import { uprightTrail } from "./sign_of.ts";
import type { LineLimit } from "./subject/limit_subject.ts";
import { featureOptions, halvesSubject, nightMaps } from "./subject/map_subject.ts";
import { searchedSystemic } from "./subject/scan_subject.ts";

/**
 * What the referee's checklist asks, as far as this run knows it.
 *
 * @param session The target at work.
 * @param options What was found.
 * @param options.mapped The map of the first line.
 * @param options.orbit The orbit; null when it could not be measured.
 * @param options.limit The detection limit of the first line; null when it was not computed.
 * @returns The facts.
 */
export async function refereeFacts(
  session: Session,
  options: { mapped: MappedLine; orbit: OrbitReport | null; limit: LineLimit | null },
): Promise<RefereeFacts> {
  const { mapped, orbit: measured, limit } = options;
  const { orbit, trail: settings } = session.target.settings;
  const { trail } = mapped;
  const ephemeris = await session.ephemeris();
  const systemic = await session.systemic();
  const { spectra } = await session.exposures();
  const resolution_kms = FWHM_OVER_SIGMA * median(trail.sampling.profile_sigma_kms);
  const widest = Math.max(...trail.sampling.phase_width);
  const correction = measured === null ? null : kCorrection(measured);
  const upper = limit === null ? null : upperLimit(session, { mapped, limit });
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
    ...strongestFacts(session, {
      mapped,
      resolution_kms,
      period_d: ephemeris.period_d,
      systemic_error_kms: systemic.error_kms,
    }),
    ...(correction === null ? {} : { k_correction: correction }),
    ...(upper === null ? {} : { upper_limit: upper }),
  };
}

/** Whether the strongest feature holds when γ moves, and in parts of the data. */
function strongestFacts(
  session: Session,
  options: {
    mapped: MappedLine;
    resolution_kms: number;
    period_d: number;
    systemic_error_kms: number | null;
  },
): Pick<RefereeFacts, "systemic_shift" | "halves" | "nights"> {
  const { mapped, resolution_kms, period_d } = options;
  const [strongest] = mapped.features;
  if (strongest === undefined) return {};
  const look = featureOptions(mapped, session.binary());
  const away = (map: VelocityMap) => distance(mapFeatures(map, look), strongest);
  const seen = (map: VelocityMap) => away(map) < resolution_kms;

  const searched = options.systemic_error_kms === null ? searchedSystemic(mapped) : null;
  const sigma_kms = options.systemic_error_kms ?? searched?.error_kms ?? null;
  const { map: { pixels, half_width_kms }, systemic_kms } = mapped;
  const trail = uprightTrail(mapped);
  const moved = (by_kms: number) =>
    away(backProject(trail, { pixels, half_width_kms, systemic_kms: systemic_kms + by_kms }));
  const { vx_error_kms, vy_error_kms } = strongest;
  const halves = halvesSubject(mapped, { period_d });
  const inHalves = halves.maps.map(seen);
  const nights = nightMaps(mapped, { period_d }).map(({ name, exposures, map }) => ({
    seen: map !== null && seen(map),
    detail: map === null
      ? `${name}: ${exposures} exposures are too few for a map`
      : `${name}: ${seen(map) ? "seen" : "not seen"}`,
  }));
  return {
    ...(sigma_kms === null || !(sigma_kms > 0) ? {} : {
      systemic_shift: {
        sigma_kms,
        source: searched === null ? "target file" : "parity of the moments of this data",
        moves_kms: Math.max(moved(-sigma_kms), moved(sigma_kms)),
        error_kms: vx_error_kms === null || vy_error_kms === null
          ? null
          : Math.hypot(vx_error_kms, vy_error_kms),
      },
    }),
    halves: {
      seen: inHalves.every(Boolean),
      detail: halves.names.map((name, i) => `${name}: ${inHalves[i] ? "seen" : "not seen"}`)
        .join("; ") + ".",
    },
    nights: nights.length === 1
      ? { seen: false, detail: "There is one night: no other one can confirm it." }
      : {
        seen: nights.every((night) => night.seen),
        detail: `${nights.map(({ detail }) => detail).join("; ")}.`,
      },
  };
}

/** Distance of the nearest feature, km/s; infinite when there is none. */
function distance(
  features: readonly MapFeature[],
  place: { readonly vx_kms: number; readonly vy_kms: number },
): number {
  return Math.min(
    ...features.map((one) => Math.hypot(one.vx_kms - place.vx_kms, one.vy_kms - place.vy_kms)),
  );
}

/** How K of the donor's line became that of its centre of mass; null when none was measured. */
function kCorrection({ donor }: OrbitReport): string | null {
  if (donor === null || donor.k_centre_kms === null || donor.k_kms === null) return null;
  const line = `K of ${donor.line} is ${donor.k_kms.toFixed(1)} km/s`;
  const centre = `K2 = ${donor.k_centre_kms.toFixed(1)}` +
    (donor.k_centre_error_kms === null ? "" : ` ± ${donor.k_centre_error_kms.toFixed(1)}`) +
    " km/s";
  if (donor.light === "photosphere") {
    return `the donor's line is photospheric and needs none: ${line}, ${centre}`;
  }
  const range = donor.k_centre_range_kms;
  return `the donor's line is ${donor.light}: ${line}, corrected to ${centre}` +
    (range === null
      ? ""
      : ` (${range[0].toFixed(1)} to ${range[1].toFixed(1)} km/s for all shadows of the disc)`);
}

/** The flux that would have been found at the donor, or where it shines, opposite the strongest feature. */
function upperLimit(
  session: Session,
  options: { mapped: MappedLine; limit: LineLimit },
): RefereeFacts["upper_limit"] | null {
  const { mapped: { features }, limit: { limit, light_kms } } = options;
  const binary = session.binary();
  if (binary === null) return null;
  const [strongest] = features;
  const shines = features.some(({ nearest }) => nearest === "donor-face");
  const place = shines && strongest !== undefined
    ? { vx: -strongest.vx_kms, vy: -2 * binary.k_accretor_kms - strongest.vy_kms }
    : { vx: 0, vy: binary.k_donor_kms };
  const step = 2 * limit.half_width_kms / (limit.cells - 1);
  const cell = (v: number) => Math.round((v + limit.half_width_kms) / step);
  const share = limit.fraction_95[cell(place.vy) * limit.cells + cell(place.vx)] ?? null;
  if (share === null || share >= 1) return null;
  return {
    flux_kms: light_kms * share / (1 - share),
    confidence: 0.95,
    where: `for a compact source (σ ${limit.sigma_kms} km/s) ` +
      (shines ? "opposite the strongest feature" : "at the donor"),
  };
}

function largestGap(phases: Float64Array): number {
  const sorted = phases.toSorted();
  return sorted.reduce(
    (gap, phase, i) => Math.max(gap, (sorted[i + 1] ?? sorted[0]! + 1) - phase),
    0,
  );
}
