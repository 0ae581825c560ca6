import { InputError } from "../errors.ts";
import { encodeFits, type HduSpec } from "../fits/mod.ts";
import { isoDate } from "../sky/mod.ts";
import { axisCards, CREATOR, isLinear, siteCards, startCards } from "./exposure_cards.ts";
import type { RawExposure } from "./raw_exposure.ts";

// FITS and text have no infinity that every reader takes: 0 marks a masked sample.
const written = (error: Float64Array) => error.map((e) => Number.isFinite(e) ? e : 0);

// Uneven pixels get a list of wavelengths beside them.
function listHdu({ wavelength_angstrom: w, medium }: RawExposure): HduSpec {
  return {
    kind: "image",
    name: medium === "air" ? "WAVE_AIR" : "WAVE_VAC",
    shape: [w.length],
    data: w,
    unit: "Angstrom",
  };
}

/** One exposure as an image, with an error HDU. */
export function encodeImage(exposure: RawExposure): Uint8Array {
  const { flux, flux_unit, error, wavelength_angstrom } = exposure;
  const linear = isLinear(wavelength_angstrom);
  const shape = [flux.length];
  return encodeFits([
    {
      kind: "image",
      shape,
      data: Float32Array.from(flux),
      unit: flux_unit,
      cards: [
        ...(linear ? axisCards(exposure) : []),
        ...startCards(exposure),
        ...siteCards(exposure),
      ],
    },
    ...(error === null ? [] : [{
      kind: "image" as const,
      name: "ERROR",
      shape,
      data: Float32Array.from(written(error)),
      unit: flux_unit,
    }]),
    ...(linear ? [] : [listHdu(exposure)]),
  ]);
}

/** One exposure as a binary table, with inverse variances. */
export function encodeTable(exposure: RawExposure): Uint8Array {
  const { flux, flux_unit, error, wavelength_angstrom, medium } = exposure;
  return encodeFits([{ kind: "image", shape: [], data: null, cards: [CREATOR] }, {
    kind: "table",
    name: "SPECTRUM",
    cards: [...startCards(exposure), ...siteCards(exposure)],
    columns: [
      {
        name: "WAVE",
        unit: "Angstrom",
        data: wavelength_angstrom,
        description: `wavelength in ${medium}`,
      },
      { name: "FLUX", unit: flux_unit, data: Float32Array.from(flux) },
      ...(error === null ? [] : [{
        name: "IVAR",
        unit: `1/(${flux_unit})2`,
        data: Float32Array.from(error, (e) => Number.isFinite(e) ? 1 / (e * e) : 0),
        description: "inverse variance, 0 = masked",
      }]),
    ],
  }]);
}

/** Exposures as the rows of one image, with a table of times. */
export function encodeStack(exposures: readonly RawExposure[]): Uint8Array {
  const first = exposures[0]!;
  const pixels = first.flux.length;
  const alike = exposures.every((e) =>
    e.flux.length === pixels && e.wavelength_angstrom.every((w, i) =>
      w === first.wavelength_angstrom[i]
    ) &&
    (e.error === null) === (first.error === null)
  );
  if (!alike) {
    throw new InputError({
      action: "write stack of exposures",
      rule: "all exposures must have the same wavelengths, and errors all or none",
      value: `${exposures.length} exposures`,
      remedy: 'use layout "image"',
    });
  }
  const shape = [pixels, exposures.length];
  const rows = (pick: (e: RawExposure) => Float64Array) => {
    const out = new Float32Array(pixels * exposures.length);
    exposures.forEach((e, r) => out.set(pick(e), r * pixels));
    return out;
  };
  const linear = isLinear(first.wavelength_angstrom);
  return encodeFits([
    {
      kind: "image",
      shape,
      data: rows((e) => e.flux),
      unit: first.flux_unit,
      cards: [...(linear ? axisCards(first) : []), ...siteCards(first)],
    },
    ...(first.error === null ? [] : [{
      kind: "image" as const,
      name: "ERROR",
      shape,
      data: rows((e) => written(e.error!)),
      unit: first.flux_unit,
    }]),
    ...(linear ? [] : [listHdu(first)]),
    {
      kind: "table",
      name: "EXPOSURES",
      columns: [
        {
          name: "DATE_OBS",
          data: exposures.map((e) => isoDate(e.start)),
          description: "start of exposure, UTC",
        },
        { name: "XPOSURE", unit: "s", data: Float64Array.from(exposures, (e) => e.exposure_s) },
      ],
    },
  ]);
}
