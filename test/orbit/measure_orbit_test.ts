import { assert, assertAlmostEquals, assertEquals, assertThrows } from "@std/assert";
import { type Ephemeris, keplerMasses, orbitalPhase } from "@millrace/millrace/binary";
import { InputError } from "@millrace/millrace/errors";
import { randomStream } from "@millrace/millrace/numerics";
import {
  kCorrection,
  measureOrbit,
  type OrbitLine,
  type OrbitMeasurement,
  rephase,
  rotationRatio,
} from "@millrace/millrace/orbit";
import { binary, donorTrail, exposures, modelTrail, SODIUM, withNoise } from "./simulated_trail.ts";

const ephemeris: Ephemeris = {
  period_d: binary.period_d!,
  period_error_d: 4e-6,
  zero: [2460311, 0.12107],
  zero_error_d: 4e-4,
  covariance_d2: 0,
  period_derivative: 0,
  zero_marks: "donor-conjunction",
};

const blue = exposures({ count: 60, per_orbit: 25 });
const red = exposures({ count: 60, per_orbit: 25, reach_kms: 1500, pixel_kms: 25, sigma_kms: 40 });
const disc = modelTrail(
  {
    parts: ["disc", "spot"],
    disc: { equivalent_width_kms: 2500 },
    spot: { equivalent_width_kms: 200 },
  },
  blue,
  { error: 0.05 },
);
const sodium = donorTrail(red, { error: 0.05 });
const components_vacuum_angstrom = SODIUM;

function noisyLines(seed: number): OrbitLine[] {
  const random = randomStream(seed);
  return [
    { trail: withNoise(disc, random) },
    { trail: withNoise(sodium, random), traces: "donor", components_vacuum_angstrom },
  ];
}

/** Every number of a JSON document must be finite: what is not known is null. */
function assertNoNaN(value: unknown, path = "report"): void {
  if (typeof value === "number") assert(Number.isFinite(value), `${path} is ${value}`);
  else if (value && typeof value === "object") {
    for (const [key, part] of Object.entries(value)) assertNoNaN(part, `${path}.${key}`);
  }
}

function codes({ warnings }: OrbitMeasurement): string[] {
  return warnings.map(({ code }) => code);
}

Deno.test("measureOrbit() measures both stars, q and masses of a simulated binary", () => {
  const lines = noisyLines(1);
  const before = structuredClone(lines.map(({ trail }) => trail.flux));
  const found = measureOrbit(lines, {
    ephemeris,
    random: randomStream(1),
    inclination: { deg: { value: 65, error: 1.5 } },
  });
  const { report } = found;
  assertNoNaN(report);
  const { accretor, donor, masses } = report;
  assertAlmostEquals(accretor!.k_kms!, 75, 3 * accretor!.k_error_kms!);
  assertAlmostEquals(accretor!.systemic_kms!, -15, 3 * accretor!.systemic_error_kms!);
  assertAlmostEquals(accretor!.crossing_phase!, 0.5, 3 * accretor!.crossing_phase_error!);
  assertAlmostEquals(donor!.k_kms!, 340, 3 * donor!.k_error_kms!);
  assertEquals(donor!.k_centre_kms, donor!.k_kms);
  assertAlmostEquals(report.mass_ratio!, 75 / 340, 3 * report.mass_ratio_error!);
  const truth = keplerMasses({
    period_d: binary.period_d!,
    k_accretor_kms: 75,
    k_donor_kms: 340,
    inclination_deg: 65,
  });
  const error = (masses.accretor_error_low_msun! + masses.accretor_error_high_msun!) / 2;
  assertAlmostEquals(masses.accretor_msun!, truth.accretor_msun, 2.5 * error);
  const joint = report.joint!;
  assertAlmostEquals(joint.k_accretor_kms, 75, 3 * joint.k_accretor_error_kms);
  assertAlmostEquals(joint.k_donor_kms, 340, 3 * joint.k_donor_error_kms);
  assertAlmostEquals(joint.conjunction_phase, 0, 3 * joint.conjunction_phase_error);
  assert(Math.abs(joint.k_correlation) < 0.2);
  assertEquals(report.eccentricity!.significant, false);
  assertEquals(report.zero_from, "donor");
  assertEquals(report.period_from, "fitted");
  // Two and a half orbits know the period ten times less well than the ephemeris: a prior.
  assert(report.period_error_d! <= ephemeris.period_error_d);
  assertAlmostEquals(report.zero_shift_cycles!, 0, 4 * report.zero_error_d! / report.period_d);
  assertEquals(codes(found), []);
  const methods = report.curves.map(({ line, method }) => `${line} ${method}`);
  assertEquals(methods, [
    "H beta double-gaussian",
    "H beta bisector",
    "H beta centroid",
    "Na I 8190 cross-correlation",
  ]);
  assertEquals(report.curves.filter(({ measured }) => measured).length, 2);
  assertEquals(found.velocities.length, 4 * 60);
  const [row] = found.velocities;
  const phase = orbitalPhase(found.ephemeris, [row!.bjd_day, row!.bjd_fraction]);
  assertAlmostEquals(phase.phase, row!.phase, 1e-6);
  assertEquals(row!.source, "exposure 1");
  assertEquals(lines.map(({ trail }) => trail.flux), before);
});

