import { assert, assertAlmostEquals, assertGreater, assertLess, assertThrows } from "@std/assert";
import { InputError } from "@millrace/millrace/errors";
import { corotationVelocity, donorSurface, lagrangePoints } from "@millrace/millrace/binary";
import { type DonorModel, rotationProfile, synthesize } from "@millrace/millrace/synthesis";
import { binary, evenSampling, moments, orbit, row } from "./samplings.ts";

const phases = orbit(40);
const sampling = evenSampling(phases, { half_kms: 1000, step_kms: 10, sigma_kms: 30 });

function lights(donor: DonorModel): { light: number; mean: number; sigma: number }[] {
  const flux = synthesize({ parts: ["donor"], donor }, { binary, sampling });
  return phases.map((_, i) => moments(flux, sampling, i));
}

/** Amplitude of a light centre's sine, each exposure weighted by its light. */
function amplitude(donor: DonorModel): number {
  let up = 0, down = 0;
  for (const [i, { light, mean }] of lights(donor).entries()) {
    const sine = Math.sin(2 * Math.PI * phases[i]!);
    up += Math.abs(light) * mean * sine;
    down += Math.abs(light) * sine * sine;
  }
  return up / down;
}

Deno.test("synthesize() of the donor has its equivalent width on average over the orbit", () => {
  for (const light of ["irradiated", "photospheric"] as const) {
    const all = lights({ light, equivalent_width_kms: 200 });
    const mean = all.reduce((sum, one) => sum + one.light, 0) / all.length;
    // Means over 40 and over 48 phases of a light curve with a kink.
    assertAlmostEquals(mean, light === "irradiated" ? 200 : -200, 0.2);
  }
});

Deno.test("synthesize() of irradiated emission is brightest at phase 0.5 and centred below K2", () => {
  const all = lights({});
  const brightest = all.reduce((best, one, i) => one.light > all[best]!.light ? i : best, 0);
  assertEquals20(brightest);
  assertLess(all[0]!.light, 0.1 * all[20]!.light);
  const k = amplitude({});
  assertLess(k, 320 - 20);
  // The face nearest the accretor moves as L1 does.
  const { l1_over_a } = lagrangePoints(binary.mass_ratio);
  assertGreater(k, corotationVelocity({ x: l1_over_a, y: 0 }, binary).vy_kms);
});

function assertEquals20(index: number) {
  assert(index === 20, `brightest at phase ${phases[index]}`);
}

Deno.test("synthesize() of absorption is centred near K2, and above it when heating quenches it", () => {
  // Wade & Horne 1988, ApJ 324, 411: emission from the heated face below K2, quenched absorption above.
  const plain = amplitude({ light: "photospheric", gravity_darkening: 0, limb_darkening: 0 });
  // The lobe is a drop with its point inwards: the light centre is a few per cent below K2.
  assertAlmostEquals(plain, 320, 0.04 * 320);
  const quenched = amplitude({ light: "photospheric", quenching: 1, disc_opening_deg: 0 });
  assertGreater(quenched, 330);
  assertGreater(
    quenched,
    amplitude({ light: "photospheric", quenching: 0.5, disc_opening_deg: 0 }),
  );
  assertLess(amplitude({ disc_opening_deg: 0 }), plain);
});

Deno.test("synthesize() of irradiated emission moves outwards as the disc's shadow grows", () => {
  // The shadow takes the equator, where L1 is; the poles are nearer to K2.
  const k = [0, 6, 12].map((disc_opening_deg) => amplitude({ disc_opening_deg }));
  assertGreater(k[1]!, k[0]!);
  assertGreater(k[2]!, k[1]!);
});

Deno.test("synthesize() names a shadow that covers the whole donor", () => {
  const donor = { disc_opening_deg: 60 };
  const error = assertThrows(
    () => synthesize({ parts: ["donor"], donor }, { binary, sampling }),
    InputError,
  );
  assert(error.message.includes("this shadow covers the whole donor"), error.message);
});

Deno.test("synthesize() of the photosphere varies twice an orbit, dimmest at L1 with gravity darkening", () => {
  const even = lights({ light: "photospheric", gravity_darkening: 0, limb_darkening: 0 });
  // Broadside at the quarters.
  assertGreater(-even[10]!.light, -even[0]!.light);
  assertGreater(-even[10]!.light, -even[20]!.light);
  const ratio = (donor: DonorModel) => {
    const all = lights({ light: "photospheric", limb_darkening: 0, ...donor });
    return all[20]!.light / all[0]!.light;
  };
  assertLess(ratio({ gravity_darkening: 0.25 }), ratio({ gravity_darkening: 0 }));
});

