import type { Binary } from "../binary/mod.ts";
import { InputError } from "../errors.ts";

/** The binary's inclination, degrees, for parts that cannot do without. */
export function inclinationOf(binary: Binary): number {
  const { inclination_deg } = binary;
  if (inclination_deg !== null && inclination_deg >= 0 && inclination_deg <= 90) {
    return inclination_deg;
  }
  throw new InputError({
    action: "build model",
    rule: "this model needs an inclination from 0 to 90 deg",
    value: inclination_deg,
    key: "binary.inclination_deg",
    remedy: "state it, or leave out what needs it: a thick disc, the donor, an eclipse",
  });
}