Deno.test("measureOrbit() gives the same from the same seed", () => {
  const run = () => measureOrbit(noisyLines(2), { ephemeris, random: randomStream(5) }).report;
  assertEquals(run(), run());
});

Deno.test("measureOrbit() finds an unknown period and its zero from the donor", () => {
  // Trails folded on a wrong period tell time all the same.
  const wrong = { ...ephemeris, period_d: 0.06, period_error_d: 0, zero_error_d: 0 };
  const lines = noisyLines(3).map((line) => ({
    ...line,
    trail: rephase(line.trail, { from: ephemeris, to: wrong }),
  }));
  const found = measureOrbit(lines, {
    ephemeris: wrong,
    random: randomStream(3),
    period_range_d: [0.05, 0.3],
  });
  const { report } = found;
  assertAlmostEquals(report.period_d, binary.period_d!, 4 * report.period_error_d!);
  assertEquals(report.zero_from, "donor");
  assertEquals(report.zero_shift_cycles, null);
  const { phase } = orbitalPhase(ephemeris, found.ephemeris.zero);
  assertAlmostEquals(Math.min(phase, 1 - phase), 0, 0.01);
  assertAlmostEquals(report.donor!.k_kms!, 340, 3.5 * report.donor!.k_error_kms!);
  assertAlmostEquals(report.accretor!.k_kms!, 75, 3.5 * report.accretor!.k_error_kms!);
  assert(found.period_search!.candidates[0]!.power > 0.9);
});

Deno.test("measureOrbit() takes the donor's zero when the ephemeris is late, and says by how much", () => {
  const late: Ephemeris = {
    ...ephemeris,
    zero: [2460311, ephemeris.zero[1] + 0.03 * ephemeris.period_d],
    zero_error_d: 0.004,
  };
  const lines = noisyLines(4).map((line) => ({
    ...line,
    trail: rephase(line.trail, { from: ephemeris, to: late }),
  }));
  const { report } = measureOrbit(lines, { ephemeris: late, random: randomStream(4) });
  assertEquals(report.zero_from, "donor");
  assertAlmostEquals(report.zero_shift_cycles!, -0.03, 0.003);
  assertAlmostEquals(report.accretor!.k_kms!, 75, 3.5 * report.accretor!.k_error_kms!);
});

Deno.test("measureOrbit() holds a period that the data cannot improve, and one under two orbits", () => {
  const sharp = { ...ephemeris, period_error_d: 1e-10, zero_error_d: 1e-6 };
  const kept = measureOrbit(noisyLines(5), { ephemeris: sharp, random: randomStream(1) }).report;
  assertEquals(kept.zero_from, "target");
  assertEquals(kept.period_d, sharp.period_d);
  const short = exposures({
    count: 30,
    per_orbit: 25,
    reach_kms: 1500,
    pixel_kms: 25,
    sigma_kms: 40,
  });
  const trail = withNoise(donorTrail(short, { error: 0.05 }), randomStream(6));
  const held = measureOrbit([{ trail, traces: "donor", components_vacuum_angstrom }], {
    ephemeris: { ...ephemeris, zero_error_d: 0.004 },
    random: randomStream(6),
  });
  assertEquals(held.report.period_d, ephemeris.period_d);
  assert(codes(held).includes("period-held"));
});

Deno.test("measureOrbit() without a donor refines the period and keeps the zero's phase", () => {
  const vague = { ...ephemeris, period_error_d: 0 };
  const { report } = measureOrbit([noisyLines(7)[0]!], {
    ephemeris: vague,
    random: randomStream(7),
  });
  assertEquals(report.period_from, "fitted");
  assertAlmostEquals(report.period_d, binary.period_d!, 4 * report.period_error_d!);
  assertEquals(report.zero_from, "target");
  assertEquals(report.donor, null);
  assertEquals(report.mass_ratio, null);
  assert(report.masses.donor_mass_function_msun! > 0);
});

Deno.test("measureOrbit() corrects irradiated emission and shows both ends of an unknown shadow", () => {
  const shape = kCorrection(75 / 340, { light: "irradiated", shadow_deg: 4 });
  const emission = donorTrail(red, { error: 0.05, depth: -0.2, k_kms: 340 * shape });
  const random = randomStream(8);
  const lines: OrbitLine[] = [
    { trail: withNoise(disc, random) },
    { trail: withNoise(emission, random), traces: "donor", components_vacuum_angstrom },
  ];
  const ranged = measureOrbit(lines, { ephemeris, random: randomStream(1) });
  const { donor } = ranged.report;
  assertEquals(donor!.light, "irradiated");
  assertAlmostEquals(donor!.k_kms!, 340 * shape, 3.5 * donor!.k_error_kms!);
  const [low, high] = donor!.k_centre_range_kms!;
  assert(low < 340 && high > 340 && low > donor!.k_kms!);
  assert(donor!.k_centre_error_kms! > (high - low) / Math.sqrt(12));
  assert(codes(ranged).includes("k-correction-range"));
  const known = measureOrbit(lines, { ephemeris, random: randomStream(1), disc_shadow_deg: 4 });
  const centre = known.report.donor!;
  assertEquals(centre.k_centre_range_kms, null);
  assertAlmostEquals(centre.k_centre_kms!, 340, 4 * centre.k_centre_error_kms!);
  assert(known.report.mass_ratio_error! < ranged.report.mass_ratio_error!);
  const alone = measureOrbit([lines[1]!], { ephemeris, random: randomStream(1) });
  assertEquals(alone.report.donor!.k_centre_kms, null);
  assert(codes(alone).includes("k-correction-unknown"));
});

