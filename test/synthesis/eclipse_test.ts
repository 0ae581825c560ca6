import { assert, assertAlmostEquals, assertEquals, assertGreater, assertLess } from "@std/assert";
import { binaryFrom, lagrangePoints } from "@millrace/millrace/binary";
import { randomStream } from "@millrace/millrace/numerics";
import { isOcculted, type Model, synthesize, synthesizeParts } from "@millrace/millrace/synthesis";
import { donorOccultation } from "../../engine/synthesis/eclipse.ts";
import roche from "../reference/roche.json" with { type: "json" };
import { binary, evenSampling, moments } from "./samplings.ts";

const edge_on = { ...binary, inclination_deg: 82 };

/** Whether the fast path hides one place. */
function hides(
  place: readonly [number, number, number],
  { q, i, phase }: { q: number; i: number; phase: number },
): boolean {
  const share = Float64Array.of(1);
  const [x, y, z] = place;
  const at = { x: Float64Array.of(x), y: Float64Array.of(y), z: Float64Array.of(z) };
  donorOccultation(q, i).hide(phase, at, share);
  return share[0] === 0;
}

Deno.test("isOcculted() and the fast path agree on places all over the accretor's lobe", () => {
  const random = randomStream(1);
  let hidden = 0, differ = 0;
  for (let n = 0; n < 3000; n++) {
    const q = 0.05 + 0.9 * random.uniform();
    const { l1_over_a } = lagrangePoints(q);
    const i = 60 + 30 * random.uniform();
    const phase = -0.12 + 0.24 * random.uniform();
    const radius = 0.95 * l1_over_a * Math.sqrt(random.uniform());
    const azimuth = 2 * Math.PI * random.uniform();
    const z = 0.05 * random.normal();
    const x = radius * Math.cos(azimuth), y = radius * Math.sin(azimuth);
    const slow = isOcculted({ x, y, z }, { mass_ratio: q, inclination_deg: i, phase });
    if (slow) hidden++;
    if (slow !== hides([x, y, z], { q, i, phase })) differ++;
  }
  assertGreater(hidden, 600);
  // The slow path steps over a line of sight that only grazes: none in 3000 at 4000 steps.
  assertEquals(differ, 0);
});

Deno.test("the eclipse path says when nothing can be hidden, and only then", () => {
  for (const [q, i] of [[0.1, 85], [0.5, 75], [1, 62]] as const) {
    const occultation = donorOccultation(q, i);
    for (let phase = -0.5; phase < 0.5; phase += 0.013) {
      const may = occultation.mayHide(phase, 0);
      const { l1_over_a } = lagrangePoints(q);
      for (let azimuth = 0; azimuth < 360; azimuth += 5) {
        const x = 0.9 * l1_over_a * Math.cos(azimuth), y = 0.9 * l1_over_a * Math.sin(azimuth);
        const hidden = hides([x, y, 0], { q, i, phase });
        assert(may || !hidden, `${q} ${i} ${phase}`);
        assert(occultation.mayHide(phase, 0, 0.9 * l1_over_a) || !hidden, `${q} ${i} ${phase}`);
      }
    }
    assertEquals(occultation.mayHide(0.5, 0.1), false);
    assertEquals(occultation.mayHide(0.97, 0.01), true);
  }
});

/**
 * Half width of the accretor's eclipse, computed apart: the Roche potential written out again, the
 * lowest one along the line of sight by golden section, and bisection in phase.
 */
function halfWidth(q: number, inclination_deg: number): number {
  const m1 = 1 / (1 + q), m2 = q / (1 + q);
  const potential = (x: number, y: number, z: number) =>
    -m1 / Math.sqrt(x * x + y * y + z * z) - m2 / Math.sqrt((x - 1) ** 2 + y * y + z * z) -
    ((x - m2) ** 2 + y * y) / 2;
  // L1: the highest point between the stars.
  const golden = (f: (t: number) => number, a: number, b: number) => {
    const g = (Math.sqrt(5) - 1) / 2;
    for (let k = 0; k < 80; k++) {
      const c = b - g * (b - a), d = a + g * (b - a);
      if (f(c) < f(d)) b = d;
      else a = c;
    }
    return (a + b) / 2;
  };
  const l1 = golden((x) => -potential(x, 0, 0), 0.2, 0.95);
  const level = potential(l1, 0, 0);
  const i = inclination_deg * Math.PI / 180;
  const hidden = (phase: number) => {
    const c = Math.cos(2 * Math.PI * phase), s = Math.sin(2 * Math.PI * phase);
    const along = (t: number) =>
      potential(t * Math.sin(i) * c, -t * Math.sin(i) * s, t * Math.cos(i));
    // Only where the line is nearer to the donor than L1 is: elsewhere low means the accretor's lobe.
    const foot = Math.sin(i) * c;
    const half = (1 - l1) ** 2 - (1 - foot * foot);
    if (half <= 0) return false;
    const near = golden(along, foot - Math.sqrt(half), foot + Math.sqrt(half));
    return along(near) < level;
  };
  if (!hidden(0)) return 0;
  let low = 0, high = 0.25;
  for (let k = 0; k < 50; k++) {
    const middle = (low + high) / 2;
    if (hidden(middle)) low = middle;
    else high = middle;
  }
  return low;
}

