import { type CardSpec, encodeFits, type HduSpec, type ImageSpec } from "../fits/mod.ts";
import type { VelocityMap } from "../tomography/mod.ts";
import { fitsHead, hduName } from "./fits_head.ts";
import type { MappedLine } from "./map_line.ts";
import type { StudiedLine } from "./studies/studies_of.ts";
import type { Target } from "./target.ts";
import { velocityAxisCards } from "./trail_fits.ts";

/**
 * `map.fits`: for every line the velocity map and the trail that it predicts.
 *
 * @param target The target.
 * @param options What to write.
 * @param options.maps One map a line.
 * @param options.studies What else was made of each line.
 * @returns The file's bytes.
 */
export function mapFits(
  target: Target,
  options: { maps: readonly MappedLine[]; studies: readonly StudiedLine[] },
): Uint8Array {
  return encodeFits([
    fitsHead(target, {
      content:
        "Velocity maps: normalised flux x km/s per (km/s)^2; the sum times the pixel's area " +
        "is the equivalent width in km/s. Donor at (0, +K2), accretor at (0, -K1).",
    }),
    ...options.maps.flatMap((
      mapped,
      i,
    ) => [...mapHdus(mapped), ...studyHdus(mapped, options.studies[i]!)]),
  ]);
}

/** Cards of a map's axes: linear, km/s, (0, 0) in the middle pixel. */
export function mapAxisCards(map: VelocityMap): CardSpec[] {
  const middle = (map.pixels + 1) / 2;
  const step = (2 * map.half_width_kms) / (map.pixels - 1);
  const axis = (n: 1 | 2, name: string) => [
    { keyword: `CTYPE${n}`, value: name },
    { keyword: `CUNIT${n}`, value: "km/s" },
    { keyword: `CRPIX${n}`, value: middle },
    { keyword: `CRVAL${n}`, value: 0 },
    { keyword: `CDELT${n}`, value: step },
  ];
  return [...axis(1, "VX"), ...axis(2, "VY")];
}

/** What the inversion aimed for, where it aimed for anything. */
function goalCards({ goal, multiplier, method }: MappedLine): CardSpec[] {
  return [
    ...(goal === null ? [] : [
      { keyword: "GOAL", value: goal, comment: "chi-square / samples aimed for" },
    ]),
    ...(multiplier === null ? [] : [{
      keyword: "MULTIPL",
      value: multiplier,
      comment: method === "entropy" ? "multiplier of the entropy" : "weight of the variation",
    }]),
  ];
}

function mapHdus(mapped: MappedLine): HduSpec[] {
  const { map, trail, own_maps, baselines } = mapped;
  const line = trail.line.name;
  return [
    {
      ...mapImage(map, hduName(line)),
      cards: [
        ...mapAxisCards(map),
        { keyword: "LINENAME", value: line },
        { keyword: "METHOD", value: mapped.method },
        { keyword: "SYSTEMIC", value: mapped.systemic_kms, comment: "[km/s] systemic velocity" },
        { keyword: "REDCHISQ", value: mapped.reduced_chi_square, comment: "chi-square / samples" },
        ...goalCards(mapped),
        { keyword: "SIGN", value: mapped.sign, comment: "how the line was inverted" },
        { keyword: "SCALE", value: mapped.scale, comment: "factor on the predicted trail" },
      ],
    },
    {
      kind: "image",
      name: hduName(line, "predicted"),
      shape: [trail.grid.columns, trail.grid.rows],
      data: mapped.model,
      cards: velocityAxisCards(trail),
    },
    ...own_maps.map(({ blend: { name, rest_air_angstrom }, map: own }) => ({
      ...mapImage(own, hduName(line, `with ${name}`)),
      cards: [
        ...mapAxisCards(own),
        { keyword: "LINENAME", value: name, comment: "the map of this blend" },
        { keyword: "RESTAIR", value: rest_air_angstrom * 1e-10, comment: "[m] rest, air" },
      ],
    })),
    ...(baselines === null ? [] : [{
      kind: "table" as const,
      name: hduName(line, "baselines"),
      columns: [
        { name: "PHASE", data: trail.sampling.phase, description: "phase at mid-exposure, cycles" },
        { name: "LEVEL", data: baselines.level, description: "at zero velocity" },
        { name: "SLOPE", data: baselines.slope, description: "per 1000 km/s" },
      ],
    }]),
  ];
}

/** A map as an image HDU, its axes to be added. */
export function mapImage(map: VelocityMap, name: string): ImageSpec {
  return {
    kind: "image",
    name,
    shape: [map.pixels, map.pixels],
    data: map.intensity,
    unit: "s/km",
  };
}

/** Maps beside the map: scatter, structures of the sampling, other χ², modulation. */
function studyHdus(mapped: MappedLine, studies: StudiedLine): HduSpec[] {
  const { structures, sensitivity, modulation } = studies;
  const made: (readonly [name: string, map: VelocityMap | null | undefined])[] = [
    ["spread", mapped.spread],
    ["sampling", structures?.sampling],
    ["closer", sensitivity?.closer.map],
    ["looser", sensitivity?.looser.map],
    ["average", modulation?.average],
    ["cosine", modulation?.cosine],
    ["sine", modulation?.sine],
  ];
  return made.flatMap(([name, map]) =>
    map === null || map === undefined ? [] : [{
      ...mapImage(map, hduName(mapped.trail.line.name, name)),
      cards: [
        ...mapAxisCards(map),
        { keyword: "LINENAME", value: mapped.trail.line.name },
        { keyword: "CONTENT", value: WHAT[name]! },
      ],
    }]
  );
}

const WHAT: Readonly<Record<string, string>> = {
  spread: "one standard deviation among resamples",
  sampling: "what the sampling makes of a round disc",
  closer: "map at a lower chi-square",
  looser: "map at a higher chi-square",
  average: "average over the orbit",
  cosine: "part that goes as cos 2 pi phase",
  sine: "part that goes as sin 2 pi phase",
};
