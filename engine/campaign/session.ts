import type { Binary, Ephemeris } from "../binary/mod.ts";
import type { Trail } from "../trail/mod.ts";
import { currentTaskStore, type Progress } from "../workers/mod.ts";
import { gather, workBeside } from "./beside.ts";
import { binaryOf } from "./binary_of.ts";
import { ephemerisOf, hasHeliocentricZero } from "./ephemeris_of.ts";
import { inFile } from "./in_file.ts";
import { linesOf, linesTogether, mappedLines } from "./line_of.ts";
import { mapLine, type MappedLine } from "./map_line.ts";
import { pause } from "./pause.ts";
import { readTargetExposures, type TargetExposures } from "./read_target_exposures.ts";
import type { LineSettings } from "./schema/lines_section.ts";
import type { Target } from "./target.ts";
import { measureTargetOrbit, type TargetOrbit } from "./steps/run_orbit.ts";
import { signOf } from "./sign_of.ts";
import { type Modulation, modulationStudy } from "./studies/modulation_study.ts";
import { periodStudy, type ScanStudy, systemicStudy } from "./studies/scan_study.ts";
import { type Sensitivity, sensitivityStudy } from "./studies/sensitivity_study.ts";
import { type Structures, structuresStudy } from "./studies/structures_study.ts";
import { systemicOf, type SystemicVelocity } from "./systemic_of.ts";
import { type LineTests, testLine } from "./test_line.ts";
import { trailOf } from "./trail_of.ts";

/** What is asked of a line's map beside the map itself. */
export interface MapStudies {
  /** What sampling and inversion alone do to it. */
  readonly structures: (line: LineSettings) => Promise<Structures>;
  /** Maps at χ² a little lower and higher. */
  readonly sensitivity: (line: LineSettings) => Promise<Sensitivity>;
  /** Emission that varies with the orbit. */
  readonly modulation: (line: LineSettings) => Promise<Modulation>;
  /** γ, searched with maps. */
  readonly systemicScan: (line: LineSettings) => Promise<ScanStudy>;
  /** The period, searched with maps. */
  readonly periodScan: (line: LineSettings) => Promise<ScanStudy>;
}

/** What a session has read, as plain data that another thread can go on from. */
export interface GatheredTarget {
  /** The exposures. */
  readonly exposures: TargetExposures;
  /** Trails by the name of their line. */
  readonly trails: ReadonlyMap<string, Trail>;
}

/**
 * One target at work: what several commands need is made once, when it is first asked for.
 */
export interface Session {
  /** The target. */
  readonly target: Target;
  /** The exposures. */
  readonly exposures: () => Promise<TargetExposures>;
  /** The ephemeris. */
  readonly ephemeris: () => Promise<Ephemeris>;
  /** The binary; null when the target file does not fix it. */
  readonly binary: () => Binary | null;
  /** The trail of a line. */
  readonly trail: (line: LineSettings) => Promise<Trail>;
  /** The map of a line. */
  readonly map: (line: LineSettings) => Promise<MappedLine>;
  /** What is asked of a line's map beside the map itself. */
  readonly studies: MapStudies;
  /** Whether any map can have made a line's trail. */
  readonly anyMap: (line: LineSettings) => Promise<LineTests>;
  /** The orbit as measured. */
  readonly orbit: () => Promise<TargetOrbit>;
  /** The lines, at least one. */
  readonly lines: (action: string) => readonly LineSettings[];
  /** Systemic velocity, km/s, with the warning where it had to be assumed. */
  readonly systemic: () => Promise<SystemicVelocity>;
  /** Number of workers to use. */
  readonly workers: number;
  /** Told how far the work has come. */
  readonly progress?: Progress;
  /** Aborts the work. */
  readonly signal?: AbortSignal;
}

/**
 * Opens a session on a target.
 *
 * @param target The target.
 * @param options How to work.
 * @param options.workers Number of workers. @default 1
 * @param options.force Whether maps are made in spite of a large gap in phase. @default false
 * @param options.keep Gives a costly result that was kept under a name, or makes and keeps it.
 * @default Makes it
 * @param options.from A session on the same target that differs in how maps are made alone: its
 * exposures, trails and tests are taken.
 * @param options.gathered What was read of the target before, on another thread.
 * @param options.progress Told how far the work has come.
 * @param options.signal Aborts the work.
 * @returns The session.
 */
