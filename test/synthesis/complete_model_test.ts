import { assertEquals, assertThrows } from "@std/assert";
import { InputError } from "@millrace/millrace/errors";
import { completeModel, type Model, modelParameters } from "@millrace/millrace/synthesis";

function message(model: unknown): string {
  return assertThrows(() => completeModel(model as Model), InputError).message;
}

Deno.test("completeModel() fills in what was left out and leaves its argument alone", () => {
  const model = Object.freeze({ parts: Object.freeze(["spot", "disc"] as const) });
  const complete = completeModel(model);
  assertEquals(complete.parts, ["disc", "spot"]);
  assertEquals(complete.spot.radius_over_a, null);
  assertEquals(complete.disc.optical_depth, "thin");
  assertEquals(completeModel(complete), complete);
});

Deno.test("completeModel() has every number of the table within its range", () => {
  const complete = completeModel({ parts: [] });
  for (const { section, key, default: value, low, high } of modelParameters) {
    const found = (complete[section] as unknown as Record<string, unknown>)[key];
    assertEquals(found, value, `${section}.${key}`);
    if (value !== null) assertEquals(value >= low && value <= high, true, `${section}.${key}`);
  }
});

Deno.test("completeModel() names unknown parts, sections and keys with the nearest", () => {
  assertEquals(
    message({ parts: ["disk"] }),
    'Cannot build model as a part must be one of disc, spot, stream, donor, accretor, outflow: current value is "disk" (key model.parts); did you mean disc?',
  );
  assertEquals(
    message({ parts: [], dics: {} }),
    "Cannot build model as a section must be one of disc, spot, stream, donor, accretor, outflow, eclipse: current value is {} (key model.dics); did you mean disc?",
  );
  assertEquals(
    message({ parts: [], spot: { mixin: 0.2 } }),
    "Cannot build model as the section spot has no such key: current value is 0.2 (key model.spot.mixin); did you mean mixing?",
  );
});

Deno.test("completeModel() names values of the wrong type or out of range", () => {
  assertEquals(
    message({ parts: [], disc: { inner_radius_over_a: -0.1 } }),
    "Cannot build model as it must be a number from 0.00001 to 1: current value is -0.1 a (key model.disc.inner_radius_over_a)",
  );
  assertEquals(
    message({ parts: [], disc: { emissivity_index: "steep" } }),
    'Cannot build model as it must be a number from -5 to 6: current value is "steep" (key model.disc.emissivity_index)',
  );
  assertEquals(
    message({ parts: [], disc: { optical_depth: "fat" } }),
    'Cannot build model as it must be thin or thick: current value is "fat" (key model.disc.optical_depth)',
  );
  assertEquals(
    message({ parts: [], spot: { sigma_kms: NaN } }),
    "Cannot build model as it must be a number from 0 to 3000: current value is NaN km/s (key model.spot.sigma_kms)",
  );
});