Deno.test("synthesize() of a small donor is the rotation kernel of its size", () => {
  // For q -> 0 the lobe still is no sphere: compare variances, with the tiles' own as the reference.
  const donor = {
    light: "photospheric",
    gravity_darkening: 0,
    limb_darkening: 0,
    sigma_kms: 5,
  } as const;
  const [{ sigma }] = [moments(
    synthesize({ parts: ["donor"], donor }, { binary, sampling }),
    sampling,
    0,
  )];
  const tiles = donorSurface(binary.mass_ratio, { rings: 80 });
  const i = 68 * Math.PI / 180;
  let light = 0, first = 0, second = 0;
  for (let k = 0; k < tiles.count; k++) {
    const mu = tiles.normal[3 * k]! * Math.sin(i) + tiles.normal[3 * k + 2]! * Math.cos(i);
    if (mu <= 0) continue;
    const { vx_kms } = corotationVelocity({
      x: tiles.position[3 * k]!,
      y: tiles.position[3 * k + 1]!,
    }, binary);
    light += mu * tiles.area[k]!;
    first -= mu * tiles.area[k]! * vx_kms;
    second += mu * tiles.area[k]! * vx_kms ** 2;
  }
  const spread = second / light - (first / light) ** 2;
  // Tiles of 24 and of 80 rings.
  assertAlmostEquals(sigma, Math.sqrt(spread + 30 ** 2 + 5 ** 2), 0.1);
  // reference/profiles.json rotation: the kernel's variance is v²/4 for ε = 0 (Gray).
  const kernel = [...Array(2000).keys()].reduce((sum, k) => {
    const x = (k + 0.5) / 1000 - 1;
    return sum + x * x * rotationProfile(x, 0) / 1000;
  }, 0);
  assertAlmostEquals(kernel, 0.25, 1e-4);
  const vsini = Math.sqrt(spread / kernel);
  // Seen end-on the lobe spans its radius across, R_side to R_back of reference/roche.json: 0.24 to 0.29 a.
  assertGreater(vsini / 390, 0.23);
  assertLess(vsini / 390, 0.29);
});

Deno.test("synthesize() uses a template as the donor's local profile", () => {
  const velocity_kms = [-60, -50, -40, -30, 30, 40, 50, 60];
  // Two equal lines 90 km/s apart.
  const template = { velocity_kms, depth: [0, 1, 1, 0, 0, 1, 1, 0] };
  const donor = { light: "photospheric", sigma_kms: 0 } as const;
  const fine = evenSampling([0.25], { half_kms: 1200, step_kms: 5, sigma_kms: 8 });
  const single = synthesize({ parts: ["donor"], donor: { ...donor, template: null } }, {
    binary,
    sampling: fine,
  });
  const double = synthesize({ parts: ["donor"], donor: { ...donor, template } }, {
    binary,
    sampling: fine,
  });
  const one = moments(single, fine, 0), two = moments(double, fine, 0);
  assertAlmostEquals(two.light, one.light, 0.02);
  assertAlmostEquals(two.mean, one.mean, 0.05);
  // Piecewise linear: variance of two trapezia at ±45 is 45² + (15² + 5²)/6.
  assertAlmostEquals(two.sigma ** 2 - one.sigma ** 2, 45 ** 2 + 250 / 6, 0.02 * 45 ** 2);
});

Deno.test("synthesize() refuses a template that is none", () => {
  const bad = (velocity_kms: number[], depth: number[]) =>
    assertThrows(
      () =>
        synthesize({ parts: ["donor"], donor: { template: { velocity_kms, depth } } }, {
          binary,
          sampling,
        }),
      InputError,
    ).message;
  assert(bad([0, 0], [1, 1]).includes("velocities must increase"));
  assert(bad([0, 10], [1]).includes("depths be numbers"));
  assert(bad([0], [1]).includes("at least two"));
  assert(bad([0, 10], [0, 0]).includes("must not add up to nothing"));
});

