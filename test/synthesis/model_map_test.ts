import { assertAlmostEquals, assertEquals, assertLess } from "@std/assert";
import { makeProjector } from "@millrace/millrace/tomography";
import { type Model, modelMap, synthesize } from "@millrace/millrace/synthesis";
import { binary, evenSampling, orbit } from "./samplings.ts";

const shape = { pixels: 241, half_width_kms: 2400 };

/** Largest difference between a model's trail and its map's, over the trail's peak. */
function disagreement(
  model: Model,
  { method, systemic_kms = 0 }: { method: "fast" | "reference"; systemic_kms?: number },
): number {
  const fast = method === "fast";
  const size = fast ? shape : { pixels: 101, half_width_kms: 1500 };
  const sampling = evenSampling(fast ? orbit(12) : [0.07], {
    phase_width: 0.02,
    middle_kms: systemic_kms,
    step_kms: fast ? 20 : 50,
  });
  const trail = synthesize(model, { binary, sampling, systemic_kms });
  const { map } = modelMap(model, { binary, ...size });
  const projector = makeProjector(sampling, { ...size, systemic_kms, method });
  const projected = projector.forward(map.intensity);
  let largest = 0, peak = 0;
  for (const [n, value] of trail.entries()) {
    largest = Math.max(largest, Math.abs(value - projected[n]!));
    peak = Math.max(peak, Math.abs(value));
  }
  return largest / peak;
}

Deno.test("modelMap() of a disc makes the trail of synthesize() through the projector", () => {
  const method = "fast";
  // Averaging over pixels of 20 km/s adds 20²/12 to a variance of 40², 2 % of it: up to 1 % where
  // the profile is as sharp as the instrument.
  assertLess(disagreement({ parts: ["disc"] }, { method, systemic_kms: 60 }), 0.005);
  const turbulent = { turbulence_kms: 80, turbulence_index: 1 };
  assertLess(disagreement({ parts: ["disc"], disc: turbulent }, { method }), 0.005);
  const arms = { two_armed_amplitude: 0.6, two_armed_pitch_deg: 20, one_armed_amplitude: 0.3 };
  assertLess(disagreement({ parts: ["disc"], disc: arms }, { method }), 0.005);
  const core = { core_equivalent_width_kms: 900 };
  assertLess(disagreement({ parts: ["disc"], disc: core }, { method }), 0.005);
  // A disc on elliptical orbits is drawn with points of 0.7 pixel, 14 km/s: 12 % of the variance.
  assertLess(disagreement({ parts: ["disc"], disc: { eccentricity: 0.2 } }, { method }), 0.03);
});

Deno.test("modelMap() of compact parts makes the trail of synthesize() through the projector", () => {
  // Wider than 0.7 of a pixel they are sampled at pixel centres, exact but for aliasing; the
  // instants of an exposure and the trail's tables are good to 1e-4.
  const method = "reference";
  assertLess(disagreement({ parts: ["spot"] }, { method, systemic_kms: -40 }), 1e-4);
  assertLess(
    disagreement({ parts: ["spot"], spot: { tail_deg: 25, mixing: 0.4 } }, { method }),
    1e-4,
  );
  assertLess(disagreement({ parts: ["stream"], stream: { overflow: 0.5 } }, { method }), 1e-4);
  assertLess(disagreement({ parts: ["accretor"] }, { method }), 1e-4);
});

Deno.test("modelMap() holds the model's light", () => {
  const { map } = modelMap({ parts: ["disc", "spot"] }, { binary, ...shape });
  const light = map.intensity.reduce((a, b) => a + b) * 20 ** 2;
  // The disc's edges are sampled at 8 by 8 places in a pixel.
  assertAlmostEquals(light, 3300, 5);
});

Deno.test("modelMap() says which parts no fixed map stands for, and why", () => {
  const model: Model = {
    parts: ["disc", "spot", "donor", "accretor", "outflow"],
    disc: { optical_depth: "thick" },
    spot: { beaming: 0.5 },
    accretor: { redshift_kms: 40 },
    outflow: { trough_equivalent_width_kms: 100 },
  };
  const { map, parts, warnings } = modelMap(model, { binary, ...shape });
  assertEquals(parts, []);
  assertEquals(warnings.map(({ code }) => code), Array(5).fill("part-without-map"));
  assertEquals(
    warnings[1]!.text,
    "No fixed map stands for the spot: a beamed spot's light varies with phase.",
  );
  assertEquals(map.intensity.every((value) => value === 0), true);
});

Deno.test("modelMap() shows the light out of eclipse, and says so", () => {
  const model: Model = { parts: ["disc"], eclipse: { enabled: true } };
  const { map, warnings } = modelMap(model, { binary, ...shape });
  assertEquals(warnings.map(({ code }) => code), ["eclipse-not-in-map"]);
  assertEquals(map, modelMap({ parts: ["disc"] }, { binary, ...shape }).map);
});
