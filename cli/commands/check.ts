import { type CheckDocument, type LineCheck, runCheck } from "../../engine/campaign/mod.ts";
import { targetCommand } from "../target_command.ts";
import { phaseStrip } from "../terminal/phase_strip.ts";
import { plainNumber, tableLines } from "../terminal/table.ts";

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
  return [
    `  ${document.target}: ${document.exposures} exposures in ${document.files} files`,
    "",
    ...tableLines([
      ["group", "first (BJD TDB)", "exposures", "time", "wavelengths (vacuum)", "S/N a pixel"],
      ...document.journal.map((entry) => [
        String(entry.group + 1),
        (entry.first[0] + entry.first[1]).toFixed(5),
        String(entry.exposures),
        entry.shortest_s === entry.longest_s
          ? `${plainNumber(entry.longest_s)} s`
          : `${plainNumber(entry.shortest_s)} to ${plainNumber(entry.longest_s)} s`,
        `${plainNumber(entry.from_angstrom, 0)} to ${plainNumber(entry.to_angstrom, 0)} Å`,
        plainNumber(entry.signal_to_noise_pixel, 0),
      ]),
    ], { heading: true, align: ["right", "right", "right", "right", "right", "right"] }),
    "",
    "  decided",
    ...tableLines(
      document.decisions.map((decision) => [
        decision.what,
        decision.value,
        `${decision.assumed ? "assumed: " : "from "}${decision.from}`,
        decision.exposures === document.exposures ? "" : `${decision.exposures} exposures`,
      ]),
      { indent: 4 },
    ),
    ...document.lines.flatMap((line) => ["", ...lineLines(line)]),
  ];
}

function lineLines(line: LineCheck): string[] {
  const kms = (value: number) => `${plainNumber(value, 0)} km/s`;
  const enough = line.exposures_per_half_orbit >= line.exposures_needed_per_half_orbit;
  return [
    `  ${line.line} (${plainNumber(line.rest_air_angstrom, 2)} Å in air), ${line.net}`,
    ...phaseStrip(line.coverage.exposures_in_bin).map((strip) => `    ${strip}`),
    ...tableLines([
      ["exposures", `${line.exposures} over ${plainNumber(line.span_orbits, 2)} orbits`],
      [
        "phase",
        `${
          plainNumber(100 * line.coverage.covered_fraction, 0)
        } % of the orbit covered, largest gap ${plainNumber(line.coverage.largest_gap, 3)}`,
      ],
      [
        "signal to noise",
        `${plainNumber(line.signal_to_noise.median, 0)} in the continuum per ${
          kms(line.resolution_kms.median)
        } (${plainNumber(line.signal_to_noise.low, 0)} to ${
          plainNumber(line.signal_to_noise.high, 0)
        }), errors scaled by ${plainNumber(line.noise_scale, 2)}`,
      ],
      [
        "resolution, smear",
        `${kms(line.resolution_kms.median)}; a feature at ${kms(line.velocity_kms)} moves ${
          kms(line.smear_kms.median)
        } during an exposure`,
      ],
      [
        "exposures a half orbit",
        `${
          plainNumber(line.exposures_per_half_orbit, 0)
        }, of ${line.exposures_needed_per_half_orbit} that this velocity needs${
          enough ? "" : ": too few"
        }`,
      ],
      [
        "error of the phase",
        `${plainNumber(line.phase_error, 4)} cycles: ${kms(line.phase_error_kms)} at that velocity`,
      ],
      [
        "mean profile",
        `equivalent width ${kms(line.measures.equivalent_width_kms)}, FWHM ${
          kms(line.measures.fwhm_kms)
        }, peaks ${kms(line.measures.peak_separation_kms)} apart`,
      ],
      ...line.contents.map((entry, i) => [
        i === 0 ? "in its windows" : "",
        `${entry.name} at ${plainNumber(entry.velocity_kms, 0)} km/s, ${entry.window} window${
          entry.ring_radius_kms === null ? "" : `, ring of ${kms(entry.ring_radius_kms)}`
        }`,
      ]),
    ], { indent: 4 }),
  ];
}
