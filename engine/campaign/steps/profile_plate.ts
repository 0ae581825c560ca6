import type { PanelEntry, PhaseCurve, PlateSubject } from "../../figures/mod.ts";
import type { Trail, TrailMeasurements } from "../../trail/mod.ts";
import { figureFiles } from "../figure_files.ts";
import type { IdentifiedGroup } from "../identified_groups.ts";
import type { Session } from "../session.ts";
import { curvesOf, spectrumOf } from "../subject/profile_subject.ts";

/** A line with what was measured on it. */
export interface MeasuredLine {
  readonly trail: Trail;
  readonly found: TrailMeasurements;
  /** Whether two peaks would be those of a disc: not of a multiplet, nor of the donor. */
  readonly peaks: boolean;
}

/**
 * Draws `profile-plate`: a row a group of exposures with its mean spectrum, and a row a line with what
 * was measured against phase.
 *
 * @param session The target at work.
 * @param options What is drawn.
 * @param options.groups Mean spectra with the lines seen in them.
 * @param options.measured The lines.
 * @returns Names and contents of the files.
 */
export async function profilePlate(
  session: Session,
  options: {
    groups: readonly IdentifiedGroup[];
    measured: readonly MeasuredLine[];
  },
): Promise<[name: string, data: Uint8Array | string][]> {
  const { groups, measured } = options;
  const { target } = session;
  const { plate } = target.settings;
  const common = {
    title: plate.title ?? target.title,
    systemic_kms: (await session.systemic()).kms,
    method: "",
    binary: session.binary(),
  };
  const { drawPlate, lineLabel } = await import("../../figures/mod.ts");
  const lineOfGroup = (group: number) =>
    (measured.find(({ trail }) => trail.group.includes(group)) ?? measured[0]!).trail.line;
  const rows: { panels: PanelEntry[] }[] = [];
  const subjects: PlateSubject[] = [];
  for (const group of groups) {
    const name = groups.length > 1 ? { name: `group ${group.group + 1}` } : {};
    rows.push({ panels: [{ panel: "spectrum", ...name }] });
    subjects.push({ ...common, line: lineOfGroup(group.group), spectrum: spectrumOf(group) });
  }
  for (const { trail, found, peaks } of measured) {
    const curves = curvesOf(found);
    const name = lineLabel(trail.line.name);
    rows.push({
      panels: (["equivalent-width", "violet-red", "continuum"] as const)
        .filter((panel) => panel !== "violet-red" || peaks && seenOften(curves.violet_red))
        .map((panel) => ({ panel, name })),
    });
    subjects.push({ ...common, line: trail.line, ...curves });
  }
  const drawn = drawPlate({
    width: plate.width,
    letters: true,
    rows: rows.map((row, subject) => ({ ...row, subject })),
  }, subjects);
  return figureFiles(drawn, { name: "profile-plate", plate });
}

/** Whether a curve is worth a panel: two peaks are seen in at least a quarter of the exposures. */
function seenOften(curves: readonly PhaseCurve[]): boolean {
  const values = curves.flatMap(({ value }) => Array.from(value));
  return values.filter(Number.isFinite).length >= Math.max(3, values.length / 4);
}
