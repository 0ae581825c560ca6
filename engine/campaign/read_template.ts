import { join } from "@std/path";
import { SPEED_OF_LIGHT_KMS } from "../constants.ts";
import { readBytes } from "../files/mod.ts";
import { airToVacuum, type SpectralLine } from "../sky/mod.ts";
import { findMedium, findResolution, recordedIn, type Spectrum } from "../spectra/mod.ts";
import { type DonorTemplate, spectrumTemplate } from "../orbit/mod.ts";
import type { LineSettings } from "./schema/lines_section.ts";
import type { Target } from "./target.ts";

/**
 * The template stars of a line: spectra at rest, one a file, in any layout that holds a single
 * spectrum. The resolution is taken from the file, else it is the line's own.
 *
 * @param target The target.
 * @param options The line and what is known of it.
 * @param options.settings The `[[lines]]` table.
 * @param options.line The line.
 * @param options.resolution_kms Resolution of the exposures, km/s, where a file does not say.
 * @returns Templates; none when the table names none.
 * @throws {InputError} When a file cannot be read or does not overlap the line.
 */
export async function readTemplates(
  target: Target,
  options: { settings: LineSettings; line: SpectralLine; resolution_kms: number },
): Promise<DonorTemplate[]> {
  const { settings, line, resolution_kms } = options;
  const named = typeof settings.template === "string" ? [settings.template] : settings.template;
  const templates: DonorTemplate[] = [];
  for (const name of named.filter((one) => one !== "none")) {
    const file = join(target.folder, name);
    const { recorded } = recordedIn(await readBytes(file, { action: "read template" }), { file });
    const [{ axis, flux, error, facts }] = recorded as [(typeof recorded)[number]];
    const { medium } = findMedium(facts, {
      asked: "auto",
      axis: axis.medium,
      wavelength_angstrom: axis.wavelength_angstrom[0]!,
    });
    const wavelength_angstrom = medium === "air"
      ? axis.wavelength_angstrom.map((wave) => airToVacuum(wave))
      : axis.wavelength_angstrom;
    const spectrum: Spectrum = {
      source: file,
      group: 0,
      wavelength_angstrom,
      flux,
      error: error ?? flux.map((value) => (Number.isFinite(value) ? 1 : Infinity)),
      errors_given: error !== null,
      mid: [0, 0],
      exposure_s: 0,
      observer_factor: null,
      resolution_angstrom: findResolution(facts, { wavelength_angstrom })?.resolution_angstrom ??
        wavelength_angstrom.map((wave) => (wave * resolution_kms) / SPEED_OF_LIGHT_KMS.value),
    };
    templates.push(spectrumTemplate(spectrum, { line, reach_kms: settings.reach_kms }));
  }
  return templates;
}
