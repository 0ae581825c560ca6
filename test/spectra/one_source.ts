// The one source of the made exposures: its place as fitted, and their times as others print them.
import { assertAlmostEquals, assertLess } from "@std/assert";
import { minimise } from "../../engine/numerics/mod.ts";
import { midExposureBjd, publishedToBjd, type SplitDate } from "../../engine/sky/mod.ts";
import type { RawExposure } from "../../engine/spectra/mod.ts";
import type { Trail } from "../../engine/trail/mod.ts";
import { SITE, TARGET } from "./made_exposures.ts";

/** The source as found, km/s. */
export interface Source {
  vx: number;
  vy: number;
  gamma: number;
  error: { vx: number; vy: number; gamma: number };
  reduced: number;
}

/** Place of the one compact source of these campaigns, fitted on the native samples. */
export function findSource(trail: Trail): Source {
  const { sampling, flux, error } = trail;
  const used: { v: number; c: number; s: number; width: number; f: number; e: number }[] = [];
  for (let i = 0; i < sampling.count; i++) {
    const orbit = 2 * Math.PI * sampling.phase[i]!;
    for (let k = sampling.start[i]!; k < sampling.start[i + 1]!; k++) {
      if (!Number.isFinite(error[k]!)) continue;
      used.push({
        v: sampling.velocity_kms[k]!,
        c: Math.cos(orbit),
        s: Math.sin(orbit),
        width: sampling.profile_sigma_kms[i]!,
        f: flux[k]!,
        e: error[k]!,
      });
    }
  }
  const fit = minimise(
    ([height, width, vx, vy, gamma]) =>
      Float64Array.from(used, (u) => {
        const centre = gamma! * 100 - vx! * 100 * u.c + vy! * 100 * u.s;
        return (height! * Math.exp(-0.5 * ((u.v - centre) / (100 * width!)) ** 2) - u.f) / u.e;
      }),
    Float64Array.of(1, 1.5, 2, 3, 0),
  );
  const sigma = (k: number) => 100 * Math.sqrt(fit.covariance.get(k, k));
  return {
    vx: 100 * fit.parameters[2]!,
    vy: 100 * fit.parameters[3]!,
    gamma: 100 * fit.parameters[4]!,
    error: { vx: sigma(2), vy: sigma(3), gamma: sigma(4) },
    reduced: fit.chi_square / (used.length - 5),
  };
}

/** The source was put at (300, 400) km/s, gamma 0: within 4σ of what the fit says, and that well. */
export function assertRightPlace(
  trail: Trail,
  options: { within_kms?: number; growth?: number } = {},
): Source {
  const { within_kms = 3, growth = 1 } = options;
  const found = findSource(trail);
  for (
    const [value, wanted, sigma] of [
      [found.vx, 300, found.error.vx],
      [found.vy, 400, found.error.vy],
      [found.gamma, 0, found.error.gamma],
    ] as const
  ) {
    assertAlmostEquals(value, wanted, 4 * growth * sigma);
    assertLess(growth * sigma, within_kms);
  }
  return found;
}

/** HJD of an instant, BJD(TDB), by bisection on the code's own way back: there is one formula. */
export function hjdOfBjd(bjd: SplitDate, scale: "utc" | "tt"): string {
  let low = -0.01, high = 0.01;
  for (let n = 0; n < 60; n++) {
    const middle = 0.5 * (low + high);
    const date: SplitDate = [bjd[0], bjd[1] + middle];
    const back = publishedToBjd({ date, scale, place: "heliocentric" }, { target: TARGET });
    if (back[0] - bjd[0] + back[1] - bjd[1] > 0) high = middle;
    else low = middle;
  }
  return `${bjd[0]}${(bjd[1] + low).toFixed(9).slice(1)}`;
}

/** HJD of mid-exposure in some scale. */
export function hjdOf(e: RawExposure, scale: "utc" | "tt"): string {
  const { bjd } = midExposureBjd({ date: e.start, exposure_s: e.exposure_s }, {
    target: TARGET,
    site: SITE,
  });
  return hjdOfBjd(bjd, scale);
}
