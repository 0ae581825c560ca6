import { type OrbitDocument, runOrbit } from "../../engine/campaign/mod.ts";
import { commandWith } from "../common_options.ts";
import { runCommand } from "../run_command.ts";
import { openTarget, recorded } from "../target_command.ts";
import { plainNumber, tableLines, withError } from "../terminal/table.ts";

/**
 * `millrace orbit`: velocity curves, period, masses.
 *
 * @param finish Takes the exit status.
 * @returns The command.
 */
export const orbitCommand = (finish: (status: number) => void) =>
  commandWith("orbit", "velocity curves, period, K1, K2, γ, zero of phase, masses")
    .argument("<target>", "target file")
    .option("--refine", "write an improved target file beside the old one")
    .action(async (file, options) => {
      finish(
        await runCommand(options, async (context) => {
          const opened = await openTarget(file, { call: options, context });
          const { session, output } = opened;
          const result = await recorded(
            "orbit",
            opened,
            () => runOrbit(session, output, { refine: options.refine }),
          );
          return { ...result, lines: orbitLines(result.document) };
        }),
      );
    });

/**
 * The orbit as a table.
 *
 * @param document The orbit document.
 * @returns Lines of text.
 */
export function orbitLines(document: OrbitDocument): string[] {
  const pair = (value: number | null, error: number | null, unit: string) =>
    value === null ? "not measured" : `${withError(value, error)} ${unit}`;
  const { accretor, donor, masses } = document;
  const mass = (value: number | null, low: number | null, high: number | null) =>
    value === null
      ? "not measured"
      : `${plainNumber(value, 3)} (−${plainNumber(low, 3)}, +${plainNumber(high, 3)})`;
  return [
    ...tableLines([
      [
        "period",
        `${pair(document.period_d, document.period_error_d, "d")} (${document.period_from})`,
      ],
      [
        "zero of phase",
        `BJD(TDB) ${
          document.zero_error_d === null
            ? document.zero_bjd_tdb.toFixed(5)
            : withError(document.zero_bjd_tdb, document.zero_error_d)
        } (${document.zero_marks}, from the ${document.zero_from})`,
      ],
      ...(accretor === null ? [] : [
        [
          "K1 (accretor)",
          `${pair(accretor.k_kms, accretor.k_error_kms, "km/s")} ${from(accretor)}`,
        ],
        ["γ of the accretor", pair(accretor.systemic_kms, accretor.systemic_error_kms, "km/s")],
      ]),
      ...(donor === null ? [] : [
        ["K of the donor's line", `${pair(donor.k_kms, donor.k_error_kms, "km/s")} ${from(donor)}`],
        [
          "K2 (donor's centre)",
          `${pair(donor.k_centre_kms, donor.k_centre_error_kms, "km/s")} (${donor.light})`,
        ],
        ["γ of the donor", pair(donor.systemic_kms, donor.systemic_error_kms, "km/s")],
        ...(donor.v_sin_i_kms === null
          ? []
          : [["v sin i", pair(donor.v_sin_i_kms, donor.v_sin_i_error_kms, "km/s")]]),
      ]),
      ["mass ratio M2/M1", pair(document.mass_ratio, document.mass_ratio_error, "")],
      ...(masses.inclination_deg === null ? [] : [
        [
          "M1",
          `${
            mass(
              masses.accretor_msun,
              masses.accretor_error_low_msun,
              masses.accretor_error_high_msun,
            )
          } Msun`,
        ],
        [
          "M2",
          `${
            mass(masses.donor_msun, masses.donor_error_low_msun, masses.donor_error_high_msun)
          } Msun`,
        ],
      ]),
      [
        "M1 sin³i",
        pair(masses.accretor_m_sin3i_msun, masses.accretor_m_sin3i_error_msun, "Msun"),
      ],
      ["M2 sin³i", pair(masses.donor_m_sin3i_msun, masses.donor_m_sin3i_error_msun, "Msun")],
    ]),
    "",
    ...tableLines([
      ["line", "method", "star", "K / km/s", "γ / km/s", "crossing", "measures it"],
      ...document.curves.map((curve) => [
        curve.line,
        curve.method,
        curve.star,
        curve.k_kms === null ? "–" : withError(curve.k_kms, curve.k_error_kms),
        curve.systemic_kms === null ? "–" : withError(curve.systemic_kms, curve.systemic_error_kms),
        curve.crossing_phase === null
          ? "–"
          : withError(curve.crossing_phase, curve.crossing_phase_error),
        curve.measured ? "yes" : `no: ${curve.reasons[0] ?? ""}`,
      ]),
    ], {
      heading: true,
      align: ["left", "left", "left", "right", "right", "right", "left"],
    }),
  ];
}

function from(star: { readonly line: string | null; readonly method: string | null }): string {
  return star.line === null ? "" : `(${star.line}, ${star.method})`;
}
