// Reading, trail, cosmic rays and measurements at two sizes: the demo's, and a long campaign's.
import { randomStream } from "../../engine/numerics/mod.ts";
import { parseFits } from "../../engine/fits/mod.ts";
import {
  encodeExposures,
  estimateErrors,
  readImage,
  settleExposure,
} from "../../engine/spectra/mod.ts";
import { makeTrail, measureTrail, rebin } from "../../engine/trail/mod.ts";
import { madeExposures } from "../spectra/made_exposures.ts";
import { EPHEMERIS, H_BETA, madeSpectra } from "../trail/made_spectra.ts";

const continuum_kms = [[-8000, -3000], [5800, 7800]] as const;
const sizes = [
  { name: "60 exposures of 660 pixels", spectra: madeSpectra({ count: 60 }) },
  {
    name: "600 exposures of 3300 pixels",
    spectra: madeSpectra({ count: 600, orbits: 13, pixel_angstrom: 0.1, fwhm_angstrom: 0.3 }),
  },
];

for (const { name, spectra } of sizes) {
  for (const cosmic_rays of [false, true]) {
    Deno.bench({
      name: `makeTrail, cosmic rays ${cosmic_rays ? "searched" : "left"}`,
      group: name,
      baseline: !cosmic_rays,
      fn: () =>
        void makeTrail(spectra, { line: H_BETA, ephemeris: EPHEMERIS, continuum_kms, cosmic_rays }),
    });
  }
}

const small = makeTrail(sizes[0]!.spectra, { line: H_BETA, ephemeris: EPHEMERIS, continuum_kms });

Deno.bench("measureTrail, 60 exposures, 100 noisy copies", () => {
  measureTrail(small, { random: randomStream(1) });
});

Deno.bench("estimateErrors, 60 exposures of 660 pixels", () => {
  estimateErrors(sizes[0]!.spectra.map((s) => s.flux));
});

const run = {
  edges: Float64Array.from({ length: 4001 }, (_, i) => i),
  flux: Float64Array.from({ length: 4000 }, (_, i) => Math.sin(i)),
  error: new Float64Array(4000).fill(1),
};
const edges = Float64Array.from({ length: 2001 }, (_, j) => 1.97 * j);

Deno.bench("rebin, 4000 pixels into 2000 bins", () => {
  rebin(run, edges);
});

const files = encodeExposures(
  madeExposures({ count: 60, high_angstrom: 5760, step_angstrom: 0.25 }),
);

Deno.bench("decode and settle 60 FITS images of 4000 pixels with errors", () => {
  for (const { name, bytes } of files) {
    for (const one of readImage(parseFits(bytes, { file: name }))) settleExposure(one);
  }
});
