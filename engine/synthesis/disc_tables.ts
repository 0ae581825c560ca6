import { smearingRule } from "../tomography/mod.ts";
import { type DiscPattern, discPatterns } from "./disc_patterns.ts";
import { coreRings, type DiscRing, discRings, finestSigma, placesAround } from "./disc_rings.ts";
import { shearMean } from "./disc_shape.ts";
import type { ExposureSamples } from "./emission.ts";
import type { CompleteModel } from "./model_parameters.ts";
import type { Binary } from "../binary/mod.ts";
import {
  addTable,
  blur,
  deposit,
  emptyTable,
  POINTS_PER_SIGMA,
  type VelocityTable,
} from "./velocity_table.ts";

/** Turbulence of one level, and the light seen with it. */
interface Level {
  readonly variance: number;
  readonly table: VelocityTable;
}

/** Light that varies with the phase angle as cos mφ and sin mφ, by turbulence. */
interface Harmonic {
  readonly order: number;
  readonly cosine: Level[];
  readonly sine: Level[];
}

/** Ratio of total variances from one level of turbulence to the next. */
const LEVEL_STEP = 0.05;

/**
 * A circular disc by tables: in the accretor's frame its profile is the same at all phases, apart
 * from patterns that turn with the binary, which need two tables each. Returns the function that
 * adds the disc to an exposure.
 */
export function discTables(
  disc: CompleteModel["disc"],
  { binary, instrument_sigma_kms, shear }: {
    readonly binary: Binary;
    /** Narrowest instrumental profile of any exposure. */
    readonly instrument_sigma_kms: number;
    readonly shear: number;
  },
): (exposure: ExposureSamples) => void {
  const sigma_kms = finestSigma(disc, instrument_sigma_kms);
  const rings = discRings(disc, binary, { sigma_kms });
  const core = coreRings(disc, binary, sigma_kms);
  const step = sigma_kms / POINTS_PER_SIGMA;
  const reach = Math.max(
    ...rings.map((ring) => ring.speed_kms),
    ...core.map((ring) => ring.speed_kms),
  );

  const levelsFor = (): { levels: Level[]; add: LevelAdder } => {
    const levels: Level[] = [];
    const add: LevelAdder = (turbulence, velocity, light) => {
      const total = turbulence ** 2 + instrument_sigma_kms ** 2;
      const x = Math.max(0, Math.log(total / sigma_kms ** 2) / LEVEL_STEP);
      const k = Math.floor(x + 1e-9);
      while (levels.length < k + 2) {
        const variance = sigma_kms ** 2 * Math.exp(LEVEL_STEP * levels.length) -
          instrument_sigma_kms ** 2;
        levels.push({ variance: Math.max(0, variance), table: emptyTable(step, reach) });
      }
      const share = Math.max(
        0,
        (total - instrument_sigma_kms ** 2 - levels[k]!.variance) /
          (levels[k + 1]!.variance - levels[k]!.variance),
      );
      deposit(levels[k]!.table, velocity, light * (1 - share));
      if (share > 1e-9) deposit(levels[k + 1]!.table, velocity, light * share);
    };
    return { levels, add };
  };

  const steady = levelsFor();
  addSteady(rings, { add: steady.add, sigma_kms, shear });
  addSteady(core, { add: steady.add, sigma_kms, shear: 0 });
  const harmonics: Harmonic[] = [{ order: 0, cosine: steady.levels, sine: [] }];
  for (const pattern of discPatterns(disc)) {
    const cosine = levelsFor();
    const sine = levelsFor();
    addPattern(rings, { pattern, cosine: cosine.add, sine: sine.add, sigma_kms, shear });
    harmonics.push({ order: pattern.order, cosine: cosine.levels, sine: sine.levels });
  }

  const blurred = new Map<
    number,
    { order: number; cosine: VelocityTable; sine: VelocityTable | null }[]
  >();
  const tablesAt = (instrument: number) => {
    let tables = blurred.get(instrument);
    if (tables === undefined) {
      tables = harmonics.map(({ order, cosine, sine }) => ({
        order,
        cosine: blurLevels(cosine, instrument),
        sine: order === 0 ? null : blurLevels(sine, instrument),
      }));
      blurred.set(instrument, tables);
    }
    return tables;
  };

  return ({ phase, phase_width, sigma_kms: instrument, velocity, from, to, into }) => {
    const smear = 2 * Math.PI * phase_width * binary.k_accretor_kms / instrument;
    const { offset, weight } = smearingRule(phase_width, smear);
    const tables = tablesAt(instrument);
    for (let q = 0; q < offset.length; q++) {
      const angle = 2 * Math.PI * (phase + offset[q]!);
      const shift = -binary.k_accretor_kms * Math.sin(angle);
      for (const { order, cosine, sine } of tables) {
        const scale = weight[q]! * Math.cos(order * angle);
        addTable(cosine, { velocity, from, to, shift, scale, into });
        if (sine === null) continue;
        const other = weight[q]! * Math.sin(order * angle);
        addTable(sine, { velocity, from, to, shift, scale: other, into });
      }
    }
  };
}

