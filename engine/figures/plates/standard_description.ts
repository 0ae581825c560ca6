import type { ColourScale } from "../colour/colour_scale.ts";
import type { PlateContent } from "./standard_plate.ts";

/** Colour scales of a standard plate. */
export interface StandardScales {
  /** Of the map. */
  readonly mapScale: ColourScale;
  /** Of both trails. */
  readonly trailScale: ColourScale;
  /** Of the residual. */
  readonly residualScale: ColourScale;
}

/**
 * Says in words what a standard plate shows: for those who cannot see it, and as a start for a caption.
 *
 * @param content What is shown.
 * @param scales Its colour scales.
 * @returns A few sentences with every number used.
 *
 * @example
 * ```ts
 * import { standardDescription } from "@millrace/millrace/figures";
 * import { assert } from "@std/assert";
 *
 * const grid = {
 *   rows: 1, columns: 1, first_kms: 0, step_kms: 100,
 *   phase: Float64Array.of(0.5), phase_width: Float64Array.of(0.1),
 *   flux: Float64Array.of(1), error: Float64Array.of(1),
 * };
 * const text = standardDescription({
 *   title: "VX-0417",
 *   line: { name: "H beta", vacuum_angstrom: 4862.69, air_angstrom: 4861.33, source: "" },
 *   map: { pixels: 3, half_width_kms: 300, intensity: new Float64Array(9) },
 *   trail: { grid, sampling: { count: 1, phase: grid.phase, phase_width: grid.phase_width } },
 *   model: new Float64Array(1), residual: new Float64Array(1),
 *   binary: null, systemic_kms: 27, method: "back-projection",
 * }, {
 *   mapScale: { limits: [0, 1] }, trailScale: { limits: [0, 2] }, residualScale: { limits: [-5, 5] },
 * });
 * assert(text.includes("4861.33 Å"));
 * ```
 */
export function standardDescription(content: PlateContent, scales: StandardScales): string {
  const { title, line, map, trail, binary, features = [], systemic_kms, method } = content;
  const chi = content.reduced_chi_square ?? null;
  const of = title === "" ? "" : ` of ${title}`;
  const limits = ({ limits: [low, high] }: ColourScale) => `${short(low)} to ${short(high)}`;
  const sentences = [
    `Velocity map${of} in ${line.name} (rest wavelength ${
      line.air_angstrom.toFixed(2)
    } Å in air, ` +
    `V/c = λ/λ0 − 1) by ${method}, ${map.pixels} × ${map.pixels} pixels out to ` +
    `${short(map.half_width_kms)} km/s, systemic velocity ${short(systemic_kms)} km/s` +
    `${chi === null ? "" : `, χ²/N = ${chi.toFixed(2)}`}.`,
    `Ticks around the map stand at the angles along which the ${trail.sampling.count} exposures ` +
    `project it: phase 0 (donor nearest the observer) at the left, 0.25 at the top.`,
    "Beside it over two cycles: the trail as observed, the map projected again, and data less " +
    "model in standard deviations; phases without an exposure are blank.",
    `Colours: map ${limits(scales.mapScale)} per km/s, trails ${
      limits(scales.trailScale)
    } of the ` +
    `continuum, residual ${limits(scales.residualScale)} σ.`,
  ];
  if (binary) {
    sentences.push(
      `Marked: centre of mass (×), accretor (+), the donor's lobe, the ballistic stream (solid) and ` +
        `the Keplerian velocity under it (dashed) with a tick every 0.1 of the separation, for q = ` +
        `${short(binary.mass_ratio)}, K1 = ${short(binary.k_accretor_kms)} km/s, K2 = ` +
        `${short(binary.k_donor_kms)} km/s.`,
    );
  }
  features.forEach((feature, i) => {
    const { vx_kms, vy_kms, vx_error_kms: ex, vy_error_kms: ey } = feature;
    const error = (value?: number | null) => value ? ` ± ${short(value)}` : "";
    sentences.push(
      `Feature ${i + 1} at Vx = ${short(vx_kms)}${error(ex)}, Vy = ${short(vy_kms)}${
        error(ey)
      } km/s.`,
    );
  });
  return sentences.join(" ");
}

/** Four significant digits, with a true minus sign. */
function short(value: number): string {
  return String(Number(value.toPrecision(4))).replace("-", "−");
}