Deno.test("measureOrbit() has q from rotation when the accretor is not seen", () => {
  const v_sin_i_kms = 340 * rotationRatio(75 / 340);
  const turning = withNoise(
    donorTrail(red, { error: 0.02, v_sin_i_kms, depth: 0.3 }),
    randomStream(9),
  );
  const step_kms = 5;
  const flux = Float64Array.from({ length: 601 }, (_, k) => {
    const v = step_kms * (k - 300);
    const line = (at: number) => Math.exp(-0.5 * ((v - at) / 40) ** 2);
    return -0.5 * (line(0) + line((SODIUM[1] / SODIUM[0] - 1) * 299792.458));
  });
  const template = { name: "dwarf", first_kms: -1500, step_kms, flux, sigma_kms: 40 };
  const { report } = measureOrbit([{ trail: turning, traces: "donor", templates: [template] }], {
    ephemeris,
    random: randomStream(9),
  });
  assertEquals(report.masses.mass_ratio_from, ["rotation"]);
  assertEquals(report.donor!.template, "dwarf");
  assertAlmostEquals(report.donor!.light_share!, 0.6, 0.05);
  assertAlmostEquals(report.donor!.v_sin_i_kms!, v_sin_i_kms, 4 * report.donor!.v_sin_i_error_kms!);
  assertAlmostEquals(report.mass_ratio!, 75 / 340, 4 * report.mass_ratio_error!);
});

Deno.test("measureOrbit() reports nulls and reasons where nothing can be measured", () => {
  const random = randomStream(10);
  const noise = donorTrail(red, { error: 0.5, depth: 0 });
  const found = measureOrbit([
    {
      trail: withNoise({
        ...disc,
        error: disc.error.map(() => 2),
        grid: {
          ...disc.grid,
          error: disc.error.map(() => 2),
        },
      }, random),
    },
    { trail: withNoise(noise, random), traces: "donor", components_vacuum_angstrom },
  ], { ephemeris, random });
  const { report } = found;
  assertNoNaN(report);
  assertEquals([report.accretor!.k_kms, report.donor!.k_kms, report.mass_ratio], [
    null,
    null,
    null,
  ]);
  assertEquals(report.masses.accretor_m_sin3i_msun, null);
  assertEquals(found.masses, null);
  assert(codes(found).includes("accretor-not-measured"));
  assert(codes(found).includes("donor-not-measured"));
});

Deno.test("measureOrbit() does not judge K1 by a zero that is an emission line's crossing", () => {
  const found = measureOrbit([noisyLines(11)[0]!], {
    ephemeris: { ...ephemeris, zero_marks: "emission-crossing" },
    random: randomStream(1),
  });
  assertEquals(found.report.accretor!.k_kms, null);
  assert(found.report.accretor!.k_range_kms![0] > 0);
  assert(codes(found).includes("zero-not-conjunction"));
});

Deno.test("measureOrbit() refuses no line, few exposures, one phase, and an empty period range", () => {
  const random = randomStream(1);
  assertThrows(() => measureOrbit([], { ephemeris, random }), InputError, "there must be a line");
  const few = donorTrail(exposures({ count: 4, reach_kms: 1500 }), { error: 0.05 });
  assertThrows(
    () => measureOrbit([{ trail: few, traces: "donor" }], { ephemeris, random }),
    InputError,
    "at least 5 exposures (Na I 8190): current value is 4",
  );
  const once = donorTrail(exposures({ count: 12, per_orbit: 400, reach_kms: 1500 }), {
    error: 0.05,
  });
  assertThrows(
    () => measureOrbit([{ trail: once, traces: "donor" }], { ephemeris, random }),
    InputError,
    "phases must spread over the orbit",
  );
  const blurred = { ...sodium, sampling: { ...red, profile_sigma_kms: new Float64Array(60) } };
  assertThrows(
    () => measureOrbit([{ trail: blurred, traces: "donor" }], { ephemeris, random }),
    InputError,
    "resolution of every exposure must be known",
  );
  const error = assertThrows(
    () => measureOrbit(noisyLines(1), { ephemeris, random, period_range_d: [0.2, 0.1] }),
    InputError,
  );
  assertEquals(error.key, "period_range_d");
});
