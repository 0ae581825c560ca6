import { z } from "zod";
import { observationSection, type ObservationSettings } from "./observation_section.ts";
import type { Model } from "../../synthesis/mod.ts";
import { modelSection } from "./model_section.ts";
import { weighSection, type WeighSettings } from "./weigh_section.ts";
import { text } from "./common.ts";
import { binarySection, type BinarySettings } from "./binary_section.ts";
import { exposuresSection, type ExposuresSettings } from "./exposures_section.ts";
import { type LineSettings, linesSection } from "./lines_section.ts";
import { mapSection, type MapSettings } from "./map_section.ts";
import { orbitSection, type OrbitSettings } from "./orbit_section.ts";
import { plateSection, type PlateSettings } from "./plate_section.ts";
import { skySection, type SkySettings } from "./sky_section.ts";
import { trailSection, type TrailSettings } from "./trail_section.ts";

/** The settings of a target file, defaults filled in. */
export interface TargetSettings {
  /** Version of the target file's format. */
  readonly format: 1;
  /** Title, for plates and pages. */
  readonly title?: string;
  /** Seed of everything with chance in it. */
  readonly seed: number;
  /** `[orbit]`. */
  readonly orbit: OrbitSettings;
  /** `[binary]`. */
  readonly binary: BinarySettings;
  /** `[[exposures]]`. */
  readonly exposures: readonly ExposuresSettings[];
  /** `[sky]`. */
  readonly sky: SkySettings;
  /** `[trail]`. */
  readonly trail: TrailSettings;
  /** `[[lines]]`. */
  readonly lines: readonly LineSettings[];
  /** `[map]`. */
  readonly map: MapSettings;
  /** `[model]`. */
  readonly model?: Model;
  /** `[observation]`. */
  readonly observation?: ObservationSettings;
  /** `[weigh]`. */
  readonly weigh: WeighSettings;
  /** `[plate]`. */
  readonly plate: PlateSettings;
}

/** The whole target file. */
export const targetSchema: z.ZodType<TargetSettings> = z.strictObject({
  format: z.literal(1),
  title: text.optional(),
  seed: z.number().int().gte(0).default(1),
  orbit: orbitSection.prefault({}),
  binary: binarySection.prefault({}),
  exposures: z.array(exposuresSection).default([]),
  sky: skySection.prefault({}),
  trail: trailSection.prefault({}),
  lines: z.array(linesSection).default([]),
  map: mapSection.prefault({}),
  model: modelSection.optional(),
  observation: observationSection.optional(),
  weigh: weighSection.prefault({}),
  plate: plateSection.prefault({}),
});
