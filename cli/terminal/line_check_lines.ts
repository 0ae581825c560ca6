import type { CheckedContent, LineCheck } from "../../engine/campaign/mod.ts";
import { anyMapText } from "./any_map_text.ts";
import { phaseStrip } from "./phase_strip.ts";
import { plainNumber, tableLines } from "./table.ts";

const kms = (value: number) => `${plainNumber(value, 0)} km/s`;
const percent = (value: number, decimals = 0) => `${plainNumber(100 * value, decimals)} %`;

/**
 * What the exposures are worth for one line, with the reasons.
 *
 * @param line The line as checked.
 * @returns Lines.
 */
export function lineCheckLines(line: LineCheck): string[] {
  return [
    `  ${line.line} (${
      plainNumber(line.rest_air_angstrom, 2)
    } Å in air): ${line.net}, ${line.exposures} exposures over ${
      plainNumber(line.span_orbits, 2)
    } orbits`,
    ...phaseStrip(line.coverage.exposures_in_bin).map((strip) => `    ${strip}`),
    ...tableLines([
      ...coverageRows(line),
      ...sharpnessRows(line),
      ...noiseRows(line),
      ...profileRows(line),
      ...(line.any_map === null ? [] : [["can any map fit?", anyMapText(line.any_map)]]),
      ...contentRows(line.contents),
    ], { indent: 4 }),
  ];
}

function coverageRows(line: LineCheck): string[][] {
  const { coverage, directions_needed, directions_observed, velocity_kms } = line;
  const full = directions_observed === directions_needed;
  return [
    [
      "phases",
      `a shutter was open during ${percent(coverage.covered_fraction)} of the orbit; largest gap ${
        plainNumber(coverage.largest_gap, 3)
      } cycles`,
    ],
    [
      "directions",
      `${directions_observed} of the ${directions_needed} steps of half an orbit are seen${
        full ? "" : line.directions_observed < 0.7 * directions_needed ? ": too few" : ": most"
      }`,
    ],
    [
      "",
      `(${directions_needed} = π × ${plainNumber(velocity_kms, 0)} / ${
        plainNumber(line.resolution_kms.median, 0)
      }: a feature at ${kms(velocity_kms)}, ${
        speedText(line)
      }, moves by one resolution element in each)`,
    ],
  ];
}

function speedText({ traces, measures, velocity_kms }: LineCheck): string {
  if (traces === "donor" && velocity_kms !== measures.peak_separation_kms / 2) {
    return "the donor's speed";
  }
  if (measures.peak_separation_kms > 0) return "half of the distance of the peaks";
  return measures.fwhm_kms > 0 ? "half of the line's width" : "the end of its reach";
}

function sharpnessRows(line: LineCheck): string[][] {
  const { resolution_kms, smear_kms, velocity_kms } = line;
  const [low, high] = [kms(resolution_kms.low), kms(resolution_kms.high)];
  const sharp = low === high ? low : `${plainNumber(resolution_kms.low, 0)} to ${high}`;
  const smeared = smear_kms.median > 1.5 * resolution_kms.median
    ? "more than the resolution: shorter exposures would show more"
    : smear_kms.median > resolution_kms.median
    ? "about the resolution"
    : "within the resolution";
  return [
    ["resolution", `${sharp}, full width at half maximum`],
    [
      "smear",
      `a feature at ${kms(velocity_kms)} moves by ${
        kms(smear_kms.median)
      } during an exposure, ${smeared}`,
    ],
    [
      "error of the phase",
      line.phase_error === null
        ? "not known, as the ephemeris is given without errors"
        : `${plainNumber(line.phase_error, 4)} cycles from the ephemeris: a map may be turned by ${
          plainNumber(360 * line.phase_error, 1)
        } deg, ${kms(line.phase_error_kms ?? NaN)} at ${kms(velocity_kms)}`,
    ],
  ];
}

