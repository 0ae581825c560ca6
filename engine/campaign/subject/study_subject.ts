import type { PanelName, PlateSubject } from "../../figures/mod.ts";
import type { MappedLine } from "../map_line.ts";
import type { LineSettings } from "../schema/lines_section.ts";
import type { Session } from "../session.ts";

/**
 * What panels show of the studies of a map: each is made when a panel asks for it, whether `[map]` asks
 * for it or not.
 *
 * @param session The target at work.
 * @param options What is shown.
 * @param options.line The line.
 * @param options.mapped Its map.
 * @param options.wants Whether any of some panels is drawn.
 * @returns Fields of a plate's subject.
 */
export async function studySubject(
  session: Session,
  options: {
    line: LineSettings;
    mapped: MappedLine;
    wants: (names: readonly PanelName[]) => boolean;
  },
): Promise<Partial<PlateSubject>> {
  const { line, mapped, wants } = options;
  const { studies } = session;
  const [own] = mapped.own_maps;
  const sampling = wants(["sampling"]) && mapped.sign !== "mixed"
    ? (await studies.structures(line)).sampling
    : null;
  return {
    ...(wants(["closer-fit", "looser-fit", "sensitivity"])
      ? { sensitivity: await studies.sensitivity(line) }
      : {}),
    ...(wants(["cosine", "sine"]) ? { modulation: await studies.modulation(line) } : {}),
    ...(sampling === null ? {} : { sampling_structures: sampling }),
    ...(own === undefined ? {} : { blend_map: { ...own.blend, map: own.map } }),
  };
}
