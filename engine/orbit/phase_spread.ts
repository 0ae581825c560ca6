import { InputError } from "../errors.ts";
import { inverseFromFactor, solveInPlace } from "./small_system.ts";

/**
 * Throws unless phases spread enough over the orbit to tell K, γ and the zero apart: the variance
 * that any of the three coefficients of a sinusoid would have must be below a hundred times that
 * of even phases.
 *
 * @param orbits Orbits since the zero, N values.
 * @param action What was being done, for the message.
 * @throws {InputError} Naming the range of phases.
 *
 * @example
 * ```ts
 * import { requirePhaseSpread } from "@millrace/millrace/orbit";
 * import { assertThrows } from "@std/assert";
 *
 * assertThrows(
 *   () => requirePhaseSpread(Float64Array.of(0.3, 0.3, 0.31, 0.31, 0.32), "fit orbit"),
 *   Error,
 *   "phases must spread",
 * );
 * ```
 */
export function requirePhaseSpread(orbits: Float64Array, action: string): void {
  const normal = new Float64Array(9);
  for (const x of orbits) {
    const row = [1, Math.sin(2 * Math.PI * x), Math.cos(2 * Math.PI * x)];
    for (let i = 0; i < 3; i++) {
      for (let j = 0; j <= i; j++) normal[3 * i + j]! += row[i]! * row[j]! / orbits.length;
    }
  }
  if (solveInPlace(normal, new Float64Array(3), 3)) {
    const inverse = inverseFromFactor(normal, 3);
    // Even phases give 1, 2 and 2.
    if (Math.max(inverse[0]!, inverse[4]!, inverse[8]!) < 200) return;
  }
  const phases = Array.from(orbits, (x) => x - Math.floor(x)).sort((a, b) => a - b);
  throw new InputError({
    action,
    rule: "the phases must spread over the orbit, or K, γ and the zero cannot be told apart",
    value: `${phases[0]?.toFixed(3)} to ${phases.at(-1)?.toFixed(3)}`,
    unit: "cycles",
    remedy: "add exposures at other phases",
  });
}
