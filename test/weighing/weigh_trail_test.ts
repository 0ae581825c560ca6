import { InputError } from "@millrace/millrace/errors";
import { synthesize } from "@millrace/millrace/synthesis";
import { type WeighedLine, weighPlate, weighRecord, weighTrail } from "@millrace/millrace/weighing";
import { assert, assertEquals, assertGreater, assertLess, assertRejects } from "@std/assert";
import { binary, quick, rms, spotted, WIDTH } from "./made.ts";

const sets = [["disc"], ["disc", "spot"]];
const short = { binary, sets, trials: 20, limit: false } as const;

/** No NaN anywhere, and nothing that JSON cannot hold. */
function isPlain(value: unknown): boolean {
  if (typeof value === "number") return Number.isFinite(value);
  if (Array.isArray(value)) return value.every(isPlain);
  if (value !== null && typeof value === "object") {
    return Object.getPrototypeOf(value) === Object.prototype && Object.values(value).every(isPlain);
  }
  return value === null || ["string", "boolean"].includes(typeof value);
}

/** Tables of 99 trials that repeat the few of a weighing: where gains are far beyond them or among them. */
function asIfMany({ tables }: WeighedLine) {
  const repeated = tables.map((table) => {
    const { statistics } = table;
    const many = Float64Array.from({ length: 99 }, (_, k) => statistics[k % statistics.length]!);
    return { ...table, statistics: many };
  });
  return { trials: 99, tables: repeated };
}

function claimsSpot({ verdict }: WeighedLine): boolean {
  return verdict.preferred.includes("spot");
}

Deno.test("weighTrail() prefers disc and spot when a spot has 10 % of the light", async () => {
  const trail = quick(spotted(0.1), { seed: 1, flicker_rms: 0.04, continuum_error: 0.01 });
  const before = structuredClone(trail);
  const weighed = await weighTrail(trail, { ...short, limit: true });
  assertEquals(trail, before);
  assertEquals(weighed.verdict.preferred, ["disc", "spot"]);
  assertEquals(weighed.verdict.false_alarm?.null_parts, ["disc"]);
  // None of 20 trials is no 1 %: it stays open, and a kept table of 99 settles it.
  assertEquals(weighed.verdict.undecided_with, ["disc"]);
  const [test] = weighed.judgement.part_tests;
  assertEquals([test!.needed, test!.unsettled], [false, true]);
  const settled = await weighTrail(trail, { ...short, ...asIfMany(weighed) });
  assertEquals(settled.verdict.preferred, ["disc", "spot"]);
  assertEquals(settled.verdict.undecided_with, null);
  assert(weighed.warnings.some(({ code }) => code === "too-few-trials"));
  assertGreater(weighed.source!.structures["rim-impact"], 0.5);

  const record = weighRecord(weighed);
  assert(isPlain(record));
  assertEquals(record.hypotheses[0]!.parts, ["disc", "spot"]);
  assertLess(Math.abs(record.hypotheses[0]!.fitted["spot.flux_fraction"]! - 0.1), 0.01);

  const plate = weighPlate(weighed);
  assertEquals(plate.residuals.map(({ parts }) => parts), [["disc", "spot"], ["disc"]]);
  assertGreater(rms(plate.residuals[1]!.residual), rms(plate.residuals[0]!.residual));
  assertEquals(plate.null_distribution?.gains.length, 20);
});

// The short form; the long one is test/bench/weighing_confusion.ts. Seeds 1 and 2.
Deno.test("weighTrail() tells a spot from a stream when either has 1.5 % of the light", async () => {
  const disc = { equivalent_width_kms: 0.985 * WIDTH };
  const own = { equivalent_width_kms: 0.015 * WIDTH };
  const models = [
    { parts: ["disc", "spot"], disc, spot: { ...own, mixing: 0.5, sigma_kms: 60 } },
    { parts: ["disc", "stream"], disc, stream: own },
  ] as const;
  for (const [k, model] of models.entries()) {
    const trail = quick(model, { seed: k + 1, exposures: 16, pixel_kms: 100 });
    const three = { ...short, sets: [...sets, ["disc", "stream"]], trials: 4 };
    const few = await weighTrail(trail, three);
    const { judgement, verdict } = await weighTrail(trail, { ...three, ...asIfMany(few) });
    assertEquals(verdict.preferred, model.parts);
    assertEquals(verdict.undecided_with, null);
    // Residual tests rule the stream out where there is a spot; the spot has to be ruled out by trials.
    assertEquals(judgement.contest?.decided ?? null, model.parts[1] === "spot" ? null : true);
  }
});

Deno.test("weighTrail() gives the same bytes on two workers", async () => {
  const trail = quick(spotted(0.02), { seed: 3, exposures: 20, pixel_kms: 80 });
  const one = await weighTrail(trail, { ...short, seed: 5 });
  const two = await weighTrail(trail, { ...short, seed: 5, workers: 2 });
  assertEquals(JSON.stringify(weighRecord(two)), JSON.stringify(weighRecord(one)));
  const kept = await weighTrail(trail, { ...short, seed: 5, tables: one.tables });
  assertEquals(JSON.stringify(weighRecord(kept)), JSON.stringify(weighRecord(one)));
});