export function openSession(
  target: Target,
  options: {
    workers?: number;
    force?: boolean;
    keep?: <T>(name: string, make: () => Promise<T>) => Promise<T>;
    from?: Session;
    gathered?: GatheredTarget;
    progress?: Progress;
    signal?: AbortSignal;
  } = {},
): Session {
  const { workers = 1, force = false, keep = (_name, make) => make(), progress, signal } = options;
  const { from, gathered } = options;
  const exposures = from?.exposures ??
    once(async () =>
      gathered?.exposures ?? await readTargetExposures(target, { progress, signal })
    );
  const ephemeris = once(async () => ephemerisOf(target, { direction: await directionOf() }));
  const directionOf = async () => {
    const { sky: { ra_deg, dec_deg }, exposures: groups } = target.settings;
    if (ra_deg !== undefined && dec_deg !== undefined) return { ra_deg, dec_deg };
    return groups.length > 0 && hasHeliocentricZero(target) ? (await exposures()).direction : null;
  };
  const binary = () => binaryOf(target);
  const there = ({ name }: LineSettings) =>
    from!.target.settings.lines.find((line) => line.name === name)!;
  const trail = from === undefined
    ? perLine((line) => makeTrail(line))
    : (line: LineSettings) => from.trail(there(line));
  const makeTrail = async (line: LineSettings) => {
    const known = gathered?.trails.get(line.name);
    if (known !== undefined) return known;
    const [{ spectra, photometry }, folded] = [await exposures(), await ephemeris()];
    await pause(signal);
    return trailOf(spectra, { target, line, ephemeris: folded, photometry });
  };
  const systemic = from?.systemic ??
    once(() =>
      systemicOf(target, () => trail(mappedLines(linesOf(target, { action: "find γ" }))[0]!))
    );
  const map = perLine((line) =>
    keep(`map of ${line.name}`, () => placed(target, () => makeMap(line)))
  );
  const makeMap = async (line: LineSettings) => {
    const made = await trail(line);
    const together: { trail: Trail; ratio: number | "measured" }[] = [];
    for (const { line: other, ratio } of linesTogether(line, { target })) {
      together.push({ trail: await trail(other), ratio });
    }
    await pause(signal);
    return mapLine(made, {
      target,
      together,
      systemic: await systemic(),
      epoch: (await exposures()).spectra[0]!.mid,
      workers,
      binary: binary(),
      ephemeris: await ephemeris(),
      force,
      stream: 1000 * target.settings.lines.indexOf(line),
      progress,
      signal,
    });
  };
  // What shares its tasks with other processes goes through the same work as they do.
  const threads = currentTaskStore() === undefined ? workers : 1;
  const beside = workBeside({ workers: threads, what: "lines tested", progress, signal });
  const testAll = once(async () => {
    if (threads < 2) return;
    const gas = mappedLines(target.settings.lines);
    const made = await Promise.allSettled(gas.map(trail));
    const tested = gas.filter((_, i) => made[i]!.status === "fulfilled");
    if (tested.length < 2) return;
    beside.start(
      tested.map(({ name }) => ({ name, target, line: name, force, work: "tests" })),
      await gather({ exposures, trail }, tested),
    );
  });
  const anyMap = from === undefined
    ? perLine((line) =>
      keep(`tests of ${line.name}`, () =>
        placed(target, async () => {
          await testAll();
          return await beside.take(line.name, () => makeTests(line));
        }))
    )
    : (line: LineSettings) => from.anyMap(there(line));
  const makeTests = async (line: LineSettings) => {
    const made = await trail(line);
    const { kms } = await systemic();
    await pause(signal);
    return testLine(made, {
      sign: signOf(made, { target }),
      blended: line.blends.length > 0,
      systemic_kms: kms,
      half_width_kms: target.settings.map.half_width_kms,
      seed: target.settings.seed,
      force,
      progress,
      signal,
    });
  };
  const study = <T>(name: string, make: (mapped: MappedLine) => Promise<T>) =>
    perLine((line) =>
      keep(`${name} of ${line.name}`, () => placed(target, async () => make(await map(line))))
    );
  const studies: MapStudies = {
    structures: study("structures", (mapped) => structuresStudy(mapped, { signal })),
    sensitivity: study("sensitivity", (mapped) => sensitivityStudy(mapped, { signal })),
    modulation: study("modulation", (mapped) => modulationStudy(mapped, { target, signal })),
    systemicScan: study(
      "systemic scan",
      async (mapped) =>
        systemicStudy(mapped, { target, error_kms: (await systemic()).error_kms, signal }),
    ),
    periodScan: study("period scan", async (mapped) => {
      const { period_d, period_error_d } = await ephemeris();
      return periodStudy(mapped, { target, period_d, error_d: period_error_d, signal });
    }),
  };
  const session: Session = {
    target,
    exposures,
    ephemeris,
    binary,
    trail,
    map,
    studies,
    anyMap,
    orbit: once(() => keep("orbit", () => measureTargetOrbit(session))),
    lines: (action) => linesOf(target, { action }),
    systemic,
    workers,
    progress,
    signal,
  };
  return session;
}

/** Says of what goes wrong where in the target file it stands. */
async function placed<T>(target: Target, make: () => T | Promise<T>): Promise<T> {
  try {
    return await make();
  } catch (error) {
    throw inFile(target, error);
  }
}

function once<T>(make: () => Promise<T>): () => Promise<T> {
  let made: Promise<T> | undefined;
  return () => made ??= make();
}

function perLine<T>(make: (line: LineSettings) => Promise<T>): (line: LineSettings) => Promise<T> {
  const made = new Map<LineSettings, Promise<T>>();
  return (line) => {
    const known = made.get(line) ?? make(line);
    made.set(line, known);
    return known;
  };
}