Deno.test("the accretor's eclipse is as wide as mass ratio and inclination make it", () => {
  // Chanan, Middleditch & Nelson 1976, ApJ 208, 512: the width depends on q and i alone.
  for (const q of [0.05, 0.15, 0.3, 0.6, 1]) {
    for (const i of [75, 80, 85, 90]) {
      const expected = halfWidth(q, i);
      if (expected === 0) {
        assertEquals(hides([0, 0, 0], { q, i, phase: 0 }), false, `${q} ${i}`);
        continue;
      }
      let low = 0, high = 0.25;
      for (let k = 0; k < 40; k++) {
        const middle = (low + high) / 2;
        if (hides([0, 0, 0], { q, i, phase: middle })) low = middle;
        else high = middle;
      }
      // Newton's last step, and a rim that is grazed.
      assertAlmostEquals(low, expected, 1e-6, `q ${q}, i ${i}`);
    }
  }
});

Deno.test("the accretor's eclipse is wider for larger inclination and larger mass ratio", () => {
  assertGreater(halfWidth(0.3, 85), halfWidth(0.3, 80));
  assertGreater(halfWidth(0.6, 85), halfWidth(0.3, 85));
  // Edge-on a sphere of the lobe's mean radius gives half width asin(R)/2π to a few per cent.
  assertAlmostEquals(halfWidth(0.3, 90) / (Math.asin(0.2813) / (2 * Math.PI)), 1, 0.05);
});

Deno.test("the donor's silhouette is the reference's lobe from above, from the side and from behind", () => {
  // reference/roche.json: outline and radii of the exact lobe (numpy, scipy); tolerance 1e-10.
  for (const c of roche.cases) {
    const q = c.q;
    // From above, i = 0, the outline in the orbital plane; the corner at L1 is left out.
    for (const [k, x] of c.outline_x.entries()) {
      if (k === 16) continue;
      const y = c.outline_y[k]!;
      const at = (share: number) => [1 + share * (x - 1), share * y, -0.9] as const;
      assert(hides(at(0.9999), { q, i: 0, phase: 0 }), `${c.id} inside ${k}`);
      assert(!hides(at(1.0001), { q, i: 0, phase: 0 }), `${c.id} outside ${k}`);
    }
    // From the side, phase 0.25, the poles and the back.
    const side = { q, i: 90, phase: 0.25 };
    for (const [radius, dx, dz] of [[c.donor_R_pole, 0, 1], [c.donor_R_back, 1, 0]] as const) {
      assert(hides([1 + 0.9999 * radius * dx, 0.9, 0.9999 * radius * dz], side), c.id);
      assert(!hides([1 + 1.0001 * radius * dx, 0.9, 1.0001 * radius * dz], side), c.id);
    }
  }
});

Deno.test("synthesize() of an eclipsed disc hides the approaching side first", () => {
  const model: Model = { parts: ["disc"], eclipse: { enabled: true } };
  const sampling = evenSampling([-0.045, 0.045, 0.25]);
  const flux = synthesize(model, { binary: edge_on, sampling });
  const [ingress, egress, out] = [0, 1, 2].map((i) => moments(flux, sampling, i));
  assertAlmostEquals(out!.light, 3000, 0.3);
  assertLess(ingress!.light, 0.8 * out!.light);
  // The disc turns with the binary: what comes towards us is covered first, and shows first.
  assertGreater(ingress!.mean, 100);
  assertLess(egress!.mean, -100);
  // The disc is symmetric, and so is its eclipse.
  assertAlmostEquals(ingress!.light, egress!.light, 0.5);
});

Deno.test("synthesize() gives the same disc by tables and by points", () => {
  const sampling = evenSampling([-0.2, 0.15], { phase_width: 0.02 });
  const models: Model[] = [
    { parts: ["disc"] },
    { parts: ["disc"], disc: { optical_depth: "thick" } },
    { parts: ["disc"], disc: { turbulence_kms: 50, turbulence_index: 0.8 } },
    { parts: ["disc"], disc: { two_armed_amplitude: 0.5, two_armed_pitch_deg: 25 } },
    { parts: ["disc"], disc: { core_equivalent_width_kms: 300 } },
    { parts: ["disc"], disc: { inner_radius_over_a: 0.001 } },
  ];
  for (const model of models) {
    const tables = synthesize(model, { binary: edge_on, sampling });
    // An orbit that is barely eccentric goes by points.
    const bent = { ...model, disc: { ...model.disc, eccentricity: 1e-9 } };
    const points = synthesize(bent, { binary: edge_on, sampling });
    const peak = Math.max(...tables);
    let largest = 0;
    for (const [n, value] of tables.entries()) {
      largest = Math.max(largest, Math.abs(value - points[n]!));
    }
    assert(largest > 0, "the two must be different code");
    assertLess(largest, 3e-4 * peak, JSON.stringify(model));
  }
});