Deno.test("weighTrail() claims no spot when a neighbour or a blend is in the window", async () => {
  for (const [shift_kms, share] of [[1500, 0.08], [-350, 0.15]] as const) {
    const trail = quick(spotted(0), { seed: 1 });
    const { sampling } = trail;
    const velocity_kms = sampling.velocity_kms.map((v) => v - shift_kms);
    const other = synthesize(spotted(0), { binary, sampling: { ...sampling, velocity_kms } });
    const flux = trail.flux.map((value, n) => value + share * other[n]!);
    const weighed = await weighTrail({ ...trail, flux }, short);
    assert(!claimsSpot(weighed));
    assertEquals(weighed.verdict.preferred, []);
    // What the disc cannot explain is noise to the trials: they gain as much.
    const test = weighed.judgement.part_tests.find(({ part }) => part === "spot")!;
    assertGreater(test.calibration.value, 0.05);
  }
});

Deno.test("weighTrail() claims no spot when a thick disc is fitted as a thin one", async () => {
  const trail = quick({
    parts: ["disc"],
    disc: { equivalent_width_kms: WIDTH, optical_depth: "thick" },
  }, { seed: 2, exposures: 20, pixel_kms: 80 });
  const weighed = await weighTrail(trail, short);
  assertEquals(weighed.verdict.preferred, []);
});

Deno.test("weighTrail() widens errors and claims nothing false when 30 % of the orbit is missing", async () => {
  const phases = [0.05, 0.75] as const;
  const part = await weighTrail(quick(spotted(0), { seed: 3, phases, exposures: 21 }), short);
  assert(!claimsSpot(part));
  const error = async (exposures: number, range: readonly [number, number]) => {
    const trail = quick(spotted(0.1), { seed: 4, phases: range, exposures });
    const { comparison } = await weighTrail(trail, { ...short, sets: [["disc", "spot"]] });
    return comparison.hypotheses[0]!.errors["spot.flux_fraction"]!;
  };
  // More than the fewer exposures alone would do: √(30 / 21).
  assertGreater(await error(21, phases) / await error(30, [0, 1]), Math.sqrt(30 / 21));
});

Deno.test("weighTrail() hears an interrupt before its first trial, while sets are fitted", async () => {
  const stop = new AbortController();
  let trials = 0;
  setTimeout(() => stop.abort(), 0);
  await assertRejects(
    () =>
      weighTrail(quick(spotted(0.1)), {
        ...short,
        signal: stop.signal,
        progress: () => trials++,
      }),
    DOMException,
  );
  assertEquals(trials, 0);
});

Deno.test("weighTrail() names the set that is wrong", async () => {
  await assertRejects(
    () => weighTrail(quick(spotted(0)), { ...short, sets: [["disc", "halo"]] }),
    InputError,
    "weigh.sets",
  );
});

Deno.test("weighTrail() leaves donor sets out, or refuses them, when the inclination is unknown", async () => {
  const trail = quick(spotted(0), { exposures: 12, pixel_kms: 100 });
  const flat = { ...binary, inclination_deg: null };
  const weighed = await weighTrail(trail, { binary: flat, trials: 1, limit: false });
  assert(weighed.warnings.some(({ code }) => code === "donor-not-weighed"));
  assertEquals(weighed.comparison.hypotheses.length, 4);
  assert(weighed.warnings.some(({ code }) => code === "noise-assumed-white"));
  await assertRejects(
    () => weighTrail(trail, { ...short, binary: flat, sets: [["disc", "donor"]] }),
    InputError,
    "binary.inclination_deg",
  );
});

Deno.test("weighTrail() weighs a line in absorption with its sign turned", async () => {
  const deep = spotted(0.1);
  // Shallow enough to be an absorption line.
  const shallow = {
    ...deep,
    disc: { equivalent_width_kms: 0.27 * WIDTH },
    spot: { ...deep.spot, equivalent_width_kms: 0.03 * WIDTH },
  };
  const trail = quick(shallow, { seed: 1, exposures: 20, pixel_kms: 80 });
  const upside = { ...trail, flux: trail.flux.map((value) => -value) };
  const up = weighRecord(await weighTrail(trail, short));
  const weighed = await weighTrail(upside, short);
  const down = weighRecord(weighed);
  assertEquals([up.absorption, down.absorption], [false, true]);
  assert(weighed.warnings.some(({ code }) => code === "absorption-turned"));
  assertEquals(down.preferred, up.preferred);
  // The same noise; only what an error of the continuum multiplies is less instead of more light.
  const [left, right] = [down.hypotheses[0]!, up.hypotheses[0]!];
  assertEquals(left.parts, right.parts);
  for (const [path, value] of Object.entries(left.fitted)) {
    const error = right.errors[path] ?? null;
    if (error !== null) assertLess(Math.abs(value! - right.fitted[path]!), 0.5 * error);
  }
});

Deno.test("weighTrail() takes sets without a disc, and any part", async () => {
  const trail = quick(spotted(0.1), { seed: 1, exposures: 16, pixel_kms: 100 });
  const { comparison } = await weighTrail(trail, {
    ...short,
    trials: 2,
    sets: [["spot"], ["outflow"], ["accretor", "disc", "spot"]],
  });
  assertEquals(comparison.hypotheses[0]!.parts, ["disc", "spot", "accretor"]);
});
