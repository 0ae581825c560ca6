import { donorMassFraction, lagrangePoints, lobeSurface } from "../binary/mod.ts";
import type { CloudPlace } from "./cloud_place.ts";

/** What the donor hides from an observer. */
export interface Occultation {
  /**
   * False when the donor hides nothing within a distance of the accretor (a; L1's when left out) at
   * any time of an exposure.
   */
  readonly mayHide: (phase: number, phase_width: number, reach_over_a?: number) => boolean;
  /** Sets to zero the shares of the points that are hidden at a phase. */
  readonly hide: (phase: number, place: CloudPlace, share: Float64Array) => void;
}

/** Newton steps to the deepest point of a line of sight: from the foot of the perpendicular 4 are enough. */
const STEPS = 6;

/**
 * Occultation by a Roche-filling donor: a point is hidden when its line of sight to the observer
 * dips below the potential of the donor's lobe (Chanan, Middleditch & Nelson 1976, ApJ 208, 512).
 * Most points are settled by the spheres about the donor that the lobe holds and that hold the
 * lobe; for the rest the lowest potential on the line is found by Newton's method.
 *
 * @param mass_ratio q = M2/M1.
 * @param inclination_deg Inclination, degrees.
 * @returns The occultation.
 */
export function donorOccultation(mass_ratio: number, inclination_deg: number): Occultation {
  const { l1_over_a, l1_potential } = lagrangePoints(mass_ratio);
  const outer = 1 - l1_over_a;
  const inner = lobeSurface(mass_ratio).radius([0, 0, 1]);
  const mu = donorMassFraction(mass_ratio);
  const sine = Math.sin(inclination_deg * Math.PI / 180);
  const cosine = Math.cos(inclination_deg * Math.PI / 180);

  return {
    mayHide(phase, phase_width, reach_over_a = l1_over_a) {
      const from_conjunction = Math.abs(phase - Math.round(phase)) - phase_width / 2;
      const nearest = Math.cos(2 * Math.PI * Math.max(0, from_conjunction)) * sine;
      return nearest > 0 && Math.sqrt(1 - nearest * nearest) < outer + reach_over_a;
    },
    hide(phase, { x, y, z }, share) {
      const nx = sine * Math.cos(2 * Math.PI * phase), ny = -sine * Math.sin(2 * Math.PI * phase);
      const nz = cosine;
      for (let k = 0; k < share.length; k++) {
        const dx = x[k]! - 1, dy = y[k]!, dz = z[k]!;
        const ahead = -(dx * nx + dy * ny + dz * nz);
        if (ahead <= 0) continue;
        const squared = dx * dx + dy * dy + dz * dz - ahead * ahead;
        if (squared >= outer * outer) continue;
        if (squared < inner * inner) {
          share[k] = 0;
          continue;
        }
        // Potential, slope and curvature along (dx, dy, dz) + s n.
        let s = ahead;
        let lowest = 0;
        for (let step = 0; step < STEPS; step++) {
          const px = dx + s * nx, py = dy + s * ny, pz = dz + s * nz;
          const ax = px + 1;
          const donor2 = px * px + py * py + pz * pz;
          const accretor2 = ax * ax + py * py + pz * pz;
          const donor = Math.sqrt(donor2), accretor = Math.sqrt(accretor2);
          const cx = ax - mu;
          lowest = -(1 - mu) / accretor - mu / donor - (cx * cx + py * py) / 2;
          if (lowest < l1_potential) break;
          const to_donor = px * nx + py * ny + pz * nz;
          const to_accretor = ax * nx + py * ny + pz * nz;
          const m = mu / (donor2 * donor), a = (1 - mu) / (accretor2 * accretor);
          const slope = m * to_donor + a * to_accretor - (cx * nx + py * ny);
          const curvature = m * (1 - 3 * to_donor * to_donor / donor2) +
            a * (1 - 3 * to_accretor * to_accretor / accretor2) - (nx * nx + ny * ny);
          if (!(curvature > 0)) break;
          const move = slope / curvature;
          s -= move;
          if (Math.abs(move) < 1e-7) break;
        }
        // Within the outer sphere, whose surface touches L1, a low potential is the donor's.
        const half = Math.sqrt(outer * outer - squared);
        if (lowest < l1_potential && Math.abs(s - ahead) < half) share[k] = 0;
      }
    },
  };
}
