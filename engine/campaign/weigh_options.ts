import { phaseError } from "../binary/mod.ts";
import type { GeometryErrors, WeighOptions } from "../weighing/mod.ts";
import { modelOf } from "./model_of.ts";
import type { LineSettings } from "./schema/lines_section.ts";
import type { Session } from "./session.ts";
import { needed } from "./target.ts";

/**
 * What the target file says of weighing one line.
 *
 * @param session The target at work.
 * @param line The line.
 * @returns Options of `weighTrail` and of its parts.
 * @throws {InputError} When `[binary]` does not fix the orbital speeds.
 */
export async function weighOptionsOf(session: Session, line: LineSettings): Promise<WeighOptions> {
  const { target } = session;
  const { weigh, seed, model } = target.settings;
  const trail = await session.trail(line);
  // Without [model] nothing is stated of the parts: their defaults are where the fits start.
  const { parts: _parts, ...known } = (line.model ?? model) === undefined
    ? { parts: [] }
    : await modelOf(target, { settings: line, line: trail.line });
  return {
    binary: needed(target, {
      value: session.binary(),
      key: "binary (any numbers that fix K1 and K2)",
      action: "weigh hypotheses",
    }),
    systemic_kms: (await session.systemic()).kms,
    model: known,
    errors: await geometryErrors(session),
    ...(weigh.sets === undefined ? {} : { sets: weigh.sets }),
    trials: weigh.trials,
    seed,
    workers: session.workers,
    reach_kms: line.reach_kms,
    progress: session.progress,
    signal: session.signal,
  };
}

/** What the target file says of the errors of the geometry. */
async function geometryErrors(session: Session): Promise<GeometryErrors> {
  const { binary, orbit } = session.target.settings;
  const ephemeris = await session.ephemeris();
  const { spectra } = await session.exposures();
  const middle = spectra[Math.floor(spectra.length / 2)]!.mid;
  return {
    k_accretor_kms: binary.k_accretor_error_kms ?? 0,
    k_donor_kms: binary.k_donor_error_kms ?? 0,
    mass_ratio: binary.mass_ratio_error ?? 0,
    systemic_kms: orbit.systemic_error_kms ?? 0,
    phase: phaseError(ephemeris, middle),
  };
}
