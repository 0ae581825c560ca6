import { InputError } from "../errors.ts";
import type { ChecklistRow, ReportSubject } from "../figures/mod.ts";
import type { OrbitReport } from "../orbit/mod.ts";
import { backProject, fitOfMap, makeProjector, mapFeatures } from "../tomography/mod.ts";
import { gridModel } from "./grid_model.ts";
import { mappedLines } from "./line_of.ts";
import type { MappedLine } from "./map_line.ts";
import { refereeFacts } from "./referee_facts.ts";
import { resultRows } from "./result_rows.ts";
import type { LineSettings } from "./schema/lines_section.ts";
import { openSession, type Session } from "./session.ts";
import { uprightTrail } from "./sign_of.ts";
import type { LineLimit } from "./subject/limit_subject.ts";
import { featureOptions } from "./subject/map_subject.ts";
import { VERSION } from "./version.ts";

/**
 * `report.html`: the page on which a person can touch the data, with results, a referee's checklist,
 * and how it was made. Beside each map stands the back-projection of the same trail.
 *
 * @param session The target at work.
 * @param options What else is known.
 * @param options.limits Detection limits that were computed. @default none
 * @returns The page.
 */
export async function reportHtml(
  session: Session,
  options: { limits?: ReadonlyMap<LineSettings, LineLimit> } = {},
): Promise<string> {
  const { refereeChecklist, reportPage } = await import("../figures/mod.ts");
  const { target } = session;
  const lines = mappedLines(session.lines("write the report"));
  const maps: MappedLine[] = [];
  for (const line of lines) maps.push(await session.map(line));
  const others: MappedLine[][] = lines.map(() => []);
  for (const other of otherMethods(session)) {
    for (const [i, line] of lines.entries()) others[i]!.push(await other.map(line));
  }
  const orbit = await orbitOrNull(session);
  const binary = session.binary();
  const disc = target.settings.model?.disc ?? {};
  const { inputs } = await session.exposures();
  const checklist: ChecklistRow[] = refereeChecklist(
    await refereeFacts(session, {
      mapped: maps[0]!,
      orbit,
      limit: options.limits?.get(lines[0]!) ?? null,
    }),
  );
  return reportPage({
    title: target.title,
    version: VERSION,
    subjects: maps.map((mapped, i) => reportSubject(session, { mapped, others: others[i]! })),
    binary: binary === null ? null : {
      mass_ratio: binary.mass_ratio,
      k_accretor_kms: binary.k_accretor_kms,
      k_donor_kms: binary.k_donor_kms,
      outer_radius_over_a: disc.outer_radius_over_a ?? 0.3,
      inner_radius_over_a: disc.inner_radius_over_a ?? 0.05,
    },
    results: resultRows(maps, orbit),
    checklist,
    made: [
      { name: "Millrace", value: VERSION },
      { name: "settings (SHA-256)", value: target.settings_digest },
      { name: "seed", value: String(target.settings.seed) },
      { name: "files read", value: String(inputs.length) },
      ...target.overrides.map((value) => ({ name: "override", value })),
    ],
    target_text: target.text,
  });
}

async function orbitOrNull(session: Session): Promise<OrbitReport | null> {
  try {
    return (await session.orbit()).report;
  } catch (error) {
    // Too few exposures, say: the page then has no orbit, and the command `orbit` says why.
    if (error instanceof InputError) return null;
    throw error;
  }
}

/** Sessions whose maps are made by the other methods that `[plate]` asks for. */
function otherMethods(session: Session): Session[] {
  const { target, workers, progress, signal } = session;
  const { plate, map } = target.settings;
  return plate.page_methods.filter((method) => method !== map.method).map((method) => {
    // What is for one inversion alone keeps its default; the page shows no errors of pixels.
    const plain = { weight: "chi-square", coordinates: "usual", resamples: 0 } as const;
    const settings = { ...target.settings, map: { ...map, ...plain, method } };
    return openSession({ ...target, settings }, { from: session, workers, progress, signal });
  });
}

function reportSubject(
  session: Session,
  options: { mapped: MappedLine; others: readonly MappedLine[] },
): ReportSubject {
  const { mapped, others } = options;
  const { trail, method } = mapped;
  return {
    line: trail.line,
    systemic_kms: mapped.systemic_kms,
    grid: trail.grid,
    sources: trail.grid.rows === trail.sampling.count ? trail.sources : [],
    maps: [
      ...[mapped, ...others].map((one) => ({
        method: one.method,
        map: one.map,
        model: one.model,
        residual: one.residual,
        reduced_chi_square: one.reduced_chi_square,
        features: one.features,
      })),
      ...(method === "back-projection" ? [] : [backProjected(session, mapped)]),
    ],
  };
}

/** The back-projection of a trail on the map that another method made. */
function backProjected(session: Session, mapped: MappedLine): ReportSubject["maps"][number] {
  const { trail, systemic_kms } = mapped;
  const { pixels, half_width_kms } = mapped.map;
  const shape = { pixels, half_width_kms, systemic_kms };
  const map = backProject(uprightTrail(mapped), shape);
  const model = makeProjector(trail.sampling, shape).forward(map.intensity);
  const { scale, reduced_chi_square } = fitOfMap(trail, { model, scale: "fitted" });
  return {
    method: "back-projection",
    map,
    ...gridModel(map, { trail, systemic_kms, scale }),
    reduced_chi_square,
    features: mapFeatures(map, featureOptions(mapped, session.binary())),
  };
}
