import { InputError } from "../errors.ts";

/** Throws an {@linkcode InputError} unless the value is finite and positive, or as the options allow. */
export function requirePositive(
  action: string,
  name: string,
  value: number,
  { zero = false, infinity = false }: { zero?: boolean; infinity?: boolean } = {},
): void {
  const ok = (zero ? value >= 0 : value > 0) && (infinity || value < Infinity);
  if (ok) return;
  const kind = zero ? "0 or more" : "positive";
  throw new InputError({
    action,
    rule: `${name} must be ${infinity ? "" : "finite and "}${kind}`,
    value,
  });
}

/** Throws an {@linkcode InputError} when there are fewer values than needed. */
export function requireCount(action: string, values: ArrayLike<unknown>, least: number): void {
  if (values.length >= least) return;
  throw new InputError({
    action,
    rule: `at least ${least} value${least === 1 ? " is" : "s are"} needed`,
    value: values.length,
  });
}

/** Throws an {@linkcode InputError} when two lengths that must agree do not. */
export function requireSameLength(
  action: string,
  names: string,
  first: number,
  second: number,
): void {
  if (first === second) return;
  throw new InputError({
    action,
    rule: `${names} must be the same in number`,
    value: [first, second],
  });
}
