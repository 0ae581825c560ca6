import { measuredText } from "../measured_text.ts";

/** What a referee asks of a velocity map, as far as it is known; absent means not done. */
export interface RefereeFacts {
  /** What the zero of phase marks, and where it comes from. */
  readonly zero?: {
    /** As in "donor at inferior conjunction". */
    readonly marks: string;
    /** As in "target file" or "this data, Na I 8190". */
    readonly source: string;
    /** Uncertainty of the phase at the time of the data, cycles; null when not known. */
    readonly phase_error: number | null;
  };
  /** Systemic velocity used. */
  readonly systemic?: {
    /** km/s. */
    readonly kms: number;
    /** One standard deviation, km/s; null when not known. */
    readonly error_kms: number | null;
    /** As in "target file" or "scan of this data". */
    readonly source: string;
  };
  /** Rest wavelength used. */
  readonly rest?: {
    /** In air, Å. */
    readonly air_angstrom: number;
    /** Where it comes from. */
    readonly source: string;
  };
  /** Maps made at γ − σ and γ + σ: how far the strongest feature moves. */
  readonly systemic_shift?: {
    /** By how much γ was moved to either side, km/s. */
    readonly sigma_kms: number;
    /** Where that comes from. */
    readonly source: string;
    /** Largest move, km/s; infinite when the feature is lost. */
    readonly moves_kms: number;
    /** What it is compared with: the feature's error, km/s. */
    readonly error_kms: number | null;
  };
  /** How the continuum was treated, as in "divided by a line through two windows". */
  readonly normalisation?: string;
  /** Smearing of each exposure against the resolution. */
  readonly smear?: {
    /** Largest smear for emission at the edge of the map, km/s. */
    readonly kms: number;
    /** Instrumental resolution (FWHM), km/s. */
    readonly resolution_kms: number;
    /** True when the map's model of the data includes it. */
    readonly modelled: boolean;
  };
  /** Exposures in half an orbit against the number that the map's size needs. */
  readonly sampling?: {
    /** Largest gap, cycles. */
    readonly largest_gap: number;
    /** Number of exposures. */
    readonly exposures: number;
  };
  /** Fit of the map. */
  readonly fit?: {
    /** χ² per degree of freedom. */
    readonly reduced_chi_square: number;
    /** Noise over the stated errors. */
    readonly noise_scale: number;
  };
  /** Whether the feature is seen in odd and even exposures alike. */
  readonly halves?: { readonly seen: boolean; readonly detail: string };
  /** Whether it is seen in every night. */
  readonly nights?: { readonly seen: boolean; readonly detail: string };
  /** How K of the irradiated donor was corrected to its centre of mass. */
  readonly k_correction?: string;
  /** Upper limit where nothing is seen. */
  readonly upper_limit?: {
    /** Flux in units of the continuum × km/s. */
    readonly flux_kms: number;
    /** Confidence, 0 to 1. */
    readonly confidence: number;
    /** Where, as in "at the donor". */
    readonly where: string;
  };
}

/** One point of the checklist. */
export interface ChecklistRow {
  /** What is asked. */
  readonly question: string;
  /** The answer. */
  readonly answer: string;
  /** Whether it is settled, against the result, or not done. */
  readonly state: "settled" | "doubtful" | "open";
}

const notDone = (how: string): Omit<ChecklistRow, "question"> => ({
  answer: `Not done: ${how}.`,
  state: "open",
});

/**
 * Answers the points that a referee raises about a velocity map, each with its numbers, or says what
 * was not done.
 *
 * @param facts What is known.
 * @returns The points in a fixed order.
 *
 * @example
 * ```ts
 * import { refereeChecklist } from "@millrace/millrace/figures";
 * import { assertEquals } from "@std/assert";
 *
 * const rows = refereeChecklist({ normalisation: "divided by a line through two windows" });
 * assertEquals(rows.filter((row) => row.state === "settled").length, 1);
 * ```
 */
