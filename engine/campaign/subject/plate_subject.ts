import type { PanelName, PlateSubject } from "../../figures/mod.ts";
import type { LineSettings } from "../schema/lines_section.ts";
import type { Session } from "../session.ts";
import { halvesSubject, mapSubject } from "./map_subject.ts";
import { orbitSubject } from "./orbit_subject.ts";
import { phaseCurves, spectrumSubject } from "./profile_subject.ts";

const ORBIT: readonly PanelName[] = [
  "velocity-curve",
  "diagnostic",
  "light-centre",
  "periodogram",
  "mass-plane",
  "inclination-plane",
];
const CURVES: readonly PanelName[] = ["equivalent-width", "violet-red", "continuum"];
const HALVES: readonly PanelName[] = ["half-one", "half-two"];

/**
 * All that the named panels show of one line: only what they need is computed.
 *
 * @param session The target at work.
 * @param options What is shown.
 * @param options.line The line.
 * @param options.panels The panels.
 * @returns The subject of a plate.
 */
export async function plateSubject(
  session: Session,
  options: { line: LineSettings; panels: readonly PanelName[] },
): Promise<PlateSubject> {
  const { line, panels } = options;
  const { target } = session;
  const wants = (names: readonly PanelName[]) => panels.some((name) => names.includes(name));
  const mapped = await session.map(line);
  const { trail } = mapped;
  return {
    title: target.settings.plate.title ?? target.title,
    line: trail.line,
    systemic_kms: mapped.systemic_kms,
    method: mapped.method,
    binary: session.binary(),
    trail,
    ...mapSubject(mapped),
    ...(wants(HALVES) ? { halves: halvesSubject(mapped) } : {}),
    ...(wants(CURVES) ? phaseCurves(trail, { seed: target.settings.seed }) : {}),
    ...(wants(["spectrum"])
      ? { spectrum: spectrumSubject((await session.exposures()).spectra, { trail }) }
      : {}),
    ...(wants(["coverage"]) ? { coverage: [{ name: trail.line.name, ...trail.sampling }] } : {}),
    ...(wants(ORBIT) ? orbitSubject(await session.orbit(), { line: trail.line.name }) : {}),
  };
}