type LevelAdder = (turbulence_kms: number, velocity_kms: number, light: number) => void;

/** Light that does not depend on phase: a quarter of each ring, which the rest mirrors. */
function addSteady(
  rings: readonly DiscRing[],
  { add, sigma_kms, shear }: {
    readonly add: LevelAdder;
    readonly sigma_kms: number;
    readonly shear: number;
  },
): void {
  const mean = shearMean(shear);
  for (const ring of rings) {
    const count = placesAround(ring, { sigma_kms, shear, harmonic: 0 });
    const light = ring.light_kms / count / mean;
    for (let k = 0; k < count / 4; k++) {
      const sine = Math.sin((k + 0.5) * 2 * Math.PI / count);
      const bright = shear === 0
        ? 1
        : Math.sqrt(1 + shear * shear * sine * sine * (1 - sine * sine));
      add(ring.sigma_kms, ring.speed_kms * sine, 2 * light * bright);
      add(ring.sigma_kms, -ring.speed_kms * sine, 2 * light * bright);
    }
  }
}

/** The part of a pattern that is seen with cos mφ and the part with sin mφ. */
function addPattern(
  rings: readonly DiscRing[],
  { pattern, cosine, sine, sigma_kms, shear }: {
    readonly pattern: DiscPattern;
    readonly cosine: LevelAdder;
    readonly sine: LevelAdder;
    readonly sigma_kms: number;
    readonly shear: number;
  },
): void {
  const mean = shearMean(shear);
  for (const ring of rings) {
    const count = placesAround(ring, { sigma_kms, shear, harmonic: pattern.order });
    const light = pattern.amplitude * ring.light_kms / count / mean;
    const crest = pattern.azimuth(ring.radius_over_a);
    for (let k = 0; k < count; k++) {
      const theta = (k + 0.5) * 2 * Math.PI / count;
      const bright = Math.hypot(1, shear * Math.sin(theta) * Math.cos(theta));
      const velocity = ring.speed_kms * Math.sin(theta);
      const angle = pattern.order * (theta - crest);
      cosine(ring.sigma_kms, velocity, light * bright * Math.cos(angle));
      sine(ring.sigma_kms, velocity, light * bright * Math.sin(angle));
    }
  }
}

function blurLevels(levels: readonly Level[], instrument_sigma_kms: number): VelocityTable {
  let sum: VelocityTable | undefined;
  for (const { variance, table } of levels) {
    if (table.values.every((value) => value === 0)) continue;
    const blurred = blur(table, Math.sqrt(variance + instrument_sigma_kms ** 2));
    sum = sum === undefined ? blurred : addCentred(sum, blurred);
  }
  return sum ?? levels[0]!.table;
}

function addCentred(a: VelocityTable, b: VelocityTable): VelocityTable {
  const [wide, narrow] = a.half >= b.half ? [a, b] : [b, a];
  const values = wide.values.slice();
  const offset = wide.half - narrow.half;
  for (let k = 0; k < narrow.values.length; k++) values[k + offset]! += narrow.values[k]!;
  return { step_kms: wide.step_kms, half: wide.half, values };
}
