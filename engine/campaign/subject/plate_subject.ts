import type { PanelName, PlateSubject } from "../../figures/mod.ts";
import type { LineSettings } from "../schema/lines_section.ts";
import type { Session } from "../session.ts";
import { limitMap, type LineLimit } from "./limit_subject.ts";
import { halvesSubject, mapSubject, resolutionSubject } from "./map_subject.ts";
import { nightsOf } from "./nights.ts";
import { orbitSubject } from "./orbit_subject.ts";
import { overlaySubject } from "./overlay_subject.ts";
import { phaseCurves, spectrumSubject } from "./profile_subject.ts";
import { studySubject } from "./study_subject.ts";
import { scanByMaps, scanSubject } from "./scan_subject.ts";

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
const WITHOUT_MAP: readonly PanelName[] = [
  ...ORBIT,
  ...CURVES,
  "trail",
  "spectrum",
  "coverage",
  "disc-in-space",
  "stacked-profiles",
];

/**
 * All that the named panels show of one line: only what they need is computed.
 *
 * @param session The target at work.
 * @param options What is shown.
 * @param options.line The line.
 * @param options.panels The panels.
 * @param options.limit Makes the detection limit.
 * @returns The subject of a plate.
 */
export async function plateSubject(
  session: Session,
  options: {
    line: LineSettings;
    panels: readonly PanelName[];
    limit: (line: LineSettings) => Promise<LineLimit>;
  },
): Promise<PlateSubject> {
  const { line, panels } = options;
  const { target } = session;
  const wants = (names: readonly PanelName[]) => panels.some((name) => names.includes(name));
  // On another zero the binary stands turned by an unknown angle: nothing of it is marked.
  const turned = target.settings.orbit.zero_marks === "emission-crossing";
  const binary = turned ? null : session.binary();
  const trail = await session.trail(line);
  const subject: PlateSubject = {
    title: target.settings.plate.title ?? target.title,
    line: trail.line,
    systemic_kms: (await session.systemic()).kms,
    method: target.settings.map.method,
    binary,
    trail,
    ...overlaySubject(target.settings, binary),
    ...(wants(CURVES) ? phaseCurves(trail, { seed: target.settings.seed }) : {}),
    ...(wants(["spectrum"])
      ? { spectrum: spectrumSubject((await session.exposures()).spectra, { trail }) }
      : {}),
    ...(wants(["coverage"]) ? await coverageSubject(session, line) : {}),
    ...(wants(ORBIT)
      ? orbitSubject(await session.orbit(), {
        line: trail.line.name,
        periodogram: wants(["periodogram"]),
      })
      : {}),
  };
  if (panels.every((panel) => WITHOUT_MAP.includes(panel))) return subject;
  const mapped = await session.map(line);
  const { period_d } = await session.ephemeris();
  return {
    ...subject,
    ...mapSubject(mapped),
    ...(wants(HALVES) ? { halves: halvesSubject(mapped, { period_d }) } : {}),
    ...(wants(["systemic-scan"])
      ? target.settings.map.systemic_scan
        ? { systemic_scan: scanByMaps(await session.studies.systemicScan(line)) }
        : scanSubject(mapped)
      : {}),
    ...(wants(["period-scan"])
      ? { period_scan: scanByMaps(await session.studies.periodScan(line)) }
      : {}),
    ...(wants(["resolution"]) ? resolutionSubject(mapped) : {}),
    ...await studySubject(session, { line, mapped, wants }),
    ...(wants(["detection-limit"]) && binary !== null
      ? { detection_limit: limitMap(await options.limit(line), mapped.map) }
      : {}),
  };
}

/** The phases that each night covered. */
async function coverageSubject(
  session: Session,
  line: LineSettings,
): Promise<Pick<PlateSubject, "coverage">> {
  const { sampling } = await session.trail(line);
  const { period_d } = await session.ephemeris();
  const nights = nightsOf(sampling, { period_d });
  const last = Math.max(...nights);
  return {
    coverage: Array.from({ length: last + 1 }, (_, night) => {
      const own = (_: number, i: number) => nights[i] === night;
      return {
        name: `night ${night + 1}`,
        phase: sampling.phase.filter(own),
        phase_width: sampling.phase_width.filter(own),
      };
    }),
  };
}
