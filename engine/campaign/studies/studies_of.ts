import type { LineSettings } from "../schema/lines_section.ts";
import type { Session } from "../session.ts";
import type { Modulation } from "./modulation_study.ts";
import type { ScanStudy } from "./scan_study.ts";
import type { Sensitivity } from "./sensitivity_study.ts";
import type { Structures } from "./structures_study.ts";

/** The studies of a line that `[map]` asks for; null what it does not. */
export interface StudiedLine {
  /** What sampling and inversion alone do to the map; null for a line of either sign, too. */
  readonly structures: Structures | null;
  /** Maps at χ² 5 % lower and higher. */
  readonly sensitivity: Sensitivity | null;
  /** Emission that varies with the orbit. */
  readonly modulation: Modulation | null;
  /** γ, searched with maps. */
  readonly systemic_scan: ScanStudy | null;
  /** The period, searched with maps. */
  readonly period_scan: ScanStudy | null;
}

/**
 * Makes the studies of a line that `[map]` asks for.
 *
 * @param session The target at work.
 * @param line The line.
 * @returns The studies.
 */
export async function studiesOf(session: Session, line: LineSettings): Promise<StudiedLine> {
  const { target: { settings: { map } }, studies } = session;
  // Parts of a map whose sum may vanish mean nothing.
  const { sign } = await session.map(line);
  return {
    structures: map.structures && sign !== "mixed" ? await studies.structures(line) : null,
    sensitivity: map.sensitivity ? await studies.sensitivity(line) : null,
    modulation: map.modulation ? await studies.modulation(line) : null,
    systemic_scan: map.systemic_scan ? await studies.systemicScan(line) : null,
    period_scan: map.period_scan ? await studies.periodScan(line) : null,
  };
}