Deno.test("synthesize() asks for the inclination that the donor needs", () => {
  const unknown = { ...binary, inclination_deg: null };
  assertThrows(
    () => synthesize({ parts: ["donor"] }, { binary: unknown, sampling }),
    InputError,
    "this model needs an inclination from 0 to 90 deg: current value is null (key binary.inclination_deg)",
  );
});

Deno.test("synthesize() of the donor agrees for coarse and fine tiles", () => {
  const donor = { sigma_kms: 20 };
  const model = { parts: ["donor"], donor } as const;
  // A second exposure with a sharp profile makes the tiles of both finer.
  const lone = evenSampling([0.4], { half_kms: 1000, step_kms: 10, sigma_kms: 40 });
  const pair = evenSampling([0.4, 0.6], { half_kms: 1000, step_kms: 10, sigma_kms: 40 });
  pair.profile_sigma_kms[1] = 5;
  const coarse = row(synthesize(model, { binary, sampling: lone }), lone, 0);
  const fine = row(synthesize(model, { binary, sampling: pair }), pair, 0);
  const peak = Math.max(...fine);
  // The shadow's edge falls on tiles: one per cent of the peak.
  for (const [n, value] of coarse.entries()) assertAlmostEquals(value, fine[n]!, 0.01 * peak);
});

/** Light (relative) and mean velocity of the donor by a plain sum over fine tiles. */
function plainDonor(
  donor: Required<Pick<DonorModel, "light" | "limb_darkening" | "gravity_darkening">>,
  phase: number,
) {
  const tiles = donorSurface(binary.mass_ratio, { rings: 100 });
  const i = 68 * Math.PI / 180, turn = 2 * Math.PI * phase;
  const n = [Math.sin(i) * Math.cos(turn), -Math.sin(i) * Math.sin(turn), Math.cos(i)];
  let light = 0, first = 0;
  for (let k = 0; k < tiles.count; k++) {
    const [x, y, z] = [0, 1, 2].map((axis) => tiles.position[3 * k + axis]!) as [
      number,
      number,
      number,
    ];
    const normal = [0, 1, 2].map((axis) => tiles.normal[3 * k + axis]!);
    const mu = normal.reduce((sum, value, axis) => sum + value * n[axis]!, 0);
    if (mu <= 0) continue;
    const distance = Math.hypot(x, y, z);
    const incidence = -(x * normal[0]! + y * normal[1]! + z * normal[2]!) / distance;
    const heat = Math.max(0, incidence) / distance ** 2;
    const own = donor.light === "irradiated"
      ? heat
      : tiles.gravity[k]! ** (4 * donor.gravity_darkening);
    const e = donor.limb_darkening;
    const share = own * tiles.area[k]! * mu * (1 - e + e * mu);
    // 390 km/s × (−y, x − q/(1+q)), seen at the phase.
    const velocity = 390 * (y * Math.cos(turn) + (x - 70 / 390) * Math.sin(turn));
    light += share;
    first += share * velocity;
  }
  return { light, mean: first / light };
}

Deno.test("synthesize() of the donor is the sum of its tiles, darkened at limb and by gravity", () => {
  const places = [0.1, 0.25, 0.45, 0.8];
  const some = evenSampling(places, { half_kms: 1000, step_kms: 10, sigma_kms: 30 });
  for (
    const donor of [
      { light: "irradiated", limb_darkening: 0.8, gravity_darkening: 0.08 },
      { light: "photospheric", limb_darkening: 0, gravity_darkening: 0.25 },
      { light: "photospheric", limb_darkening: 0.8, gravity_darkening: 0.25 },
    ] as const
  ) {
    const shadowless = { ...donor, disc_opening_deg: 0 };
    const flux = synthesize({ parts: ["donor"], donor: shadowless }, { binary, sampling: some });
    const reference = plainDonor(donor, places[1]!), first = moments(flux, some, 1);
    for (const [k, phase] of places.entries()) {
      const plain = plainDonor(donor, phase), fast = moments(flux, some, k);
      // Tiles of 24 and of 100 rings: the horizon falls on whole tiles.
      const ratio = fast.light / first.light / (plain.light / reference.light);
      assertAlmostEquals(ratio, 1, 0.01, `${donor.light} at ${phase}`);
      assertAlmostEquals(fast.mean, plain.mean, 1, `${donor.light} at ${phase}`);
    }
  }
});
