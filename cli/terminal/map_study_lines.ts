import type { MapSummary } from "../../engine/campaign/mod.ts";
import { plainNumber, withError } from "./table.ts";

/**
 * What was asked of a map beside the map itself, as text.
 *
 * @param map The map in numbers.
 * @returns Lines.
 */
export function mapStudyLines(map: MapSummary): string[] {
  return [
    ...structureLines(map),
    ...sensitivityLines(map),
    ...modulationLines(map),
    ...scanLines(map),
  ];
}

function structureLines({ features }: MapSummary): string[] {
  return features.flatMap((feature, i) => {
    const { sampling_part, flux_kept, resolution_major_kms, resolution_minor_kms } = feature;
    const told = [
      ...(sampling_part === undefined ? [] : [
        `sampling alone makes ${
          plainNumber(Math.round(100 * sampling_part) + 0, 0)
        } % of its height`,
        flux_kept === null || flux_kept === undefined
          ? "lost in a second pass through the inversion"
          : `a second pass through the inversion keeps ${plainNumber(100 * flux_kept, 0)} % of it`,
        `a point there is ${plainNumber(resolution_major_kms, 0)} × ${
          plainNumber(resolution_minor_kms, 0)
        } km/s wide`,
      ]),
      ...(feature.forbidden_to_disc === true
        ? ["slower than a Keplerian disc within its rim can be"]
        : []),
    ];
    return told.length === 0 ? [] : [`    feature ${i + 1}: ${told.join("; ")}`];
  });
}

function sensitivityLines({ sensitivity, features }: MapSummary): string[] {
  if (sensitivity === null) return [];
  const { closer, looser } = sensitivity;
  return [
    `    maps at χ²/N = ${plainNumber(closer.reduced_chi_square, 3)} and ${
      plainNumber(looser.reduced_chi_square, 3)
    }: ${
      features.map((feature, i) => {
        const there = [closer.features[i] ?? null, looser.features[i] ?? null];
        const gone = there.filter((one) => one === null).length;
        const moved = Math.max(...there.flatMap((one) =>
          one === null ? [] : [Math.hypot(one.vx_kms - feature.vx_kms, one.vy_kms - feature.vy_kms)]
        ));
        return gone === 2
          ? `feature ${i + 1} is in neither`
          : `feature ${i + 1} ${gone === 1 ? "is in one of them and" : ""} moves by ${
            plainNumber(moved, 1)
          } km/s`.replace("  ", " ");
      }).join(", ") || "no feature to follow"
    }`,
  ];
}

function modulationLines({ modulation }: MapSummary): string[] {
  return (modulation?.regions ?? []).map(({ name, fitted_amplitude, fitted_error, p_value }) =>
    `    varies with the orbit, ${name}: ${withError(fitted_amplitude, fitted_error)} of its light${
      p_value === null ? "" : ` (p = ${p_value.toPrecision(2)})`
    }`
  );
}

function scanLines({ systemic_scan, period_scan }: MapSummary): string[] {
  const scans = [
    ["γ", systemic_scan, "km/s"],
    ["period", period_scan, "d"],
  ] as const;
  return scans.flatMap(([name, scan, unit]) =>
    scan === null ? [] : [
      `    ${name} by maps: ${
        scan.best === null || scan.shape !== "minimum"
          ? `${scan.shape === "flat" ? "not told by these data" : `not settled (${scan.shape})`}`
          : `${withError(scan.best, scan.error)} ${unit}`
      }, ${scan.adopted} taken`,
    ]
  );
}
