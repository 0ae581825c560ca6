import type { Warning } from "../errors.ts";
import { type CentreOptions, correctedDonor, type DonorCentre } from "./donor_centre.ts";
import type { DonorLight } from "./k_correction.ts";
import type { MeasuredValue } from "./mass_input.ts";
import type { TemplateSubtraction } from "./optimal_subtraction.ts";
import type { DonorReport, StarReport } from "./orbit_report.ts";
import type { Settled } from "./settle_ephemeris.ts";
import { smallest } from "./smallest.ts";
import { starReport, UNMEASURED } from "./star_reports.ts";

/** Both stars as measured, and what the masses need of them. */
export interface StarSummary {
  /** The accretor; null when no line traces it. */
  readonly accretor: StarReport | null;
  /** The donor; null when no line traces it. */
  readonly donor: DonorReport | null;
  /** K1; null when not measured. */
  readonly k_accretor_kms: MeasuredValue | null;
  /** K2 of the centre of mass; null when not measured. */
  readonly k_donor_kms: MeasuredValue | null;
  /** v sin i; null when not seen. */
  readonly v_sin_i_kms: MeasuredValue | null;
  /** What a user should know. */
  readonly warnings: readonly Warning[];
}

function accretorReport({ accretors }: Settled): StarReport | null {
  const line = smallest(
    accretors,
    ({ found }) => found.plateau.accepted ? found.plateau.fit!.k_error_kms : null,
  );
  const method = "double-gaussian";
  if (line) return starReport({ ...line.found.plateau.fit!, method }, line.trail.line.name);
  const first = accretors[0];
  if (!first) return null;
  const { k_range_kms } = first.found.plateau;
  return { ...UNMEASURED, k_range_kms, line: first.trail.line.name, method };
}

/** Why lines gave no K, one warning each. */
function unmeasured({ accretors, donors }: Settled): Warning[] {
  const of_donor = donors.filter(({ found }) => !found.orbit).map(({ found, trail }) => ({
    code: "donor-not-measured",
    text: `K2 not measured: ${found.reasons.join("; ")}`,
    line: trail.line.name,
  }));
  const of_accretor = accretors.filter(({ found }) => !found.plateau.accepted)
    .map(({ found, trail }) => {
      const range = found.plateau.k_range_kms;
      const shown = range
        ? `; K between ${range[0].toFixed(0)} and ${range[1].toFixed(0)} km/s over the separations`
        : "";
      return {
        code: "accretor-not-measured",
        text: `K1 not measured: ${found.plateau.reasons.join("; ")}${shown}`,
        line: trail.line.name,
      };
    });
  return [...of_donor, ...of_accretor];
}

function centreWarning(centre: DonorCentre | null, line: string): Warning | null {
  if (centre === null) {
    return {
      code: "k-correction-unknown",
      text: "K2 of the donor's centre of mass needs a mass ratio, and K1 was not measured",
      line,
    };
  }
  if (centre.range === null) return null;
  const [low, high] = centre.range;
  return {
    code: "k-correction-range",
    text: `the disc's shadow on the donor is not known: K2 lies between ${low.toFixed(0)} and ` +
      `${high.toFixed(0)} km/s`,
    line,
  };
}

function systemicWarning(one: StarReport | null, other: StarReport | null): Warning | null {
  if (one?.systemic_kms == null || other?.systemic_kms == null) return null;
  const off = one.systemic_kms - other.systemic_kms;
  const error = Math.hypot(one.systemic_error_kms!, other.systemic_error_kms!);
  if (Math.abs(off) <= 3 * error) return null;
  return {
    code: "systemic-differ",
    text: `γ of accretor and donor differ by ${off.toFixed(1)} ± ${error.toFixed(1)} km/s`,
  };
}

/**
 * The stars' orbits from their best lines, the donor's with its K-correction.
 *
 * @param settled The measured lines.
 * @param options What is known of shadow and inclination.
 * @returns Reports and the numbers that masses follow from.
 */
export function summariseStars(settled: Settled, options: CentreOptions): StarSummary {
  const { donors } = settled;
  const accretor = accretorReport(settled);
  const k_accretor_kms = accretor?.k_kms
    ? { value: accretor.k_kms, error: accretor.k_error_kms! }
    : null;
  const warnings: (Warning | null)[] = unmeasured(settled);

  const line = smallest(donors, ({ found }) => found.orbit?.k_error_kms ?? null);
  const shown = line ?? donors[0];
  if (!shown) {
    return { accretor, donor: null, k_accretor_kms, ...NO_DONOR, warnings: kept(warnings) };
  }
  const name = shown.trail.line.name;
  const light: DonorLight = shown.light ??
    (shown.found.sign === "emission" ? "irradiated" : "photosphere");
  const orbit = line ? starReport(line.found.orbit!, name) : null;
  const line_k = orbit && { value: orbit.k_kms!, error: orbit.k_error_kms! };
  const centre = line_k &&
    correctedDonor(line_k, light, { ...options, k_accretor_kms: k_accretor_kms?.value ?? null });
  if (line_k) warnings.push(centreWarning(centre, name), systemicWarning(accretor, orbit));
  const subtraction = line?.found.subtraction[0];
  const v_sin_i_kms = subtraction?.rotation_seen ? rotationOf(subtraction) : null;
  const donor: DonorReport = {
    ...(orbit ?? { ...UNMEASURED, line: name, method: "cross-correlation" }),
    light,
    k_centre_kms: centre?.value ?? null,
    k_centre_error_kms: centre?.error ?? null,
    k_centre_range_kms: centre?.range ?? null,
    v_sin_i_kms: v_sin_i_kms?.value ?? null,
    v_sin_i_error_kms: v_sin_i_kms?.error ?? null,
    template: subtraction?.template ?? null,
    light_share: subtraction?.share ?? null,
  };
  const k_donor_kms = centre && { value: centre.value, error: centre.error };
  return {
    accretor,
    donor,
    k_accretor_kms,
    k_donor_kms,
    v_sin_i_kms: k_donor_kms && v_sin_i_kms,
    warnings: kept(warnings),
  };
}

/** v sin i; how much the lines are darkened at the limb is not known and counts as an even spread. */
function rotationOf(subtraction: TemplateSubtraction): MeasuredValue {
  const { v_sin_i_kms, v_sin_i_error_kms, v_sin_i_undarkened_kms } = subtraction;
  const spread = (v_sin_i_kms - v_sin_i_undarkened_kms) / Math.sqrt(12);
  return {
    value: (v_sin_i_kms + v_sin_i_undarkened_kms) / 2,
    error: Math.hypot(v_sin_i_error_kms, spread),
  };
}

const NO_DONOR = { k_donor_kms: null, v_sin_i_kms: null } as const;

function kept(warnings: readonly (Warning | null)[]): Warning[] {
  return warnings.filter((warning) => warning !== null);
}
