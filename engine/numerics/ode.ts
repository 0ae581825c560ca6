import { Outcome, Solver } from "odex";
import { InputError, NotConverged, WorkError } from "../errors.ts";

/** One step of an integration, as handed to `onStep`. */
export interface OdeStep {
  /** Where the step began; equal to `t` for the first call, before any step. */
  readonly t_before: number;
  /** Where the step ended. */
  readonly t: number;
  /** State at `t`. */
  readonly state: Float64Array;
  /**
   * State anywhere within the step, by interpolation of matching accuracy.
   *
   * @param t From `t_before` to `t`.
   */
  at(t: number): Float64Array;
}

/** Options of {@linkcode integrateOde}. */
export interface OdeOptions {
  /** Where to start. */
  readonly from: number;
  /** Where to end; may be below `from`. */
  readonly to: number;
  /**
   * Relative and absolute error allowed in each step.
   *
   * @default 1e-10
   */
  readonly tolerance?: number;
  /**
   * Longest step.
   *
   * @default The whole range
   */
  readonly step_limit?: number;
  /**
   * Steps allowed.
   *
   * @default 10000
   */
  readonly max_steps?: number;
  /**
   * Called with the start and after every step; return false to stop there.
   *
   * @default None
   */
  readonly onStep?: (step: OdeStep) => boolean | void;
}

/** Where an integration ended. */
export interface OdeEnd {
  /** Value of the independent variable reached. */
  readonly t: number;
  /** State there. */
  readonly state: Float64Array;
  /** True when `onStep` stopped it before `to`. */
  readonly stopped: boolean;
  /** Steps taken. */
  readonly steps: number;
  /** Calls of the derivative. */
  readonly evaluations: number;
}

/**
 * Integrates dy/dt = f(t, y) with step and order adapted to the tolerance (extrapolated midpoint rule:
 * Hairer, Nørsett & Wanner 1993, "Solving Ordinary Differential Equations I", code ODEX).
 *
 * @param derivative Gives dy/dt, K values, from t and the K values of y. It must not keep `y`.
 * @param start The K values of y at `from`; not changed.
 * @param options Range, tolerance and observer.
 * @returns Where it ended.
 * @throws {InputError} When range or tolerance cannot be used.
 * @throws {WorkError} When the derivative is not finite.
 * @throws {NotConverged} When the steps allowed run out; `partial` is an {@linkcode OdeEnd}.
 *
 * @example
 * ```ts
 * import { integrateOde } from "@millrace/millrace/numerics";
 * import { assertAlmostEquals } from "@std/assert";
 *
 * const end = integrateOde((_t, [x, v]) => Float64Array.of(v!, -x!), [1, 0], { from: 0, to: Math.PI });
 * assertAlmostEquals(end.state[0]!, -1, 1e-9);
 * ```
 */
export function integrateOde(
  derivative: (t: number, y: Float64Array) => Float64Array,
  start: ArrayLike<number>,
  options: OdeOptions,
): OdeEnd {
  const { from, to, tolerance = 1e-10, step_limit = 0, max_steps = 10_000, onStep } = options;
  const action = "integrate differential equation";
  if (![from, to, ...Array.from(start)].every(Number.isFinite)) {
    throw new InputError({ action, rule: "range and start must be finite", value: [from, to] });
  }
  if (!(tolerance >= 1e-15 && tolerance < 1)) {
    throw new InputError({ action, rule: "tolerance must be from 1e-15 to 1", value: tolerance });
  }
  if (!(step_limit >= 0) || !(max_steps >= 1)) {
    throw new InputError({
      action,
      rule: "step limit and number of steps must be positive",
      value: { step_limit, max_steps },
    });
  }

  let reached = { t: from, state: Float64Array.from(start) };
  if (from === to) {
    onStep?.({ ...reached, t_before: from, at: () => reached.state });
    return { ...reached, stopped: false, steps: 0, evaluations: 0 };
  }

  const solver = new Solver(start.length);
  solver.relativeTolerance = tolerance;
  solver.absoluteTolerance = tolerance;
  solver.maxSteps = max_steps;
  solver.maxStepSize = step_limit;
  solver.initialStepSize = Math.min(1e-3, Math.abs(to - from) / 2);
  solver.denseOutput = onStep !== undefined;

  const slope = (t: number, y: number[]) => {
    const change = derivative(t, Float64Array.from(y));
    if (!change.every(Number.isFinite)) {
      throw new WorkError({ action, reason: `the derivative is not finite at ${t}` });
    }
    return change as unknown as number[];
  };
  const { outcome, nAccept, nEval } = solver.solve(
    slope,
    from,
    Array.from(start),
    to,
    (_nr, t_before, t, y, interpolate) => {
      const state = Float64Array.from(y);
      reached = { t, state };
      return onStep?.({
        t_before,
        t,
        state,
        at: (inside) =>
          inside === t || t === t_before
            ? state.slice()
            : state.map((_, i) => interpolate!(i, inside)),
      });
    },
  );

  const stopped = outcome === Outcome.EarlyReturn;
  const end = { ...reached, stopped, steps: nAccept, evaluations: nEval };
  if (outcome === Outcome.MaxStepsExceeded) {
    throw new NotConverged(
      `Cannot ${action} in ${max_steps} steps: reached ${reached.t} on the way to ${to}`,
      end,
    );
  }
  return end;
}
