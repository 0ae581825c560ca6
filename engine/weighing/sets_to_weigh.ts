import { synthesizeParts } from "../synthesis/mod.ts";
import type { FitSetup } from "./fit_setup.ts";
import { defaultSets, hypothesesOf, type Hypothesis } from "./hypothesis.ts";
import type { WeighingData } from "./weighing_data.ts";

/**
 * The sets of parts to weigh. Of the default sets those with a donor are left out where the
 * inclination is unknown.
 *
 * @param options The stated sets, if any, the binary and the model.
 * @param data The samples.
 * @returns The sets, simplest first.
 * @throws {InputError} When a set is not one, or one of its parts cannot be as the model has it.
 *
 * @example
 * ```ts
 * import { setsToWeigh, simulateTrail, weighingData } from "@millrace/millrace/weighing";
 * import { binaryFrom } from "@millrace/millrace/binary";
 * import { assertEquals } from "@std/assert";
 *
 * const binary = binaryFrom({ k_accretor_kms: 70, k_donor_kms: 320 });
 * const data = weighingData(simulateTrail({ parts: ["disc"] }, { binary, exposures: 5 }));
 * assertEquals(setsToWeigh({ binary }, data).length, 4); // no donor without an inclination
 * ```
 */
export function setsToWeigh(
  options: FitSetup & { readonly sets?: readonly (readonly string[])[] },
  { sampling }: WeighingData,
): readonly Hypothesis[] {
  const { sets, binary, model, systemic_kms } = options;
  const noDonor = sets === undefined && binary.inclination_deg === null;
  const chosen = hypothesesOf(sets ?? defaultSets)
    .filter((parts) => !(noDonor && parts.includes("donor")));
  // The synthesis room says what is wrong with a part; one exposure is enough for that.
  for (const part of new Set(chosen.flat())) {
    synthesizeParts({ ...model, parts: [part] }, {
      binary,
      sampling: { ...sampling, count: 1 },
      ...(systemic_kms === undefined ? {} : { systemic_kms }),
    });
  }
  return chosen;
}
