// The centre that features stand out of: the accretor, with the error of its speed.
import { assertAlmostEquals, assertEquals, assertGreater } from "@std/assert";
import { madeExposures } from "../spectra/made_exposures.ts";
import { writeCampaign } from "./campaign_fixture.ts";

const RAW = madeExposures({ resolution_angstrom: 2.4, count: 16, cadence_s: 430 });
const SMALL = ["map.pixels=41", "map.resamples=4"];

async function mapped(binary: string, set: readonly string[] = []) {
  const campaign = await writeCampaign([{ raw: RAW }], { binary: `[binary]\n${binary}\n` });
  const session = await campaign.open([...SMALL, ...set]);
  return session.map(session.lines("test")[0]!);
}

Deno.test("the error of K1 is that of the centre, as stated or as it follows from q and K2", async () => {
  const stated = await mapped(
    "k_accretor_kms = 70.0\nk_accretor_error_kms = 9.0\nk_donor_kms = 350.0",
  );
  assertEquals(stated.centre_error_kms, { vx_kms: 0, vy_kms: 9 });
  // K1 = q K2.
  const derived = await mapped(
    "k_donor_kms = 350.0\nk_donor_error_kms = 7.0\nmass_ratio = 0.2\nmass_ratio_error = 0.02",
  );
  assertAlmostEquals(derived.centre_error_kms.vy_kms, Math.hypot(0.2 * 7, 350 * 0.02), 1e-6);
  assertEquals(derived.centre, { vx_kms: 0, vy_kms: -70 });
  const turned = await mapped("k_accretor_kms = 70.0\nk_donor_kms = 350.0", [
    'orbit.zero_marks="emission-crossing"',
  ]);
  assertAlmostEquals(turned.centre_error_kms.vx_kms, 70 / Math.SQRT2, 1e-9);
  assertAlmostEquals(turned.centre_error_kms.vy_kms, 70 / Math.SQRT2, 1e-9);
});

Deno.test("features are less certain where K1 is less certain", async () => {
  const known = await mapped("k_accretor_kms = 70.0\nk_donor_kms = 350.0");
  const unsure = await mapped(
    "k_accretor_kms = 70.0\nk_accretor_error_kms = 60.0\nk_donor_kms = 350.0",
  );
  const [one] = known.features, [other] = unsure.features;
  assertGreater(other!.flux_fraction_error!, one!.flux_fraction_error!);
  assertGreater(one!.significance_sigma!, other!.significance_sigma!);
  assertGreater(
    Math.hypot(other!.vx_error_kms!, other!.vy_error_kms!),
    Math.hypot(one!.vx_error_kms!, one!.vy_error_kms!),
  );
});
