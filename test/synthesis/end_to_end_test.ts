import { assertAlmostEquals, assertEquals, assertLess, assertThrows } from "@std/assert";
import { join } from "@std/path";
import { InputError } from "@millrace/millrace/errors";
import { lineNamed } from "@millrace/millrace/sky";
import {
  encodeExposures,
  type RawExposure,
  readExposures,
  type SpectraLayout,
  type Spectrum,
} from "@millrace/millrace/spectra";
import { compareTrail, type Model, planExposures, synthesize } from "@millrace/millrace/synthesis";
import { makeTrail } from "@millrace/millrace/trail";
import { exposuresOf, observation, withArm } from "./observations.ts";
import { binary } from "./samplings.ts";

/** Writes exposures to a folder and reads them by the code that a user's files take. */
async function throughFiles(
  raw: RawExposure[],
  layout: SpectraLayout,
): Promise<readonly Spectrum[]> {
  const folder = await Deno.makeTempDir();
  try {
    const paths: string[] = [];
    for (const { name, bytes } of encodeExposures(raw, { layout })) {
      await Deno.writeFile(join(folder, name), bytes);
      if (name !== "log.csv") paths.push(join(folder, name));
    }
    const log = layout === "text" ? { log: join(folder, "log.csv") } : {};
    return (await readExposures(paths, { layout, ...log })).spectra;
  } finally {
    await Deno.remove(folder, { recursive: true });
  }
}

const night = planExposures([2460311, 0.55], { count: 24, exposure_s: 200, overhead_s: 30 });
const model: Model = {
  parts: ["disc", "spot", "donor"],
  spot: { tail_deg: 15, beaming: 0.3 },
};

Deno.test("observe() through files of every layout gives the trail of synthesize(), with a χ² of one", async () => {
  const raw = exposuresOf(model, {
    exposures: night,
    ...withArm({ signal_to_noise: 60, continuum_slope: -2 }),
    instrument: { slit_loss: 0.3 },
  }, 11);
  const line = lineNamed("H beta");
  for (const layout of ["image", "table", "stack", "text"] as const) {
    const spectra = await throughFiles(raw, layout);
    assertEquals(spectra.length, 24);
    const trail = makeTrail(spectra, {
      line,
      ephemeris: observation.ephemeris,
      reach_kms: 2600,
      continuum_kms: [[-6500, -3500], [3500, 5500]],
      noise_scale: 1,
    });
    const { sampling } = trail;
    const predicted = synthesize(model, { binary, sampling, systemic_kms: 27 });
    const { chi_square, sample_count } = compareTrail(trail, predicted);
    // 24 exposures × 210 samples. Spread of χ²/N is 2 %; each exposure's continuum, fitted to some
    // 200 pixels, adds about 1 %.
    assertAlmostEquals(chi_square / sample_count, 1.01, 0.06, layout);
    // The test can fail: the same data refuse a model without its spot.
    const wrong = synthesize({ ...model, parts: ["disc", "donor"] }, {
      binary,
      sampling,
      systemic_kms: 27,
    });
    assertLess(2, compareTrail(trail, wrong).chi_square / sample_count);
  }
});

Deno.test("compareTrail() refuses a prediction of another length", () => {
  const trail = { flux: new Float64Array(3), error: new Float64Array(3) };
  assertThrows(
    () => compareTrail(trail, new Float64Array(2)),
    InputError,
    "Cannot compare model with trail as the prediction must have the trail's 3 samples: current value is 2",
  );
});
