import { InputError } from "../errors.ts";
import { type PartName, synthesizeParts } from "../synthesis/mod.ts";
import type { Sampling } from "../trail/mod.ts";
import { discBasis } from "./disc_basis.ts";
import type { ParameterState } from "./parameter_state.ts";
import type { RingTable } from "./ring_table.ts";
import type { Whitening } from "./whitening.ts";

/** Whitened trails of one part of unit equivalent width. */
export interface PartTemplates {
  /** The part's own, then those of its asymmetries, whose amplitudes may have either sign. */
  readonly columns: readonly Float64Array[];
}

/** Makes and keeps templates. */
export interface TemplateStore {
  /** Whitened templates of a part, or null where the part cannot be. */
  readonly of: (part: PartName, state: ParameterState) => PartTemplates | null;
  /** The same before whitening. */
  readonly raw: (part: PartName, state: ParameterState) => readonly Float64Array[] | null;
}

/** Kept per part: the place of a fit and its neighbours along one parameter. */
const KEPT = 3;

/**
 * A store of templates for some exposures. Those of the last few states are kept by part, so that
 * a change of one part's parameter does not cost the others anything.
 */
export function templateStore(
  sampling: Sampling,
  { whitening, asymmetry, rings }: {
    readonly whitening: Whitening;
    readonly asymmetry: 0 | 1 | 2;
    /** Rings of discs that are kept by whoever makes the store. */
    readonly rings: Map<string, RingTable>;
  },
): TemplateStore {
  const kept = new Map<PartName, { readonly key: string; readonly made: PartTemplates | null }[]>();
  const shifted = new Map<number, Sampling>();
  const samplingAt = (phase: number): Sampling => {
    if (phase === 0) return sampling;
    const known = shifted.get(phase);
    if (known !== undefined) return known;
    if (shifted.size > KEPT) shifted.clear();
    const moved = {
      ...sampling,
      phase: sampling.phase.map((value) => {
        const sum = value + phase;
        return sum - Math.floor(sum);
      }),
    };
    shifted.set(phase, moved);
    return moved;
  };

  const raw = (part: PartName, state: ParameterState) => {
    const { model, binary, systemic_kms } = state;
    const context = { sampling: samplingAt(state.phase), binary, systemic_kms };
    try {
      if (part === "disc") {
        // Hardly a disc any more, and at last none: the fit keeps away.
        if (model.disc.inner_radius_over_a > 0.97 * model.disc.outer_radius_over_a) return null;
        return discBasis(model, { ...context, asymmetry, rings });
      }
      const own: Record<string, unknown> = { ...model[part], equivalent_width_kms: 1 };
      // A trough is a share of its pedestal: it scales with it.
      const { trough_equivalent_width_kms: trough, equivalent_width_kms: whole } = model.outflow;
      if (part === "outflow") own.trough_equivalent_width_kms = trough / whole;
      const one = { ...model, parts: [part], [part]: own };
      return [synthesizeParts(one, context).get(part)!];
    } catch (error) {
      // A stream that does not reach this radius: the fit avoids such places.
      if (error instanceof InputError) return null;
      throw error;
    }
  };

  return {
    raw,
    of(part, state) {
      const key = keyOf(part, state);
      const list = kept.get(part) ?? [];
      kept.set(part, list);
      const at = list.findIndex((entry) => entry.key === key);
      if (at >= 0) {
        const [entry] = list.splice(at, 1);
        list.unshift(entry!);
        return entry!.made;
      }
      const trails = raw(part, state);
      const made = trails === null ? null : { columns: trails.map(whitening.apply) };
      list.unshift({ key, made });
      if (list.length > KEPT) list.pop();
      return made;
    },
  };
}

/** All that a part's trail depends on. */
function keyOf(part: PartName, state: ParameterState): string {
  const { model, binary, systemic_kms, phase } = state;
  const { disc } = model;
  const rim = part === "spot" && model.spot.radius_over_a !== null ? 0 : disc.outer_radius_over_a;
  return JSON.stringify([
    model[part],
    part === "disc" ? 0 : [disc.keplerian_factor, rim],
    binary.k_accretor_kms,
    binary.k_donor_kms,
    binary.mass_ratio,
    systemic_kms,
    phase,
    model.eclipse.enabled ? model : 0,
  ]);
}
