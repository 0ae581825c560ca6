// Inversions as a target file asks for them: each key, what it does to the map, and what map.json says.
import {
  assert,
  assertAlmostEquals,
  assertEquals,
  assertGreater,
  assertLess,
  assertRejects,
  assertStringIncludes,
} from "@std/assert";
import type { MappedLine } from "../../engine/campaign/mod.ts";
import { InputError } from "../../engine/errors.ts";
import type { RawExposure } from "../../engine/spectra/mod.ts";
import { madeExposures } from "../spectra/made_exposures.ts";
import { codes, SECTIONS, SOURCE, writeCampaign } from "./campaign_fixture.ts";

// As sharp as pixels of 50 km/s need, and no sharper: small maps are quick.
const exposures = (making: Parameters<typeof madeExposures>[0] = {}) =>
  madeExposures({ resolution_angstrom: 2.4, ...making });
const night = await writeCampaign([{ raw: exposures() }]);
const base = await night.open();

async function mapOf(set: readonly string[], campaign = night) {
  const session = await campaign.open(["map.pixels=41", ...set]);
  return await session.map(session.lines("test")[0]!);
}

/** The source is 150 km/s wide (σ) in pixels of 50 km/s: its centroid is found to a third of a pixel. */
function assertInPlace({ features: [first] }: Pick<MappedLine, "features">): void {
  assertAlmostEquals(first!.vx_kms, SOURCE.vx_kms, 17);
  assertAlmostEquals(first!.vy_kms, SOURCE.vy_kms, 17);
}

Deno.test("map.method = total-variation meets its goal, and map.json says how", async () => {
  const document = await night.map(['map.method="total-variation"', "map.pixels=41"], base);
  const [map] = document.maps;
  assertEquals([map!.method, map!.converged, map!.sign], ["total-variation", true, "emission"]);
  assertEquals([map!.goal_asked, map!.goal_used], [1, 1]);
  assertInPlace(map!);
  // The tolerance that the solver keeps.
  assertAlmostEquals(map!.reduced_chi_square, 1, 5e-3);
  assertGreater(map!.multiplier!, 0);
  const [feature] = map!.features;
  assert(feature!.vx_error_kms! > 0 && feature!.vx_error_kms! < 25);
});

Deno.test("map.weight chooses by the noise or by exposures left out, without a goal", async () => {
  const by = (weight: string) =>
    mapOf(['map.method="total-variation"', `map.weight=${weight}`, "map.resamples=0"]);
  const [noise, left] = [await by("noise"), await by("cross-validation")];
  for (const map of [noise, left]) {
    assertInPlace(map);
    assertEquals(map.goal, null);
    // 24 exposures of about 130 pixels: χ²/N scatters by 0.025, and the map takes some of it.
    assertAlmostEquals(map.reduced_chi_square, 1, 0.1);
  }
  // What was left out chose one of the weights that are tried about that of the noise.
  const ratio = left.multiplier! / noise.multiplier!;
  assert([0.25, 0.5, 1, 2, 4].some((r) => Math.abs(ratio / r - 1) < 1e-9), `${ratio}`);
});

Deno.test("a goal that no map reaches is raised, and what was asked and used is said", async () => {
  for (const method of ["entropy", "total-variation"]) {
    const set = [`map.method="${method}"`, "map.reduced_chi_square=0.5", "map.pixels=41"];
    const document = await night.map([...set, "map.resamples=2"], base);
    const [map] = document.maps;
    assertEquals(map!.goal_asked, 0.5, method);
    assert(map!.goal_used! > 0.8 && map!.goal_used! < 1.1, `${map!.goal_used}`);
    assertAlmostEquals(map!.reduced_chi_square, map!.goal_used!, 0.02);
    assert(codes(document).includes("goal-raised"), codes(document).join());
    const { text } = document.warnings.find(({ code }) => code === "goal-raised")!;
    assertStringIncludes(text, "0.5");
    assertStringIncludes(text, map!.goal_used!.toPrecision(4));
  }
});

function meanSquare(values: Float64Array): number {
  const kept = values.filter((value) => Number.isFinite(value));
  return kept.reduce((sum, value) => sum + value * value, 0) / kept.length;
}

/** The line as absorption: flux below the continuum by what it was above, less deep. */
function absorbed(raw: readonly RawExposure[]): RawExposure[] {
  return raw.map((e) => {
    const level = e.flux.toSorted()[Math.floor(0.3 * e.flux.length)]!;
    return { ...e, flux: e.flux.map((f) => level - 0.4 * (f - level)) };
  });
}

Deno.test("a line in absorption is mapped with its sign turned by every inversion, and says so", async () => {
  const campaign = await writeCampaign([{ raw: absorbed(exposures()) }]);
  for (const method of ["back-projection", "entropy", "total-variation"]) {
    const map = await mapOf([`map.method="${method}"`, "map.resamples=2"], campaign);
    assertEquals(map.sign, "absorption", method);
    assertInPlace(map);
    assertLess(map.scale, 0);
    assert(map.warnings.some(({ code }) => code === "absorption-turned"));
    // The trail that the map predicts is the absorption that was observed.
    assertLess(Math.min(...map.model), -0.3);
    // Back-projection keeps the instrument's profile in the map and projects it once more.
    assertLess(map.reduced_chi_square, method === "back-projection" ? 2.5 : 1.05);
  }
});

Deno.test("lines.sign = mixed lets entropy follow both signs, and total variation refuses", async () => {
  const campaign = await writeCampaign([{ raw: exposures() }], {
    lines: SECTIONS.lines!.replace("reach_kms", 'sign = "mixed"\nreach_kms'),
  });
  const map = await mapOf(['map.method="entropy"', "map.resamples=2"], campaign);
  assertEquals(map.sign, "mixed");
  assertInPlace(map);
  assertLess(Math.min(...map.map.intensity), 0);
  const error = await assertRejects(
    () => mapOf(['map.method="total-variation"'], campaign),
    InputError,
  );
  assertStringIncludes(error.message, "total variation keeps to one sign");
  assertStringIncludes(error.message, "key lines[0].sign");
});

Deno.test("map.baseline takes out what a slope of the continuum puts into the map", async () => {
  // A tilt by up to 8 % at 2000 km/s, another in each exposure, that the continuum's fit cannot see.
  const raw = exposures({ signal_to_noise: 100 }).map((e, k) => ({
    ...e,
    flux: e.flux.map((f, i) => {
      const off = (e.wavelength_angstrom[i]! - 4861) / 33;
      return Math.abs(off) < 1 ? f * (1 + 0.08 * Math.sin(5 * k) * off) : f;
    }),
  }));
  const campaign = await writeCampaign([{ raw }]);
  for (const method of ["entropy", "total-variation"]) {
    const set = [`map.method="${method}"`, "map.resamples=0"];
    const held = await mapOf(set, campaign),
      free = await mapOf([...set, "map.baseline=true"], campaign);
    assertGreater(held.reduced_chi_square, 2);
    assertLess(free.reduced_chi_square, 1.3);
    assertInPlace(free);
    // The tilt that was put on, 8 % over 33 Å, is found: the continuum's fit saw none of it.
    const slope = free.baselines!.slope[3]!;
    assertAlmostEquals(slope, 0.08 * Math.sin(15) * (1000 / 2036), 0.01);
    // What is shown as left over has no slope any more.
    assertLess(Math.sqrt(meanSquare(free.residual)), 1.1);
    assertGreater(Math.sqrt(meanSquare(held.residual)), 1.3);
  }
});