export function refereeChecklist(facts: RefereeFacts): ChecklistRow[] {
  const { zero, systemic, rest, systemic_shift, smear, sampling, fit, halves, nights } = facts;
  const row = (question: string, known: Omit<ChecklistRow, "question">) => ({ question, ...known });
  const settled = (answer: string, good = true) => ({
    answer,
    state: good ? "settled" as const : "doubtful" as const,
  });
  return [
    row(
      "Whose zero of phase is it?",
      zero
        ? settled(
          `It marks: ${zero.marks} (${zero.source}). Uncertainty at the time of the data: ` +
            (zero.phase_error === null
              ? "not known."
              : `${Number(zero.phase_error.toPrecision(2))} cycles, which turns the map by ` +
                `${Number((360 * zero.phase_error).toPrecision(2))}°.`),
          zero.phase_error !== null && zero.phase_error < 0.02,
        )
        : notDone("state zero_marks and zero_error_d in the target file"),
    ),
    row(
      "Which systemic velocity?",
      systemic
        ? settled(
          `${measuredText(systemic.kms, systemic.error_kms)} km/s (${systemic.source}).`,
          systemic.error_kms !== null,
        )
        : notDone("state systemic_kms in the target file"),
    ),
    row(
      "Which rest wavelength?",
      rest
        ? settled(`${rest.air_angstrom.toFixed(2)} Å in air (${rest.source}).`)
        : notDone("none stated"),
    ),
    row(
      "Does the map hold at γ ± σ?",
      systemic_shift
        ? settled(
          `At γ ± ${twoDigits(systemic_shift.sigma_kms)} km/s (${systemic_shift.source}) ` +
            (systemic_shift.moves_kms < Infinity
              ? `the strongest feature moves by ${twoDigits(systemic_shift.moves_kms)} km/s`
              : "the strongest feature is lost") +
            (systemic_shift.error_kms === null
              ? "."
              : `; its own error is ${twoDigits(systemic_shift.error_kms)} km/s.`),
          systemic_shift.error_kms !== null && systemic_shift.moves_kms <= systemic_shift.error_kms,
        )
        : notDone("make maps at both ends of the error of γ"),
    ),
    row(
      "How was the continuum treated?",
      facts.normalisation ? settled(`${upper(facts.normalisation)}.`) : notDone("not stated"),
    ),
    row(
      "Is the smear of each exposure small, or in the model?",
      smear
        ? settled(
          `At most ${measuredText(smear.kms, null)} km/s, resolution ` +
            `${measuredText(smear.resolution_kms, null)} km/s; ` +
            (smear.modelled ? "in the model." : "not in the model."),
          smear.modelled || smear.kms < smear.resolution_kms,
        )
        : notDone("run check"),
    ),
    row(
      "Is the orbit covered?",
      sampling
        ? settled(
          `${sampling.exposures} exposures, largest gap ${sampling.largest_gap.toFixed(2)} cycles.`,
          sampling.largest_gap < 0.2,
        )
        : notDone("run check"),
    ),
    row(
      "Does the map fit the data?",
      fit
        ? settled(
          `χ²/N = ${fit.reduced_chi_square.toFixed(2)} with errors scaled by ` +
            `${fit.noise_scale.toFixed(2)}.`,
          fit.reduced_chi_square < 1.5,
        )
        : notDone("no fit computed"),
    ),
    row(
      "Is the feature seen in both halves of the data?",
      halves ? settled(halves.detail, halves.seen) : notDone("make maps of odd and even exposures"),
    ),
    row(
      "Is it seen in every night?",
      nights ? settled(nights.detail, nights.seen) : notDone("make a map of each night"),
    ),
    row(
      "Was K of the donor corrected for irradiation?",
      facts.k_correction
        ? settled(`${upper(facts.k_correction)}.`)
        : notDone("no velocity of the donor measured"),
    ),
    row(
      "Is there an upper limit where nothing is seen?",
      facts.upper_limit
        ? settled(
          `${twoDigits(facts.upper_limit.flux_kms)} km/s of the continuum ` +
            `${facts.upper_limit.where}, at ${
              Number((100 * facts.upper_limit.confidence).toFixed(2))
            } %.`,
        )
        : notDone("put the panel detection-limit on the plate, or run weigh"),
    ),
  ];
}

/** As many digits as an error has. */
function twoDigits(value: number): string {
  return String(Number(value.toPrecision(2)));
}

function upper(text: string): string {
  return text.slice(0, 1).toUpperCase() + text.slice(1);
}
