import type { DiagnosticDiagram } from "./diagnostic_diagram.ts";

/** Light centres against separation, and their extrapolation. */
export interface LightCentre {
  /** Half separations, km/s, A values. */
  readonly half_separation_kms: Float64Array;
  /** Light centre in map coordinates, km/s, A values: V = γ − Vx cos 2πφ + Vy sin 2πφ. */
  readonly vx_kms: Float64Array;
  /** Errors of Vx, km/s. */
  readonly vx_error_kms: Float64Array;
  /** Vy, km/s, A values. */
  readonly vy_kms: Float64Array;
  /** Errors of Vy, km/s. */
  readonly vy_error_kms: Float64Array;
  /** K1 = −Vy where the straight line through the centres meets Vx = 0, km/s; null when it does not. */
  readonly k_accretor_kms: number | null;
}

/**
 * Light-centre diagram (Marsh 1988, MNRAS 231, 1117): the velocity curve of each separation as a
 * point (Vx, Vy). Spot light pulls the points off the axis Vx = 0; as the separation grows they come
 * back to it, and a straight line through them is extended to the axis, on which the accretor lies.
 * The line has an error in both coordinates; neighbouring points share noise, so the result carries
 * no error of its own and is a witness beside the plateau, no measurement.
 *
 * @param diagram A diagnostic diagram.
 * @returns The points and the extrapolation.
 *
 * @example
 * ```ts
 * import { type DiagnosticDiagram, lightCentre } from "@millrace/millrace/orbit";
 * import { assertEquals } from "@std/assert";
 *
 * const empty: DiagnosticDiagram = { line: "H beta", sigma_kms: 100, rows: [], covariance: [] };
 * assertEquals(lightCentre(empty).k_accretor_kms, null);
 * ```
 */
export function lightCentre(diagram: DiagnosticDiagram): LightCentre {
  const rows = diagram.rows.filter((row) => row.fit !== null);
  const column = (value: (fit: NonNullable<(typeof rows)[number]["fit"]>) => number) =>
    Float64Array.from(rows, (row) => value(row.fit!));
  const points = {
    half_separation_kms: Float64Array.from(rows, (row) => row.half_separation_kms),
    vx_kms: column((fit) => 0 - fit.harmonics_kms[2]!),
    vx_error_kms: column((fit) => Math.sqrt(fit.covariance.get(2, 2))),
    vy_kms: column((fit) => fit.harmonics_kms[1]!),
    vy_error_kms: column((fit) => Math.sqrt(fit.covariance.get(1, 1))),
  };
  return { ...points, k_accretor_kms: extrapolate(points) };
}

/** Where a line through weighted points, errors in both coordinates, meets Vx = 0: −Vy there. */
function extrapolate(points: Omit<LightCentre, "k_accretor_kms">): number | null {
  const { vx_kms, vy_kms, vx_error_kms, vy_error_kms } = points;
  if (vx_kms.length < 3) return null;
  const weights = vx_error_kms.map((e, k) => 1 / (e * e + vy_error_kms[k]! ** 2));
  const sum = weights.reduce((a, w) => a + w, 0);
  const mean = (values: Float64Array) => values.reduce((a, v, k) => a + v * weights[k]!, 0) / sum;
  const [x, y] = [mean(vx_kms), mean(vy_kms)];
  let xx = 0, xy = 0, yy = 0;
  weights.forEach((w, k) => {
    xx += w * (vx_kms[k]! - x) ** 2;
    xy += w * (vx_kms[k]! - x) * (vy_kms[k]! - y);
    yy += w * (vy_kms[k]! - y) ** 2;
  });
  // Direction of the principal axis.
  const angle = Math.atan2(2 * xy, xx - yy) / 2;
  const [dx, dy] = [Math.cos(angle), Math.sin(angle)];
  // A line along the axis itself has no single crossing; one that hardly moves is at its mean.
  if (Math.abs(dx) < 0.05) return Math.abs(x) < 2 / Math.sqrt(sum) ? 0 - y : null;
  return 0 - (y - x * dy / dx);
}
