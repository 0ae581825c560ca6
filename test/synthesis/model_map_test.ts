import { assertAlmostEquals, assertEquals, assertLess } from "@std/assert";
import { makeProjector } from "@millrace/millrace/tomography";
import { type Model, modelMap, synthesize } from "@millrace/millrace/synthesis";
import { binary, evenSampling, orbit } from "./samplings.ts";

const shape = { pixels: 241, half_width_kms: 2400 };

/** Largest difference between a model's trail and its map's, over the trail's peak. */
function disagreement(model: Model, systemic_kms = 0): number {
  const sampling = evenSampling(orbit(12), { phase_width: 0.02, middle_kms: systemic_kms });
  const trail = synthesize(model, { binary, sampling, systemic_kms });
  const { map } = modelMap(model, { binary, ...shape });
  const projected = makeProjector(sampling, { ...shape, systemic_kms }).forward(map.intensity);
  let largest = 0, peak = 0;
  for (const [n, value] of trail.entries()) {
    largest = Math.max(largest, Math.abs(value - projected[n]!));
    peak = Math.max(peak, Math.abs(value));
  }
  return largest / peak;
}

Deno.test("modelMap() makes the trail of synthesize() through the projector", () => {
  // A disc is averaged over pixels of 20 km/s: that adds 20²/12 to a variance of 40², 2 % of the
  // variance, so up to 1 % where the profile is as sharp as the instrument.
  assertLess(disagreement({ parts: ["disc"] }, 60), 0.005);
  assertLess(
    disagreement({ parts: ["disc"], disc: { turbulence_kms: 80, turbulence_index: 1 } }),
    0.005,
  );
  const arms = { two_armed_amplitude: 0.6, two_armed_pitch_deg: 20, one_armed_amplitude: 0.3 };
  assertLess(disagreement({ parts: ["disc"], disc: arms }), 0.005);
  assertLess(disagreement({ parts: ["disc"], disc: { core_equivalent_width_kms: 900 } }), 0.005);
  // A spot wider than 0.7 of a pixel is sampled at pixel centres: the projector's own 1e-4, twice.
  assertLess(disagreement({ parts: ["spot"] }), 4e-4);
  assertLess(disagreement({ parts: ["spot"], spot: { tail_deg: 25, mixing: 0.4 } }, -40), 4e-4);
});

Deno.test("modelMap() holds the model's light", () => {
  const { map } = modelMap({ parts: ["disc", "spot"] }, { binary, ...shape });
  const light = map.intensity.reduce((a, b) => a + b) * 20 ** 2;
  // The disc's edges are sampled at 8 by 8 places in a pixel.
  assertAlmostEquals(light, 3300, 5);
});

Deno.test("modelMap() says which parts no fixed map stands for, and why", () => {
  const model: Model = {
    parts: ["disc", "spot"],
    disc: { optical_depth: "thick" },
    spot: { beaming: 0.5 },
  };
  const { map, parts, warnings } = modelMap(model, { binary, ...shape });
  assertEquals(parts, []);
  assertEquals(warnings.map(({ code }) => code), ["part-without-map", "part-without-map"]);
  assertEquals(
    warnings[1]!.text,
    "No fixed map stands for the spot: a beamed spot's light varies with phase.",
  );
  assertEquals(map.intensity.every((value) => value === 0), true);
});
