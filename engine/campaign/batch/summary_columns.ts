import type { EcsvDatatype, EcsvValue } from "../../files/mod.ts";
import type { GatheredRun } from "./gather_job.ts";

/** What a row of the summary is made from: one line of one treatment of one target. */
export interface SummarySource {
  /** The treatment. */
  readonly run: GatheredRun;
  /** Name of the line; null where the target names none, or could not be read. */
  readonly line: string | null;
  /** The JSON documents of its steps, by command. */
  readonly documents: Readonly<Record<string, unknown>>;
}

/** One column of the summary. */
export interface SummaryColumn {
  /** Name, its unit at the end. */
  readonly name: string;
  /** Type. */
  readonly datatype: EcsvDatatype;
  /** Unit. */
  readonly unit?: string;
  /** What it holds. */
  readonly description: string;
  /** The value; null where there is none. */
  readonly value: (source: SummarySource) => EcsvValue;
}

/** A part of a document by its path; undefined where it is not there. */
function at(document: unknown, path: readonly (string | number)[]): unknown {
  let part = document;
  for (const key of path) {
    if (part === null || typeof part !== "object") return undefined;
    part = (part as Record<string | number, unknown>)[key];
  }
  return part;
}

/** The entry of a document's list that is about the row's line. */
function entry(source: SummarySource, command: string, list: string): unknown {
  const entries = at(source.documents[command], [list]);
  return Array.isArray(entries)
    ? entries.find((candidate) => at(candidate, ["line"]) === source.line)
    : undefined;
}

function numberOrNull(value: unknown): number | null {
  return typeof value === "number" && Number.isFinite(value) ? value : null;
}

function number(
  name: string,
  description: string,
  value: (source: SummarySource) => unknown,
  unit?: string,
): SummaryColumn {
  return {
    name,
    datatype: "float64",
    ...(unit === undefined ? {} : { unit }),
    description,
    value: (source) => numberOrNull(value(source)),
  };
}

function whole(
  name: string,
  description: string,
  value: (source: SummarySource) => unknown,
): SummaryColumn {
  return { ...number(name, description, value), datatype: "int32" };
}

function word(
  name: string,
  description: string,
  value: (source: SummarySource) => unknown,
): SummaryColumn {
  return {
    name,
    datatype: "string",
    description,
    value: (source) => {
      const found = value(source);
      return typeof found === "string" && found !== "" ? found : null;
    },
  };
}

const KMS = "km / s";
const orbit = (...path: string[]) => (source: SummarySource) => at(source.documents.orbit, path);
const map = (...path: (string | number)[]) => (source: SummarySource) =>
  at(entry(source, "map", "maps"), path);
const check = (...path: string[]) => (source: SummarySource) =>
  at(entry(source, "check", "lines"), path);
const weigh = (...path: string[]) => (source: SummarySource) =>
  at(entry(source, "weigh", "lines"), path);

/** γ of the star for which it was measured better. */
const systemic = (key: "systemic_kms" | "systemic_error_kms") => (source: SummarySource) => {
  const stars = (["accretor", "donor"] as const).filter((star) =>
    numberOrNull(orbit(star, "systemic_error_kms")(source)) !== null
  );
  const [best] = stars.sort((a, b) => error(a) - error(b));
  return best === undefined ? null : orbit(best, key)(source);

  function error(star: string): number {
    return numberOrNull(orbit(star, "systemic_error_kms")(source)) ?? Infinity;
  }
};

/**
 * The weighing in a few words: "disc+spot", "disc+spot or disc+stream", "outside", "undecided". What
 * is left open for want of trials alone says so: a rival that no trial spoke for is no rival.
 */
function verdict(source: SummarySource): unknown {
  const preferred = weigh("preferred")(source);
  if (!Array.isArray(preferred)) return null;
  if (preferred.length === 0) {
    const hypotheses = weigh("hypotheses")(source);
    const some = Array.isArray(hypotheses) && hypotheses.some((one) => at(one, ["adequate"]));
    return some ? "undecided" : "outside";
  }
  const name = preferred.join("+");
  const rival = weigh("undecided_with")(source);
  if (!Array.isArray(rival)) return name;
  const contest = weigh("contest")(source);
  const held = at(contest, ["decided"]) === false;
  const few = !held || (sameWords(at(contest, ["leader"]), preferred) &&
    at(contest, ["rival_true", "exceeding"]) === 0);
  return few ? `${name}, too few trials` : `${name} or ${rival.join("+")}`;
}

