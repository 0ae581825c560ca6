import type { OrbitReport } from "../orbit/mod.ts";
import type { Target } from "./target.ts";

/**
 * A target file's text with the orbit as measured: period, zero, systemic velocity and orbital
 * speeds replaced where they were measured, everything else and all comments kept. What was known of
 * period and zero before goes to `[orbit.before]`, from which `orbit` starts: measured again, the
 * refined file gives the same, as no exposure counts twice.
 *
 * @param target The target.
 * @param report What was measured.
 * @returns The new text.
 */
export function refinedTarget(target: Target, report: OrbitReport): string {
  const { accretor, donor } = report;
  const star = donor?.systemic_kms == null ? accretor : donor;
  const periodFound = report.period_from === "fitted" || report.period_from === "searched";
  // A new period with the old zero would move the phase at the data.
  const ephemerisFound = periodFound || report.zero_from !== "target";
  const orbit: Record<string, number | string | null | undefined> = {
    ...(periodFound ? { period_d: report.period_d, period_error_d: report.period_error_d } : {}),
    ...(ephemerisFound
      ? {
        zero_bjd_tdb: report.zero_bjd_tdb,
        zero_error_d: report.zero_error_d,
        zero_period_covariance_d2: report.zero_period_covariance_d2,
        zero_marks: report.zero_marks,
      }
      : {}),
    systemic_kms: star?.systemic_kms,
    systemic_error_kms: star?.systemic_error_kms,
  };
  const binary: Record<string, number | null | undefined> = {
    k_accretor_kms: accretor?.k_kms,
    k_accretor_error_kms: accretor?.k_error_kms,
    k_donor_kms: donor?.k_centre_kms,
    k_donor_error_kms: donor?.k_centre_error_kms,
  };
  let text = target.text;
  if (ephemerisFound) {
    // The old zero, in whatever scale, must not stand beside the new one.
    text = removeKeys(text, "orbit", ["zero_hjd_utc", "zero_hjd_tt"]);
  }
  if (periodFound) text = removeKeys(text, "orbit", ["period_range_d"]);
  if (binary.k_accretor_kms != null && binary.k_donor_kms != null) {
    text = removeKeys(text, "binary", ["mass_ratio", "mass_ratio_error"]);
  }
  text = setKeys(text, "orbit", orbit);
  text = setKeys(text, "binary", binary);
  if (ephemerisFound && target.settings.orbit.before === undefined) {
    text = `${text.trimEnd()}\n\n${beforeTable(target)}`;
  }
  return `# written by Millrace: ${target.name}.toml with the orbit as measured\n${text}`;
}

function beforeTable(target: Target): string {
  const { systemic_kms: _kms, systemic_error_kms: _error, before: _before, ...known } =
    target.settings.orbit;
  const lines = Object.entries(known).flatMap(([key, value]) =>
    value === undefined ? [] : [`${key} = ${tomlValue(value)}`]
  );
  return `# What was known before these exposures: \`orbit\` starts from it, so that none of them counts twice.
# Where [orbit] is to be prior knowledge for other exposures, delete this table.
[orbit.before]
${lines.join("\n")}
`;
}

function removeKeys(text: string, section: string, keys: readonly string[]): string {
  return inSection(
    text,
    section,
    (lines) =>
      lines.filter((line) => !keys.some((key) => new RegExp(`^\\s*${key}\\s*=`).test(line))),
  );
}

function setKeys(
  text: string,
  section: string,
  values: Readonly<Record<string, number | string | null | undefined>>,
): string {
  const known = Object.entries(values).filter((entry): entry is [string, number | string] =>
    typeof entry[1] === "number" ? Number.isFinite(entry[1]) : typeof entry[1] === "string"
  );
  if (known.length === 0) return text;
  return inSection(text, section, (lines) => {
    const result = [...lines];
    for (const [key, value] of known) {
      const at = result.findIndex((line) => new RegExp(`^\\s*${key}\\s*=`).test(line));
      const line = `${key} = ${tomlValue(value)}`;
      if (at >= 0) {
        const comment = /\s+#.*$/.exec(result[at]!)?.[0] ?? "";
        result[at] = line + comment;
      } else {
        const blank = result.findLastIndex((one) => one.trim() !== "");
        result.splice(blank + 1, 0, line);
      }
    }
    return result;
  });
}

/** Rewrites the lines of one table, which is added at the end when the text has none. */
function inSection(
  text: string,
  section: string,
  change: (lines: string[]) => string[],
): string {
  const lines = text.split("\n");
  const start = lines.findIndex((line) => new RegExp(`^\\s*\\[${section}\\]`).test(line));
  if (start < 0) {
    const added = change([]);
    return added.length === 0 ? text : `${text.trimEnd()}\n\n[${section}]\n${added.join("\n")}\n`;
  }
  const next = lines.findIndex((line, i) => i > start && /^\s*\[/.test(line));
  const end = next < 0 ? lines.length : next;
  return [
    ...lines.slice(0, start + 1),
    ...change(lines.slice(start + 1, end)),
    ...lines.slice(end),
  ].join("\n");
}

function tomlValue(value: number | string | readonly number[]): string {
  if (Array.isArray(value)) return `[${value.map(tomlValue).join(", ")}]`;
  if (typeof value === "string") return JSON.stringify(value);
  const text = String(value);
  return /[.e]/.test(text) ? text : `${text}.0`;
}
