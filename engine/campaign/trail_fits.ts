import { type CardSpec, encodeFits, type HduSpec } from "../fits/mod.ts";
import type { Trail } from "../trail/mod.ts";
import { fitsHead, hduName } from "./fits_head.ts";
import type { Target } from "./target.ts";

const ANGSTROM = 1e-10;

/**
 * `trail.fits`: for every line its display grid with errors, the table of exposures, and the native
 * samples that inversions and fits use.
 *
 * @param target The target.
 * @param options What to write.
 * @param options.trails One trail a line.
 * @returns The file's bytes.
 */
export function trailFits(target: Target, options: { trails: readonly Trail[] }): Uint8Array {
  return encodeFits([
    fitsHead(target, {
      content: "Trailed spectrograms: normalised flux minus one, emission positive. " +
        "V/c = lambda/lambda0 - 1, barycentric. Phase 0: inferior conjunction of the donor.",
    }),
    ...options.trails.flatMap(trailHdus),
  ]);
}

/** Cards of a velocity axis: the optical convention, linear, barycentric. */
export function velocityAxisCards(
  trail: Pick<Trail, "line" | "grid">,
): CardSpec[] {
  const { line, grid } = trail;
  return [
    { keyword: "CTYPE1", value: "VOPT", comment: "c (lambda/lambda0 - 1)" },
    { keyword: "CUNIT1", value: "km/s" },
    { keyword: "CRPIX1", value: 1 },
    { keyword: "CRVAL1", value: grid.first_kms },
    { keyword: "CDELT1", value: grid.step_kms },
    { keyword: "CTYPE2", value: "ROW", comment: "index into the table of rows" },
    { keyword: "CRPIX2", value: 1 },
    { keyword: "CRVAL2", value: 1 },
    { keyword: "CDELT2", value: 1 },
    { keyword: "SPECSYS", value: "BARYCENT" },
    { keyword: "RESTWAV", value: line.vacuum_angstrom * ANGSTROM, comment: "[m] rest, vacuum" },
    { keyword: "RESTAIR", value: line.air_angstrom * ANGSTROM, comment: "[m] rest, air" },
    { keyword: "LINENAME", value: line.name },
  ];
}

function trailHdus(trail: Trail): HduSpec[] {
  const { line, grid, sampling } = trail;
  const cards = velocityAxisCards(trail);
  const shape = [grid.columns, grid.rows];
  const exposures = Array.from({ length: sampling.count }, (_, i) => i);
  const finite = (values: Float64Array) =>
    values.map((value) => (Number.isFinite(value) ? value : NaN));
  return [
    {
      kind: "image",
      name: hduName(line.name),
      shape,
      data: grid.flux,
      cards,
    },
    { kind: "image", name: hduName(line.name, "error"), shape, data: finite(grid.error), cards },
    {
      kind: "table",
      name: hduName(line.name, "rows"),
      columns: [
        { name: "PHASE", data: grid.phase, description: "orbital phase, cycles" },
        { name: "PHASE_WIDTH", data: grid.phase_width, description: "exposure in cycles" },
      ],
    },
    {
      kind: "table",
      name: hduName(line.name, "exposures"),
      cards: [
        { keyword: "NOISESCL", value: trail.noise_scale, comment: "factor on the stated errors" },
      ],
      columns: [
        { name: "SOURCE", data: trail.sources, description: "file" },
        { name: "GROUP", data: Int16Array.from(trail.group), description: "exposures group" },
        { name: "CYCLE", data: sampling.cycle, description: "whole orbits since the zero" },
        { name: "PHASE", data: sampling.phase, description: "phase at mid-exposure, cycles" },
        { name: "PHASE_WIDTH", data: sampling.phase_width, description: "exposure in cycles" },
        {
          name: "PROFILE_SIGMA",
          data: sampling.profile_sigma_kms,
          unit: "km/s",
          description: "instrumental profile, sigma",
        },
        { name: "CONTINUUM", data: trail.continuum, description: "fitted level at the line" },
        {
          name: "CONTINUUM_ERROR",
          data: trail.continuum_error,
          description: "relative error of the level",
        },
      ],
    },
    {
      kind: "table",
      name: hduName(line.name, "native"),
      columns: [
        {
          name: "EXPOSURE",
          data: Int32Array.from(
            exposures.flatMap((i) =>
              new Array<number>(sampling.start[i + 1]! - sampling.start[i]!).fill(i + 1)
            ),
          ),
          description: "row in the table of exposures",
        },
        { name: "VELOCITY", data: sampling.velocity_kms, unit: "km/s" },
        { name: "FLUX", data: trail.flux, description: "normalised flux minus one" },
        { name: "ERROR", data: finite(trail.error), description: "one sigma, NaN where masked" },
      ],
    },
  ];
}