Deno.test("synthesize() hides spot, stream and accretor when the donor is before them", () => {
  const model: Model = {
    parts: ["spot", "stream", "donor", "accretor", "outflow"],
    eclipse: { enabled: true },
  };
  const sampling = evenSampling([0, 0.06, 0.3], { half_kms: 6000 });
  const parts = synthesizeParts(model, { binary: edge_on, sampling });
  const light = (part: "spot" | "stream" | "accretor" | "outflow", i: number) =>
    moments(parts.get(part)!, sampling, i).light;
  assertEquals(parts.get("accretor")!.slice(0, 601).every((value) => value === 0), true);
  assertAlmostEquals(light("accretor", 2), 100, 1e-3);
  // The spot is on the side that comes out last.
  assertEquals(parts.get("spot")!.slice(601, 1202).every((value) => value === 0), true);
  assertAlmostEquals(light("accretor", 1), 100, 1e-3);
  assertAlmostEquals(light("spot", 2), 300, 0.01);
  assertAlmostEquals(light("outflow", 0), 500, 0.01);
  assertAlmostEquals(light("stream", 2), 150, 0.01);
});

Deno.test("synthesize() divides by the continuum that the donor leaves", () => {
  const sampling = evenSampling([0, 0.3], { half_kms: 6000 });
  const eclipse = { enabled: true, continuum_accretor: 0.6 };
  const flux = synthesize({ parts: ["outflow"], eclipse }, { binary: edge_on, sampling });
  assertAlmostEquals(moments(flux, sampling, 1).light, 500, 0.01);
  assertAlmostEquals(moments(flux, sampling, 0).light, 500 / 0.4, 0.01);
});

Deno.test("synthesize() hides as much of the disc's continuum as lies behind the donor", () => {
  const disc = { inner_radius_over_a: 0.02, outer_radius_over_a: 0.3 };
  for (const [continuum_index, phase] of [[0, 0.03], [2, 0.03], [3, 0]] as const) {
    const eclipse = { enabled: true, continuum_disc: 0.7, continuum_index };
    const sampling = evenSampling([phase], { half_kms: 6000 });
    const flux = synthesize({ parts: ["outflow"], disc, eclipse }, { binary: edge_on, sampling });
    // By the slow ray test on a grid of its own, even in radius and azimuth.
    let hidden = 0, all = 0;
    for (let r = 0.022; r < 0.3; r += 0.004) {
      for (let azimuth = 2; azimuth < 362; azimuth += 4) {
        const at = {
          x: r * Math.cos(azimuth * Math.PI / 180),
          y: r * Math.sin(azimuth * Math.PI / 180),
        };
        const light = r ** (1 - continuum_index);
        all += light;
        const view = { mass_ratio: binary.mass_ratio, inclination_deg: 82, phase, steps: 300 };
        if (isOcculted(at, view)) hidden += light;
      }
    }
    // Cells of 4 deg and 0.004 a on the shadow's edge: two per cent.
    assertAlmostEquals(500 / moments(flux, sampling, 0).light, 1 - 0.7 * hidden / all, 0.02);
  }
});

Deno.test("synthesize() of an eccentric disc is the sum of its elliptical orbits", () => {
  const e = 0.3, periastron_deg = 40;
  const disc = {
    eccentricity: e,
    periastron_deg,
    inner_radius_over_a: 0.2999,
    emissivity_index: 2,
  };
  const sampling = evenSampling([0, 0.25], { step_kms: 10 });
  const flux = synthesize({ parts: ["disc"], disc }, { binary, sampling });
  // With β = 2 light is even in azimuth: ⟨v⟩ is e V at right angles to periastron, V the speed of
  // the circular orbit of the same angular momentum.
  const speeds = binaryFrom({ k_accretor_kms: 70, k_donor_kms: 320 });
  const sum = speeds.k_accretor_kms + speeds.k_donor_kms;
  const circular = sum * Math.sqrt(320 / 390 / 0.29995 / (1 - e * e));
  const angle = periastron_deg * Math.PI / 180;
  const [vx, vy] = [-e * circular * Math.sin(angle), e * circular * Math.cos(angle) - 70];
  assertAlmostEquals(moments(flux, sampling, 0).mean, -vx, 0.2);
  assertAlmostEquals(moments(flux, sampling, 1).mean, vy, 0.2);
});
