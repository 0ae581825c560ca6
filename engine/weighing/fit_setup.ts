import type { Binary } from "../binary/mod.ts";
import type { Model } from "../synthesis/mod.ts";

/** One standard deviation of what the orbit says about the geometry; 0 or absent: taken as exact. */
export interface GeometryErrors {
  /** Of the accretor's orbital speed, km/s. */
  readonly k_accretor_kms?: number;
  /** Of the donor's orbital speed, km/s. */
  readonly k_donor_kms?: number;
  /**
   * Of the mass ratio. It is fitted apart from the two speeds, of which only the course of the
   * stream and the donor's shape depend on it.
   */
  readonly mass_ratio?: number;
  /** Of the systemic velocity, rest wavelength included, km/s. */
  readonly systemic_kms?: number;
  /** Of the zero of phase, cycles. */
  readonly phase?: number;
}

/** What a fit starts from and may change: the model's numbers, the geometry and its errors. */
export interface FitSetup {
  /** The binary. */
  readonly binary: Binary;
  /**
   * Systemic velocity, km/s.
   *
   * @default {0}
   */
  readonly systemic_kms?: number;
  /**
   * Values of the model's numbers, where known: what is fitted starts from them, what is not stays.
   *
   * @default {{ parts: [] }}
   */
  readonly model?: Omit<Model, "parts">;
  /**
   * Priors of the geometry; each quantity with a positive error is fitted.
   *
   * @default {{}}
   */
  readonly errors?: GeometryErrors;
  /**
   * Highest order m of the asymmetry that every disc is allowed: a brightness of
   * 1 + Σ a_m cos m(θ − θ_m).
   *
   * @default {2}
   */
  readonly asymmetry?: 0 | 1 | 2;
  /**
   * Paths such as "spot.tail_deg" that are fitted beside those that always are.
   *
   * @default {[]}
   */
  readonly free?: readonly string[];
  /**
   * Paths such as "spot.sigma_kms" that keep their value.
   *
   * @default {[]}
   */
  readonly fixed?: readonly string[];
}

/** The setup alone of options that may hold more: what is sent to workers must be plain data. */
export function fitSetup(options: FitSetup): FitSetup {
  const { binary, systemic_kms, model, errors, asymmetry, free, fixed } = options;
  return {
    binary,
    ...(systemic_kms === undefined ? {} : { systemic_kms }),
    ...(model === undefined ? {} : { model }),
    ...(errors === undefined ? {} : { errors }),
    ...(asymmetry === undefined ? {} : { asymmetry }),
    ...(free === undefined ? {} : { free }),
    ...(fixed === undefined ? {} : { fixed }),
  };
}
