import { SPEED_OF_LIGHT_KMS } from "../constants.ts";
import { orbitalPhase } from "../binary/mod.ts";
import { InputError } from "../errors.ts";
import type { RandomStream } from "../numerics/mod.ts";
import { midExposureBjd } from "../sky/mod.ts";
import type { RawExposure } from "../spectra/mod.ts";
import { armMiddle, type ArmPixels, armPixels } from "./arm_pixels.ts";
import { continuumInSight } from "./continuum_light.ts";
import { type ExposureCourse, exposureCourses } from "./continuum_course.ts";
import { recordElectrons, resampleShifted } from "./detector.ts";
import { lineLight } from "./line_light.ts";
import type { Model } from "./model.ts";
import type { Arm, Observation } from "./observation.ts";
import { skyLight } from "./sky_light.ts";

/** Options of {@linkcode observe}. */
export interface ObserveOptions {
  /** Source of chance: photons, read noise, cosmic rays, slit, flickering. */
  readonly stream: RandomStream;
}

/**
 * What a telescope would record of a model: raw exposures with topocentric wavelengths and UTC start
 * times, one per exposure and arm. Light is followed from the binary (γ as a factor, phases by the
 * ephemeris at mid-exposure) through the observer's motion, the air, the slit, the optics and the
 * pixels to electrons. Lines keep their own light when the continuum flickers or is modulated, so a
 * trail divided by the continuum sees them vary.
 *
 * @param model Model of every line that has none of its own; its eclipse is the continuum's.
 * @param observation The observation.
 * @param options The source of chance. The same stream and observation give the same exposures.
 * @returns The exposures of the first arm in order of time, then those of the next. Flux is in
 * electrons per Å.
 * @throws {InputError} When the model or the observation cannot be.
 *
 * @example
 * ```ts
 * import { observe, planExposures } from "@millrace/millrace/synthesis";
 * import { binaryFrom } from "@millrace/millrace/binary";
 * import { randomStream } from "@millrace/millrace/numerics";
 * import { lineNamed } from "@millrace/millrace/sky";
 * import { assertEquals } from "@std/assert";
 *
 * const exposures = observe({ parts: ["disc", "spot"] }, {
 *   object: "VX-0417",
 *   target: { ra_deg: 83.1, dec_deg: -12.4 },
 *   site: { latitude_deg: -30.2, longitude_east_deg: -70.7, height_m: 2700 },
 *   binary: binaryFrom({ k_accretor_kms: 70, k_donor_kms: 320 }),
 *   ephemeris: {
 *     period_d: 0.0823714,
 *     period_error_d: 0,
 *     zero: [2460311, 0.62107],
 *     zero_error_d: 0,
 *     covariance_d2: 0,
 *     period_derivative: 0,
 *     zero_marks: "donor-conjunction",
 *   },
 *   exposures: planExposures([2460311, 0.55], { count: 3, exposure_s: 140 }),
 *   arms: [{ first_angstrom: 4780, step_angstrom: 0.4, pixels: 400, resolution_angstrom: 1 }],
 *   lines: [{ line: lineNamed("H beta") }],
 * }, { stream: randomStream(1) });
 * assertEquals(exposures.map(({ flux }) => flux.length), [400, 400, 400]);
 * ```
 */
export function observe(
  model: Model,
  observation: Observation,
  options: ObserveOptions,
): RawExposure[] {
  const { target, site, ephemeris, exposures, arms, variability = {}, instrument = {} } =
    observation;
  requireSome("exposures", exposures.length);
  requireSome("arms", arms.length);
  const moments = exposures.map(({ start, exposure_s }) =>
    midExposureBjd({ date: start, exposure_s }, { target, site })
  );
  const phases = moments.map(({ bjd }) => orbitalPhase(ephemeris, bjd).phase);
  const courses = exposureCourses(exposures, {
    phases,
    variability,
    instrument,
    stream: options.stream,
  });
  const seen = exposures.map(({ exposure_s }, i) => ({
    phase: phases[i]!,
    phase_width: exposure_s / 86400 / ephemeris.period_d,
    observer_factor: moments[i]!.observer_factor,
    course: courses[i]!,
  }));
  return arms.flatMap((arm) => observeArm(model, { observation, arm, seen, ...options }));
}

/** What an exposure sees, whatever the arm. */
interface SeenExposure {
  readonly phase: number;
  readonly phase_width: number;
  readonly observer_factor: number;
  readonly course: ExposureCourse;
}

