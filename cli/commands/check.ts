import { type CheckDocument, runCheck, type ZeroCheck } from "../../engine/campaign/mod.ts";
import { targetCommand } from "../target_command.ts";
import { decisionLines } from "../terminal/decision_lines.ts";
import { lineCheckLines } from "../terminal/line_check_lines.ts";
import { plainNumber, tableLines, withError } from "../terminal/table.ts";

/** `millrace check`: what the exposures are worth, before anything is made of them. */
export const checkCommand = targetCommand("check", {
  summary: "reads all: coverage, signal to noise, smear, what was decided, what is wrong",
  run: async ({ session, output }) => {
    const result = await runCheck(session, output);
    return { ...result, lines: checkLines(result.document) };
  },
});

/**
 * The check as text.
 *
 * @param document The check document.
 * @returns Lines.
 */
export function checkLines(document: CheckDocument): string[] {
  const { exposures, journal } = document;
  const groups = new Set(journal.map(({ group }) => group)).size;
  return [
    `  ${document.target}: ${exposures} exposures in ${document.files} files`,
    "",
    ...journalLines(document),
    "",
    "  how the files were understood (the target file overrides each)",
    ...decisionLines(document.decisions, { exposures, groups }),
    "",
    ...ephemerisLines(document.ephemeris),
    ...zeroLines(document.zeros),
    ...document.lines.flatMap((line) => ["", ...lineCheckLines(line)]),
  ];
}

function journalLines({ journal }: CheckDocument): string[] {
  return tableLines([
    [
      "group",
      "first (BJD TDB)",
      "orbits",
      "exposures",
      "of",
      "wavelengths in vacuum",
      "S/N in a pixel",
    ],
    ...journal.map((entry) => [
      String(entry.group + 1),
      (entry.first[0] + entry.first[1]).toFixed(5),
      plainNumber(entry.orbits, 2),
      String(entry.exposures),
      entry.shortest_s === entry.longest_s
        ? `${plainNumber(entry.longest_s)} s`
        : `${plainNumber(entry.shortest_s)} to ${plainNumber(entry.longest_s)} s`,
      `${plainNumber(entry.from_angstrom, 0)} to ${plainNumber(entry.to_angstrom, 0)} Å`,
      plainNumber(entry.signal_to_noise_pixel, 0),
    ]),
  ], { heading: true, align: ["right", "right", "right", "right", "right", "right", "right"] });
}

const MARKS = {
  "donor-conjunction": "the donor nearest to the observer",
  "mid-eclipse": "the middle of the eclipse",
  "emission-crossing":
    "a crossing of the emission: maps are rotated by an unknown angle and name no structures",
} as const;

function ephemerisLines(ephemeris: CheckDocument["ephemeris"]): string[] {
  const { zero_bjd_tdb, zero_error_d, zero_from, zero_moved_s, zero_marks } = ephemeris;
  const { period_d, period_error_d, orbits_since_zero, decorrelated_bjd_tdb } = ephemeris;
  const moved = zero_moved_s === 0
    ? ""
    : `, ${plainNumber(zero_moved_s, 1)} s later than ${zero_from} as given`;
  return [
    "  ephemeris",
    ...tableLines([
      [
        "period",
        `${period_error_d === null ? period_d : withError(period_d, period_error_d)} d`,
      ],
      [
        "zero of phase",
        `BJD(TDB) ${
          zero_error_d === null ? zero_bjd_tdb.toFixed(5) : withError(zero_bjd_tdb, zero_error_d)
        }${moved}`,
      ],
      ["", `marks ${MARKS[zero_marks]}`],
      [
        "first exposure",
        `${plainNumber(Math.abs(orbits_since_zero), 2)} orbits ${
          orbits_since_zero < 0 ? "before" : "after"
        } the zero`,
      ],
      ...(decorrelated_bjd_tdb === null ? [] : [[
        "best known",
        `at BJD(TDB) ${decorrelated_bjd_tdb.toFixed(3)}, where zero and period are uncorrelated`,
      ]]),
    ], { indent: 4 }),
  ];
}

function zeroLines(zeros: readonly ZeroCheck[]): string[] {
  if (zeros.length === 0) return [];
  return [
    "",
    "  zero of wavelengths, how far they were too long",
    ...tableLines([
      ["group", "from", "exposures", "median", "scatter", "with the orbit", "done"],
      ...zeros.map((zero) => [
        String(zero.group + 1),
        zero.features.length === 0
          ? zero.from
          : `${zero.from}: ${zero.features.slice(0, 3).join(", ")}`,
        `${zero.measured} of ${zero.exposures}`,
        `${plainNumber(zero.median_kms, 1)} km/s`,
        `${plainNumber(zero.scatter_kms, 1)} km/s`,
        `${withError(zero.orbital_kms, zero.orbital_error_kms)} km/s${
          zero.k_accretor_kms === null ? "" : ` (K1 is ${plainNumber(zero.k_accretor_kms, 0)} km/s)`
        }`,
        zero.corrected ? "corrected" : "not corrected",
      ]),
    ], {
      heading: true,
      indent: 4,
      align: ["right", "left", "right", "right", "right", "right", "left"],
    }),
  ];
}
