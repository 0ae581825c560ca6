import { assertEquals, assertThrows } from "@std/assert";
import { InputError } from "@millrace/millrace/errors";
import { binaryFrom } from "@millrace/millrace/binary";
import { checkModel, type Model, synthesize } from "@millrace/millrace/synthesis";
import { binary, evenSampling } from "./samplings.ts";

const full = binaryFrom({
  k_accretor_kms: 70,
  k_donor_kms: 320,
  inclination_deg: 68,
  mass_accretor_msun: 0.85,
  period_d: 0.0824,
  tolerance: 0.5,
});

function refusal(model: Model, of = binary): string {
  const { message } = assertThrows(() => checkModel(model, of), InputError);
  const sampling = evenSampling([0]);
  assertThrows(() => synthesize(model, { binary: of, sampling }), InputError, message);
  return message;
}

Deno.test("checkModel() refuses what cannot be, and synthesize() with it", () => {
  assertEquals(
    refusal({ parts: ["disc"], disc: { inner_radius_over_a: 0.3 } }),
    "Cannot build model as the inner radius must be below the outer one, 0.3 a: current value is 0.3 a (key model.disc.inner_radius_over_a)",
  );
  assertEquals(
    refusal({ parts: ["disc"], disc: { outer_radius_over_a: 0.45, eccentricity: 0.3 } }),
    "Cannot build model as the disc must lie within the accretor's Roche lobe, whose radius is 0.5130 a (at apastron it reaches 0.5850 a): current value is 0.45 a (key model.disc.outer_radius_over_a)",
  );
  assertEquals(
    refusal({ parts: ["disc", "spot"], spot: { radius_over_a: 0.35 } }),
    "Cannot build model as the spot must not lie off the disc's rim at 0.3 a: current value is 0.35 a (key model.spot.radius_over_a); leave out the spot's radius to put it on the rim",
  );
  assertEquals(
    refusal({ parts: ["spot"], disc: { outer_radius_over_a: 0.08 } }),
    "Cannot build model as the spot must lie on the stream, which runs from L1 at 0.6504 a to its closest approach at 0.0974 a: current value is 0.08 a (key model.disc.outer_radius_over_a)",
  );
  assertEquals(
    refusal({ parts: ["disc"], disc: { one_armed_amplitude: 0.5, two_armed_amplitude: 0.75 } }),
    "Cannot build model as the amplitudes of both patterns must add up to 1 at most, and they are 1.25: brightness would be negative: current value is 0.75 (key model.disc.two_armed_amplitude)",
  );
  const core = { core_equivalent_width_kms: 10, core_radius_over_a: 0.4 };
  assertEquals(
    refusal({ parts: ["disc"], disc: core }),
    "Cannot build model as the core's radius must not exceed the disc's, 0.3 a: current value is 0.4 a (key model.disc.core_radius_over_a)",
  );
  assertEquals(
    refusal({ parts: [], eclipse: { enabled: true, continuum_disc: 0.7, continuum_spot: 0.5 } }),
    "Cannot build model as the shares of accretor, disc and spot in the continuum must add up to less than 1: current value is 1.2 (key model.eclipse.continuum_disc); the rest is the donor's, and is all that is left at mid-eclipse",
  );
  const unknown = { ...binary, inclination_deg: null };
  assertEquals(
    refusal({ parts: [], eclipse: { enabled: true } }, unknown),
    "Cannot build model as this model needs an inclination from 0 to 90 deg: current value is null (key binary.inclination_deg); state it, or leave out what needs it: a thick disc, the donor, an eclipse",
  );
});

Deno.test("checkModel() warns of what is doubtful", () => {
  const codes = (model: Model, of = full) => checkModel(model, of).map(({ code }) => code);
  assertEquals(codes({ parts: ["disc", "spot", "stream", "donor"] }), []);
  assertEquals(codes({ parts: ["disc"], disc: { outer_radius_over_a: 0.5 } }), [
    "disc-beyond-tidal-radius",
  ]);
  assertEquals(codes({ parts: ["disc"], disc: { inner_radius_over_a: 0.005 } }), [
    "inner-radius-below-accretor",
  ]);
  assertEquals(codes({ parts: ["disc"], disc: { keplerian_factor: 0.7 } }), [
    "rotation-far-from-keplerian",
  ]);
  assertEquals(codes({ parts: ["disc"], disc: { emissivity_index: 3.4 } }), [
    "emissivity-index-unusual",
  ]);
  assertEquals(codes({ parts: ["disc", "spot"], spot: { radius_over_a: 0.25 } }), [
    "spot-inside-rim",
  ]);
  const trough = { trough_equivalent_width_kms: 2000 };
  assertEquals(codes({ parts: ["outflow"], outflow: trough }), ["trough-below-zero"]);
  const steep = { ...full, inclination_deg: 87 };
  assertEquals(codes({ parts: ["disc"], disc: { optical_depth: "thick" } }, steep), [
    "thick-disc-edge-on",
  ]);
});

Deno.test("checkModel() takes the accretor's kind into account", () => {
  const model: Model = { parts: ["disc"], disc: { inner_radius_over_a: 1e-3 } };
  const of = (accretor: "white-dwarf" | "neutron-star" | "black-hole") =>
    checkModel(model, { ...full, accretor });
  // A white dwarf of 0.85 solar masses has 0.0095 solar radii (Nauenberg 1972), 0.0137 a here.
  assertEquals(of("white-dwarf").length, 1);
  assertEquals(of("neutron-star"), []);
  assertEquals(of("black-hole"), []);
  const close: Model = { parts: ["disc"], disc: { inner_radius_over_a: 1e-5 } };
  assertEquals(checkModel(close, { ...full, accretor: "neutron-star" }).length, 1);
  // Nothing can be said when mass or separation is unknown.
  assertEquals(checkModel(model, binary), []);
});
