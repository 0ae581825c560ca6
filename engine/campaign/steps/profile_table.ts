import type { EcsvTable } from "../../files/mod.ts";
import type { MeasuredRow, Trail, TrailMeasurements } from "../../trail/mod.ts";
import { VERSION } from "../version.ts";

/**
 * What was measured on every exposure, as a table: one row for each exposure of each line.
 *
 * @param measured The lines.
 * @param options What it belongs to.
 * @param options.title Title of the target.
 * @returns The table.
 */
export function profileTable(
  measured: readonly { readonly trail: Trail; readonly found: TrailMeasurements }[],
  options: { title: string },
): EcsvTable {
  const rows = measured.flatMap(({ trail, found }) =>
    found.exposures.map((row, i) => ({
      row,
      line: trail.line.name,
      source: trail.sources[i]!,
      cycle: trail.sampling.cycle[i]!,
    }))
  );
  const known = (value: number) => (Number.isFinite(value) ? value : null);
  const pair = (
    name: string,
    unit: string | undefined,
    description: string,
    pick: (row: MeasuredRow) => { readonly value: number; readonly error: number },
  ) => [
    {
      name,
      datatype: "float64" as const,
      unit,
      description,
      values: rows.map(({ row }) => known(pick(row).value)),
    },
    {
      name: `${name}_error`,
      datatype: "float64" as const,
      unit,
      description: "one standard deviation",
      values: rows.map(({ row }) => known(pick(row).error)),
    },
  ];
  return {
    meta: {
      creator: "Millrace",
      version: VERSION,
      schema: "profile-table/1",
      target: options.title,
    },
    columns: [
      { name: "line", datatype: "string", values: rows.map(({ line }) => line) },
      { name: "source", datatype: "string", values: rows.map(({ source }) => source) },
      {
        name: "phase",
        datatype: "float64",
        description: "orbital phase at mid-exposure, cycles",
        values: rows.map(({ row }) => row.phase),
      },
      {
        name: "cycle",
        datatype: "int32",
        description: "whole orbits since the zero of phase",
        values: rows.map(({ cycle }) => cycle),
      },
      ...pair(
        "equivalent_width",
        "Angstrom",
        "emission positive",
        (row) => row.equivalent_width_angstrom,
      ),
      ...pair("line_flux", undefined, "flux unit of the files times Å", (row) => row.line_flux),
      ...pair(
        "continuum",
        undefined,
        "at the line, flux unit of the files",
        (row) => row.continuum,
      ),
      ...pair("centroid", "km / s", "weighted by flux", (row) => row.profile.centroid_kms),
      ...pair("fwhm", "km / s", "full width at half of the peak", (row) => row.profile.fwhm_kms),
      ...pair(
        "full_width",
        "km / s",
        "full width at a tenth of the peak",
        (row) => row.profile.full_width_kms,
      ),
      ...pair(
        "peak_separation",
        "km / s",
        "red peak less violet peak",
        (row) => row.profile.peak_separation_kms,
      ),
      ...pair(
        "violet_over_red",
        undefined,
        "heights of the peaks above the continuum",
        (row) => row.profile.blue_over_red,
      ),
    ],
  };
}