function sameWords(a: unknown, b: readonly unknown[]): boolean {
  return Array.isArray(a) && a.join() === b.join();
}

/**
 * The columns of the summary: one row a target, treatment and line. A new step joins by columns
 * here, or by none.
 */
export const summaryColumns: readonly SummaryColumn[] = [
  word("target", "name of the target and of its folder", ({ run }) => run.name),
  word("variant", "treatment; empty for the target's own", ({ run }) => run.variant),
  word("line", "name of the line", ({ line }) => line),
  word("title", "title of the target", ({ run }) => run.title),
  word("status", "done, failed or missing", ({ run }) => run.status),
  word("error", "the first error", ({ run }) => run.error?.message),
  number(
    "rest_air_angstrom",
    "rest wavelength in air",
    (source) => map("rest_air_angstrom")(source) ?? check("rest_air_angstrom")(source),
    "Angstrom",
  ),
  whole("exposures", "exposures used", check("exposures")),
  number(
    "signal_to_noise",
    "median of the continuum per resolution element",
    check("signal_to_noise", "median"),
  ),
  number("k_accretor_kms", "K1 as measured", orbit("accretor", "k_kms"), KMS),
  number("k_accretor_error_kms", "its standard deviation", orbit("accretor", "k_error_kms"), KMS),
  number(
    "k_donor_kms",
    "K2 of the donor's centre as measured",
    orbit("donor", "k_centre_kms"),
    KMS,
  ),
  number("k_donor_error_kms", "its standard deviation", orbit("donor", "k_centre_error_kms"), KMS),
  number("systemic_kms", "systemic velocity as measured", systemic("systemic_kms"), KMS),
  number("systemic_error_kms", "its standard deviation", systemic("systemic_error_kms"), KMS),
  number("mass_ratio", "M2/M1 as measured", orbit("mass_ratio")),
  number("mass_ratio_error", "its standard deviation", orbit("mass_ratio_error")),
  number("accretor_msun", "M1", orbit("masses", "accretor_msun"), "solMass"),
  number("donor_msun", "M2", orbit("masses", "donor_msun"), "solMass"),
  word("map_method", "inversion", map("method")),
  number("map_systemic_kms", "systemic velocity taken out of the map", map("systemic_kms"), KMS),
  number("map_reduced_chi_square", "chi-square over samples", map("reduced_chi_square")),
  {
    name: "map_converged",
    datatype: "bool",
    description: "whether the inversion met its goal",
    value: (source) => {
      const value = map("converged")(source);
      return typeof value === "boolean" ? value : null;
    },
  },
  number("peak_vx_kms", "brightest place of the map", map("peak", "vx_kms"), KMS),
  number("peak_vy_kms", "brightest place of the map", map("peak", "vy_kms"), KMS),
  whole("features", "compact excesses found", (source) => {
    const features = map("features")(source);
    return Array.isArray(features) ? features.length : null;
  }),
  number("feature_vx_kms", "place of the strongest", map("features", 0, "vx_kms"), KMS),
  number("feature_vx_error_kms", "its error", map("features", 0, "vx_error_kms"), KMS),
  number("feature_vy_kms", "place of the strongest", map("features", 0, "vy_kms"), KMS),
  number("feature_vy_error_kms", "its error", map("features", 0, "vy_error_kms"), KMS),
  number("feature_flux_fraction", "its share of the flux", map("features", 0, "flux_fraction")),
  number("feature_sigma", "its significance", map("features", 0, "significance_sigma")),
  word("feature_nearest", "structure nearest to it", map("features", 0, "nearest")),
  word(
    "verdict",
    "preferred parts, or two sets that the data do not tell apart; outside where none explains them",
    verdict,
  ),
  number("false_alarm", "false-alarm rate as measured", weigh("false_alarm", "value")),
  number("false_alarm_error", "its error", weigh("false_alarm", "error")),
  word("warnings", "codes of the warnings about the line", ({ run, line }) =>
    [
      ...new Set(
        run.warnings.filter((warning) =>
          warning.line === undefined || line === null || warning.line === line
        ).map(({ code }) => code),
      ),
    ].join(" ")),
];