function noiseRows(line: LineCheck): string[][] {
  const { signal_to_noise: ratio, noise, pairs } = line;
  const scales = noise.groups.map((group) => {
    const { applied_scale, measured_scale, errors_given } = group;
    const scaled = `${errors_given ? "stated" : "estimated"} errors × ${
      plainNumber(applied_scale, 2)
    }`;
    if (!Number.isFinite(measured_scale)) return scaled;
    return applied_scale === measured_scale
      ? `${scaled}, from the scatter of the continuum`
      : `${scaled}, from the target file (the scatter of the continuum says ${
        plainNumber(measured_scale, 2)
      })`;
  });
  const pair = (name: string, found: typeof pairs.repeat, excess: string) =>
    found === null ? [] : [[
      "",
      `within the line, exposures ${name} differ by ${plainNumber(found.scale, 2)} ± ${
        plainNumber(found.scale_error, 2)
      } of their errors (${found.pairs} pair${found.pairs === 1 ? "" : "s"})${
        found.scale > 1.2 ? `: ${excess}` : ""
      }`,
    ]];
  return [
    [
      "signal to noise",
      `${plainNumber(ratio.median, 0)} (${plainNumber(ratio.low, 0)} to ${
        plainNumber(ratio.high, 0)
      }) in the continuum, in a resolution element`,
    ],
    ...[...new Set(scales)].map((text, i) => [i === 0 ? "errors" : "", text]),
    ...pair(
      "at the same phase of other orbits",
      pairs.repeat,
      "the object changed, or errors are too small",
    ),
    ...pair(
      "half an orbit apart, mirrored,",
      pairs.mirror,
      "gas that hides gas, or γ or the zero of phase is off",
    ),
    [
      "continuum",
      `varies by ${percent(line.continuum_variation)} from exposure to exposure, ${
        percent(line.continuum_orbital_amplitude, 1)
      } of it with the orbit: so much a line would change by dividing`,
    ],
  ];
}

function profileRows({ measures, net, equivalent_width_angstrom }: LineCheck): string[][] {
  const sign = net === "absorption" ? -1 : 1;
  return [[
    "mean profile",
    [
      `equivalent width ${plainNumber(equivalent_width_angstrom, 2)} Å (${
        kms(sign * measures.equivalent_width_kms)
      })`,
      ...(measures.fwhm_kms > 0 ? [`full width at half maximum ${kms(measures.fwhm_kms)}`] : []),
      ...(measures.peak_separation_kms > 0
        ? [`peaks ${kms(measures.peak_separation_kms)} apart`]
        : []),
    ].join(", "),
  ]];
}

function contentRows(contents: readonly CheckedContent[]): string[][] {
  const told = contents.filter(({ kind, seen }) => kind === "static" || seen === true);
  const hidden = contents.filter(({ seen }) => seen === false);
  const rows = told.map((one) =>
    `${one.name} ${place(one)}, ${one.window} window${
      one.kind === "line"
        ? ", seen in the mean spectrum"
        : one.window === "line" && one.ring_radius_kms !== null
        ? `: would draw a ring of ${kms(one.ring_radius_kms)}`
        : one.window === "line"
        ? ": its features would draw rings"
        : ""
    }`
  );
  const unseen = [...new Set(hidden.map(({ name }) => name))];
  if (unseen.length > 0) {
    rows.push(
      `not seen, but known there: ${unseen.slice(0, 6).join(", ")}${
        unseen.length > 6 ? ` and ${unseen.length - 6} more` : ""
      }`,
    );
  }
  return rows.map((text, i) => [i === 0 ? "in its windows" : "", text]);
}

function place({ kind, velocity_kms, range_kms, ring_radius_kms }: CheckedContent): string {
  return kind === "static" && ring_radius_kms === null
    ? `from ${plainNumber(range_kms[0], 0)} to ${kms(range_kms[1])}`
    : `at ${kms(velocity_kms)}`;
}
