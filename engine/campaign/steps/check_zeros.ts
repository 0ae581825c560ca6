import { type Ephemeris, orbitalPhase } from "../../binary/mod.ts";
import type { Warning } from "../../errors.ts";
import { median } from "../../numerics/mod.ts";
import type { Spectrum } from "../../spectra/mod.ts";
import { reportZeros, type ZeroReport, type ZeroShift } from "../../trail/mod.ts";
import type { Target } from "../target.ts";
import { type GroupZero, measureZeros } from "../wavelength_zeros.ts";

/** The zero of wavelengths of one group of exposures: what was found and what was done. */
export interface ZeroCheck extends ZeroReport, Pick<GroupZero, "group" | "from" | "features"> {
  /** Whether the wavelengths were corrected; else they were only looked at. */
  readonly corrected: boolean;
  /** Exposures of the group. */
  readonly exposures: number;
  /** Median error of a shift, km/s; null when a table gives none. */
  readonly error_kms: number | null;
  /** Speed of the accretor, against which the part that goes with the orbit counts, km/s; null when not known. */
  readonly k_accretor_kms: number | null;
}

/** What {@linkcode checkZeros} needs. */
export interface CheckZerosOptions {
  /** The target. */
  readonly target: Target;
  /** Groups that were corrected, with their shifts. */
  readonly zeros: readonly GroupZero[];
  /** The ephemeris. */
  readonly ephemeris: Ephemeris;
  /** Speed of the accretor, km/s; null when not known. */
  readonly k_accretor_kms: number | null;
}

/** Fewest exposures in which something must be seen for a report. */
const FEWEST = 5;

/**
 * Reports the zero of wavelengths of every group: the shifts that were corrected, or those that
 * night-sky lines or telluric bands show where nothing was corrected.
 *
 * @param spectra All exposures.
 * @param options The rest.
 * @returns One entry for each group in which anything is seen, and warnings about what is not corrected.
 */
export function checkZeros(
  spectra: readonly Spectrum[],
  options: CheckZerosOptions,
): { zeros: ZeroCheck[]; warnings: Warning[] } {
  const { target, ephemeris, k_accretor_kms } = options;
  const zeros = target.settings.exposures.flatMap((_, group): ZeroCheck[] => {
    const members = spectra.filter((spectrum) => spectrum.group === group);
    const zero = options.zeros.find((done) => done.group === group) ??
      seenZero(members, { target, group });
    if (zero === null) return [];
    const phases = members.map(({ mid }) => orbitalPhase(ephemeris, mid).phase);
    const report = reportZeros(zero.shifts, phases);
    if (report === null) return [];
    const errors = known(zero.shifts).map(({ error_kms }) => error_kms);
    const { from, features, corrected } = zero;
    return [{
      group,
      from,
      features,
      corrected,
      exposures: members.length,
      ...report,
      error_kms: errors.every(Number.isFinite) ? median(errors) : null,
      k_accretor_kms,
    }];
  });
  return {
    zeros,
    warnings: zeros.flatMap((zero) => zero.corrected ? [] : zeroWarnings(zero, target)),
  };
}

const known = (shifts: readonly ZeroShift[]) =>
  shifts.filter(({ shift_kms }) => Number.isFinite(shift_kms));

function seenZero(
  spectra: readonly Spectrum[],
  options: { target: Target; group: number },
): GroupZero | null {
  const { target, group } = options;
  for (const by of ["sky-lines", "telluric"] as const) {
    const measured = measureZeros(spectra, { target, by });
    // A match to a band that is not there gives errors as large as what is sought.
    const shown = known(measured.shifts).filter(({ error_kms }) => error_kms < 30);
    if (shown.length >= FEWEST) return { ...measured, group, corrected: false };
  }
  return null;
}

function zeroWarnings(zero: ZeroCheck, target: Target): Warning[] {
  const { median_kms, scatter_kms, orbital_kms, orbital_error_kms, measured, exposures } = zero;
  const error_kms = zero.error_kms ?? 0;
  const limit = Math.max(2, 0.03 * (zero.k_accretor_kms ?? 0));
  const absolute = zero.from !== "telluric absorption";
  const parts = [
    ...(absolute && Math.abs(median_kms) > Math.max(3, 5 * error_kms / Math.sqrt(measured))
      ? [`stands off by ${median_kms.toFixed(1)} km/s in the median, and γ with it`]
      : []),
    ...(scatter_kms > Math.max(2, 2 * error_kms)
      ? [`scatters by ${scatter_kms.toFixed(1)} km/s`]
      : []),
    ...(orbital_kms > Math.max(limit, 4 * orbital_error_kms)
      ? [
        `goes with the orbit by ${orbital_kms.toFixed(1)} ± ${
          Math.max(0.1, orbital_error_kms).toFixed(1)
        } km/s${
          zero.k_accretor_kms === null
            ? ""
            : `, against K1 of ${zero.k_accretor_kms.toFixed(0)} km/s`
        }`,
      ]
      : []),
  ];
  if (parts.length === 0) return [];
  const where = target.settings.exposures.length > 1 ? ` of group ${zero.group + 1}` : "";
  return [{
    code: "wavelength-zero-off",
    text: `${zero.from} (${
      zero.features.slice(0, 3).join(", ")
    }) in ${measured} of ${exposures} exposures show that the zero of wavelengths${where} ${
      parts.join(", ")
    }: nothing was corrected; state wavelength_zero_kms = "${
      absolute ? "sky-lines" : "telluric"
    }" to do so`,
  }];
}
