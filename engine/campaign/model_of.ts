import { join } from "@std/path";
import { SPEED_OF_LIGHT_KMS } from "../constants.ts";
import { InputError } from "../errors.ts";
import { readBytes } from "../files/mod.ts";
import { median } from "../numerics/mod.ts";
import { airToVacuum, type SpectralLine } from "../sky/mod.ts";
import { findMedium, recordedIn } from "../spectra/mod.ts";
import type { LineTemplate, Model } from "../synthesis/mod.ts";
import type { LineSettings } from "./schema/lines_section.ts";
import { needed, type Target } from "./target.ts";

/**
 * The model of a line: its own where it has one, else `[model]`; a donor's template is read from its
 * file.
 *
 * @param target The target.
 * @param options Which line.
 * @param options.settings The `[[lines]]` table.
 * @param options.line The line.
 * @returns The model.
 * @throws {InputError} When the template cannot be read or does not cover the line.
 */
export async function modelOf(
  target: Target,
  options: { settings: LineSettings; line: SpectralLine },
): Promise<Model> {
  const { settings, line } = options;
  const model = needed(target, {
    value: settings.model ?? target.settings.model,
    key: "model",
    action: `predict the trail of ${line.name}`,
  });
  const file = model.donor?.template as unknown;
  if (typeof file !== "string") return model;
  const template = await readLineTemplate(join(target.folder, file), {
    line,
    reach_kms: settings.reach_kms,
  });
  return { ...model, donor: { ...model.donor, template } };
}

async function readLineTemplate(
  file: string,
  options: { line: SpectralLine; reach_kms: number },
): Promise<LineTemplate> {
  const { line, reach_kms } = options;
  const action = "read template of the donor";
  const { recorded } = recordedIn(await readBytes(file, { action }), { file });
  const [{ axis, flux, facts }] = recorded as [(typeof recorded)[number]];
  const { medium } = findMedium(facts, {
    asked: "auto",
    axis: axis.medium,
    wavelength_angstrom: axis.wavelength_angstrom[0]!,
  });
  const c = SPEED_OF_LIGHT_KMS.value;
  const samples = Array.from(axis.wavelength_angstrom, (wave, i) => ({
    velocity: c * ((medium === "air" ? airToVacuum(wave) : wave) / line.vacuum_angstrom - 1),
    flux: flux[i]!,
  })).filter(({ velocity, flux }) => Math.abs(velocity) <= reach_kms && Number.isFinite(flux))
    .sort((a, b) => a.velocity - b.velocity);
  if (samples.length < 5) {
    throw new InputError({
      action,
      rule: `it must cover ±${reach_kms} km/s about ${line.name}`,
      value: samples.length,
      unit: "pixels there",
      file,
    });
  }
  const level = median(samples.map((sample) => sample.flux));
  return {
    velocity_kms: samples.map(({ velocity }) => velocity),
    depth: samples.map((sample) => 1 - sample.flux / level),
  };
}
