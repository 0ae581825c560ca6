import type { Binary } from "../binary/mod.ts";
import { type CompleteModel, completeModel } from "../synthesis/mod.ts";
import type { FitSetup } from "./fit_setup.ts";
import type { FreeParameter } from "./free_parameters.ts";
import type { Hypothesis } from "./hypothesis.ts";

/** The numbers that a model is computed from, with free ones set. */
export interface ParameterState {
  /** The model; brightnesses in it mean nothing. */
  readonly model: CompleteModel;
  /** The binary. */
  readonly binary: Binary;
  /** Systemic velocity, km/s. */
  readonly systemic_kms: number;
  /** Added to every exposure's phase, cycles. */
  readonly phase: number;
}

/**
 * The function that sets free parameters in everything else that is known.
 *
 * @param hypothesis The parts.
 * @param options What is known, and which parameters are free.
 * @returns Gives the state for values of the parameters, in their order.
 */
export function stateOf(
  hypothesis: Hypothesis,
  { setup, parameters }: {
    readonly setup: FitSetup;
    readonly parameters: readonly FreeParameter[];
  },
): (values: ArrayLike<number>) => ParameterState {
  const base = completeModel({ ...setup.model, parts: hypothesis });
  const { binary } = setup;
  return (values) => {
    const model = { ...base } as unknown as Record<string, Record<string, number>>;
    const geometry = {
      k_accretor_kms: binary.k_accretor_kms,
      k_donor_kms: binary.k_donor_kms,
      mass_ratio: binary.mass_ratio,
      systemic_kms: setup.systemic_kms ?? 0,
      phase: 0,
    };
    parameters.forEach(({ section, key }, j) => {
      if (section === "geometry") geometry[key as keyof typeof geometry] = values[j]!;
      else model[section] = { ...model[section]!, [key]: values[j]! };
    });
    const { systemic_kms, phase, ...speeds } = geometry;
    // What the binary states beyond its speeds stays: masses do not enter a profile.
    return {
      model: model as unknown as CompleteModel,
      binary: { ...binary, ...speeds },
      systemic_kms,
      phase,
    };
  };
}
