import type { EcsvTable } from "../../files/mod.ts";
import type { JournalEntry } from "../../trail/mod.ts";
import { VERSION } from "../version.ts";

/**
 * The journal of observations as a table: one row for each night of each set-up.
 *
 * @param journal The entries.
 * @param options What it belongs to.
 * @param options.title Title of the target.
 * @returns The table.
 */
export function journalTable(
  journal: readonly JournalEntry[],
  options: { title: string },
): EcsvTable {
  const number = (
    name: string,
    unit: string | undefined,
    value: (entry: JournalEntry) => number | null,
    description: string,
  ) => ({ name, datatype: "float64" as const, unit, description, values: journal.map(value) });
  return {
    meta: { creator: "Millrace", version: VERSION, schema: "journal/1", target: options.title },
    columns: [
      {
        name: "group",
        datatype: "int32",
        description: "index of the exposures group, from 1",
        values: journal.map(({ group }) => group + 1),
      },
      number("first_bjd_tdb", "d", ({ first }) => first[0] + first[1], "first mid-exposure"),
      number("last_bjd_tdb", "d", ({ last }) => last[0] + last[1], "last mid-exposure"),
      {
        name: "exposures",
        datatype: "int32",
        values: journal.map(({ exposures }) => exposures),
      },
      number("shortest_s", "s", ({ shortest_s }) => shortest_s, "shortest exposure"),
      number("longest_s", "s", ({ longest_s }) => longest_s, "longest exposure"),
      number("from_angstrom", "Angstrom", (e) => e.from_angstrom, "first wavelength, vacuum"),
      number("to_angstrom", "Angstrom", (e) => e.to_angstrom, "last wavelength, vacuum"),
      number("pixel_angstrom", "Angstrom", (e) => e.pixel_angstrom, "median pixel"),
      number(
        "resolution_angstrom",
        "Angstrom",
        (e) => e.resolution_angstrom,
        "full width at half maximum",
      ),
      number(
        "signal_to_noise_pixel",
        undefined,
        (e) => e.signal_to_noise_pixel,
        "median flux over error of a pixel",
      ),
      number("orbits", undefined, (e) => e.orbits, "span in orbits"),
      number("first_orbit", undefined, (e) => e.first_orbit, "orbits since the zero at the start"),
    ],
  };
}
