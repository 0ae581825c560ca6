import { join } from "@std/path";
import { InputError } from "../../errors.ts";
import type { PlateSubject } from "../../figures/mod.ts";
import { findHdu, type FitsFile, parseFits } from "../../fits/mod.ts";
import { readBytes } from "../../files/mod.ts";
import { binaryOf } from "../binary_of.ts";
import { hduName } from "../fits_head.ts";
import { lineOf } from "../line_of.ts";
import type { SamplePlateSettings } from "../schema/manifest_schema.ts";
import type { MapDocument } from "../steps/run_map.ts";
import type { Target } from "../target.ts";

/**
 * What a sample plate shows of one target, read from its `map.fits`, `map.json` and, where the
 * panels ask for it, `trail.fits`: nothing is computed again.
 *
 * @param target The target.
 * @param options Which of it.
 * @param options.folder Folder of its outputs.
 * @param options.plate The sample plate.
 * @returns The subject; null when the target has no map of the line.
 * @throws {InputError} When a file that the panels need is missing.
 */
export async function sampleSubject(
  target: Target,
  options: { folder: string; plate: SamplePlateSettings },
): Promise<PlateSubject | null> {
  const { folder, plate } = options;
  const document: MapDocument = JSON.parse(await Deno.readTextFile(join(folder, "map.json")));
  const summary = plate.line === undefined
    ? document.maps[0]
    : document.maps.find(({ line }) => line === plate.line);
  const settings = target.settings.lines.find(({ name }) => name === summary?.line);
  if (summary === undefined || settings === undefined) return null;
  const fits = await openFits(join(folder, "map.fits"));
  const name = hduName(summary.line);
  const { pixels, half_width_kms } = summary;
  return {
    title: target.title,
    line: lineOf(settings, { target }),
    systemic_kms: summary.systemic_kms,
    method: summary.method,
    reduced_chi_square: summary.reduced_chi_square,
    binary: binaryOf(target),
    map: { pixels, half_width_kms, intensity: findHdu(fits, name).image().data },
    features: summary.features,
    ...(plate.panels.some((panel) => panel !== "map" && panel !== "asymmetric")
      ? trailPart(await trailFile(folder, plate), { fits, line: summary.line })
      : {}),
  };
}

async function openFits(path: string): Promise<FitsFile> {
  return parseFits(await readBytes(path, { action: "draw the sample plate" }), { file: path });
}

async function trailFile(folder: string, plate: SamplePlateSettings): Promise<FitsFile> {
  const path = join(folder, "trail.fits");
  try {
    return await openFits(path);
  } catch (error) {
    if (!(error instanceof InputError)) throw error;
    throw new InputError({
      action: `draw the sample plate ${plate.name}`,
      rule: "panels of the trail need trail.fits",
      value: path,
      remedy: "add trail to the commands",
    });
  }
}

/** Trail, model and residual as `trail.fits` and `map.fits` have them. */
function trailPart(
  trail: FitsFile,
  options: { fits: FitsFile; line: string },
): Pick<PlateSubject, "trail" | "model" | "residual"> {
  const { fits, line } = options;
  const flux = findHdu(trail, hduName(line));
  const rows = findHdu(trail, hduName(line, "rows"));
  const exposures = findHdu(trail, hduName(line, "exposures"));
  const image = flux.image();
  const [columns, count] = image.shape as [number, number];
  const error = findHdu(trail, hduName(line, "error")).image().data;
  const model = findHdu(fits, hduName(line, "predicted")).image().data;
  const number = (keyword: string) => Number(flux.header.card(keyword)?.value);
  return {
    trail: {
      grid: {
        rows: count,
        columns,
        first_kms: number("CRVAL1"),
        step_kms: number("CDELT1"),
        phase: rows.numbers("PHASE"),
        phase_width: rows.numbers("PHASE_WIDTH"),
        flux: image.data,
        error: error.map((value) => (Number.isNaN(value) ? Infinity : value)),
      },
      sampling: {
        count: exposures.rows,
        phase: exposures.numbers("PHASE"),
        phase_width: exposures.numbers("PHASE_WIDTH"),
      },
    },
    model,
    residual: image.data.map((value, i) => (value - model[i]!) / error[i]!),
  };
}
