import { join } from "@std/path";
import type { PlateDescription, PlateSubject } from "../../figures/mod.ts";
import type { SamplePlateSettings } from "../schema/manifest_schema.ts";
import { VERSION } from "../version.ts";
import type { BatchJob } from "./batch_jobs.ts";
import type { GatheredRun } from "./gather_job.ts";
import { isMeant } from "./manifest.ts";
import { jobTarget } from "./run_job.ts";
import { sampleSubject } from "./sample_subject.ts";

/** A file of a sample plate. */
export interface SampleFile {
  /** Its name. */
  readonly name: string;
  /** Its content. */
  readonly data: Uint8Array | string;
}

/**
 * Draws a plate of many targets: a row of panels for each, several targets to a row, further pages
 * where they are too many. Only one page's maps are in memory at a time.
 *
 * @param plate What is shown, and how.
 * @param options Of what.
 * @param options.jobs The targets.
 * @param options.runs What has become of them.
 * @param options.folder Folder of the batch.
 * @returns Files one page after another: figures and captions; none when no target has a map.
 */
export async function* samplePlates(
  plate: SamplePlateSettings,
  options: { jobs: readonly BatchJob[]; runs: readonly GatheredRun[]; folder: string },
): AsyncGenerator<SampleFile> {
  const { jobs, runs, folder } = options;
  const shown = jobs.flatMap((job) => {
    const run = runs.find(({ name, variant }) =>
      name === job.name && variant === (plate.variant ?? null)
    );
    const asked = job.runs.find(({ variant }) => variant === run?.variant);
    return run?.files.includes("map.json") && asked && isMeant(job, plate.targets)
      ? [{ job, run, asked }]
      : [];
  });
  const size = plate.columns * plate.rows;
  const pages = Math.ceil(shown.length / size);
  for (let page = 0; page < pages; page++) {
    const subjects: PlateSubject[] = [];
    for (const { job, run, asked } of shown.slice(page * size, (page + 1) * size)) {
      const target = await jobTarget(job, asked);
      const subject = await sampleSubject(target, { folder: join(folder, run.folder), plate });
      if (subject !== null) subjects.push(subject);
    }
    if (subjects.length === 0) continue;
    yield* drawPage(plate, {
      subjects,
      name: pages === 1 ? plate.name : `${plate.name}-${page + 1}`,
    });
  }
}

async function* drawPage(
  plate: SamplePlateSettings,
  options: { subjects: readonly PlateSubject[]; name: string },
): AsyncGenerator<SampleFile> {
  const { subjects, name } = options;
  // Fonts and renderer are heavy: they load only here.
  const figures = await import("../../figures/mod.ts");
  const { drawPlate, panelKinds, pdfBytes, plateLayout, plateWidth, pngBytes, svgText } = figures;
  const { panels, columns, width } = plate;
  // A last row of few targets would be drawn larger: all rows take the height of a full one.
  const full = Array.from(
    { length: columns },
    (_, i) =>
      panels.map((panel) => {
        const kind = panelKinds[panel];
        const axis = kind.axis?.(subjects[i] ?? subjects[0]!);
        return { kind, named: false, ...(axis === undefined ? {} : { axis }) };
      }),
  ).flat();
  const { rows: [boxes] } = plateLayout([{ panels: full }], plateWidth({ width }));
  const height_mm = boxes![0]!.frame.height / figures.POINTS_PER_MM;
  const rows: PlateDescription["rows"] = Array.from(
    { length: Math.ceil(subjects.length / columns) },
    (_, row) => ({
      height_mm,
      panels: subjects.slice(row * columns, (row + 1) * columns).flatMap((_, i) =>
        panels.map((panel) => ({ panel, subject: row * columns + i }))
      ),
    }),
  );
  const share = plate.shared_scale ? ["map", "trail"] as const : [];
  const { picture, caption } = drawPlate({ width, rows, share }, subjects);
  for (const format of plate.formats) {
    const data = format === "svg"
      ? svgText(picture)
      : format === "png"
      ? await pngBytes(picture)
      : await pdfBytes(picture);
    yield { name: `${name}.${format}`, data };
  }
  yield { name: `${name}.txt`, data: `Written by Millrace ${VERSION}.\n\n${caption}\n` };
}
