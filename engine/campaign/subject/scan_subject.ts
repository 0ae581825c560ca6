import type { PlateSubject } from "../../figures/mod.ts";
import { InputError } from "../../errors.ts";
import { parityScan, systemicByParity, type SystemicVelocity } from "../../tomography/mod.ts";
import type { MappedLine } from "../map_line.ts";
import type { ScanStudy } from "../studies/scan_study.ts";

/** Points of the scan. */
const POINTS = 61;

/**
 * The systemic velocity that the parity of the profiles' moments asks for; null where the data do
 * not allow the search.
 *
 * @param mapped The map of a line.
 * @returns γ with its error.
 */
export function searchedSystemic(mapped: MappedLine): SystemicVelocity | null {
  const { trail, systemic_kms, map } = mapped;
  try {
    return systemicByParity(trail, {
      systemic_kms,
      half_range_kms: map.half_width_kms,
      continuum_error: trail.continuum_error,
    });
  } catch (error) {
    if (error instanceof InputError) return null;
    throw error;
  }
}

/**
 * The γ scan of a line: χ² of the moments of its profiles about the polynomials that a fixed map would
 * give them, against the systemic velocity.
 *
 * @param mapped The map of the line.
 * @returns The scan; nothing where the data do not allow it.
 */
export function scanSubject(mapped: MappedLine): Pick<PlateSubject, "systemic_scan"> {
  const found = searchedSystemic(mapped);
  if (found === null) return {};
  const { trail, systemic_kms, map } = mapped;
  const away = Math.abs(found.systemic_kms - systemic_kms);
  const reach = Math.max(8 * found.error_kms, 1.5 * away);
  const x = Float64Array.from(
    { length: POINTS },
    (_, i) => found.systemic_kms + reach * (2 * i / (POINTS - 1) - 1),
  );
  const y = parityScan(trail, {
    systemic_kms,
    half_range_kms: map.half_width_kms,
    continuum_error: trail.continuum_error,
    velocities_kms: x,
  });
  return {
    systemic_scan: {
      x,
      y,
      best: found.systemic_kms,
      best_error: found.error_kms,
      reference: systemic_kms,
      label: "*χ*^{2}/*ν* of the moments",
      statistic:
        "χ² per degree of freedom of the moments of the profiles, as those of a fixed map,",
    },
  };
}

/** What panels say of each shape of a curve. */
const SHAPES: Readonly<Record<ScanStudy["shape"], string>> = {
  minimum: "one clear minimum",
  flat: "flat, so that these data do not tell it",
  edge: "least at the end of what was tried",
  several: "more than one minimum",
};

/**
 * A parameter that was searched with maps of one multiplier, as a panel shows it.
 *
 * @param study What was found.
 * @returns The scan.
 */
export function scanByMaps(study: ScanStudy): NonNullable<PlateSubject["systemic_scan"]> {
  const { values, excess, best, error, shape, adopted } = study;
  return {
    x: values,
    y: excess,
    best,
    best_error: error,
    reference: adopted,
    label: "excess of *χ*^{2} − *αS*",
    statistic: `χ² − αS of entropy maps of one multiplier, over its least (${SHAPES[shape]}),`,
  };
}