function observeArm(
  model: Model,
  { observation, arm, seen, stream }: {
    readonly observation: Observation;
    readonly arm: Arm;
    readonly seen: readonly SeenExposure[];
    readonly stream: RandomStream;
  },
): RawExposure[] {
  const { binary, systemic_kms = 0, exposures, lines, instrument = {}, sky = {} } = observation;
  const output = armPixels(arm);
  const shifts = seen.map(() => instrument.resampled === true ? stream.uniform() : 0);
  const detectors = shifts.map((shift) =>
    instrument.resampled === true ? armPixels({ ...arm, pixels: arm.pixels + 1 }, -shift) : output
  );
  const c = SPEED_OF_LIGHT_KMS.value;
  const views = seen.map(({ phase, phase_width, observer_factor, course }, i) => ({
    phase,
    phase_width,
    // A pixel that is labelled too red has true wavelength label / (1 + zero/c).
    factor: observer_factor / (1 + course.zero_kms / c),
    pixels: detectors[i]!,
  }));
  const light = lines.map(({ line, model: own }) =>
    lineLight(own ?? model, {
      line,
      exposures: views,
      binary,
      systemic_kms,
      profile: arm.profile ?? null,
    })
  );
  const in_sight = continuumInSight(model, binary);
  return exposures.map(({ start, exposure_s }, i) => {
    const { phase, phase_width, course } = seen[i]!;
    const pixels = detectors[i]!;
    const { emission, transmission } = skyLight(pixels, arm, sky);
    const shape = continuumShape(pixels, arm, course.tilt);
    const mean =
      electronsPerPixel(arm, { sky: sky.brightness ?? 0, read_noise: instrument.read_noise ?? 5 }) *
      course.transmission;
    const left = in_sight(phase, phase_width);
    const expected = {
      target: new Float64Array(shape.length),
      sky: new Float64Array(shape.length),
    };
    for (let n = 0; n < shape.length; n++) {
      const in_lines = light.reduce((sum, line) => sum + line[i]![n]!, 0);
      expected.target[n] = mean * shape[n]! * transmission[n]! * left *
        (course.continuum + in_lines);
      expected.sky[n] = mean / course.transmission * emission[n]!;
    }
    const read = recordElectrons(expected, {
      instrument,
      exposure_s,
      residual: sky.residual ?? 0,
      stream,
    });
    const { flux, error } = instrument.resampled === true
      ? resampleShifted(read, shifts[i]!)
      : read;
    return {
      object: observation.object,
      ...observation.target,
      site: observation.site,
      wavelength_angstrom: output.wavelength_angstrom.slice(),
      medium: arm.medium ?? "air",
      flux: flux.map((electrons) => electrons / arm.step_angstrom),
      flux_unit: "electron/Angstrom",
      error: instrument.errors === false
        ? null
        : error.map((electrons) => electrons / arm.step_angstrom),
      start,
      exposure_s,
      resolution_angstrom: arm.resolution_angstrom,
    };
  });
}

/** Continuum and slit across the arm, one in the middle. */
function continuumShape(pixels: ArmPixels, arm: Arm, tilt: number): Float64Array {
  const middle = armMiddle(arm);
  const half = arm.step_angstrom * arm.pixels / 2;
  return pixels.wavelength_angstrom.map((wavelength) =>
    (wavelength / middle) ** (arm.continuum_slope ?? 0) *
    Math.max(0, 1 + tilt * (wavelength - middle) / half)
  );
}

/** Electrons of continuum in a pixel that give the arm's signal to noise in a resolution element. */
function electronsPerPixel(
  arm: Arm,
  { sky, read_noise }: { readonly sky: number; readonly read_noise: number },
): number {
  const { signal_to_noise = 50, resolution_angstrom, step_angstrom } = arm;
  if (!(signal_to_noise > 0 && signal_to_noise < 1e5)) {
    throw new InputError({
      action: "simulate exposures",
      rule: "the signal to noise must be positive and below 100000",
      value: signal_to_noise,
      key: "signal_to_noise",
    });
  }
  const pixels = resolution_angstrom / step_angstrom;
  const square = signal_to_noise ** 2;
  // N / √(N (1 + sky) + pixels · read²) = S/N.
  const linear = square * (1 + sky);
  const element = (linear + Math.sqrt(linear ** 2 + 4 * square * pixels * read_noise ** 2)) / 2;
  return element / pixels;
}

function requireSome(what: string, count: number): void {
  if (count > 0) return;
  throw new InputError({
    action: "simulate exposures",
    rule: `there must be ${what}`,
    value: count,
  });
}
