import type { DenseMatrix } from "./dense_matrix.ts";

/** Result of `minimise`. */
export interface LeastSquaresFit {
  /** The K parameters reached. */
  readonly parameters: Float64Array;
  /**
   * Their covariance, K × K, from the Jacobian at the end: right when residuals are in units of their
   * errors; not rescaled. Rows and columns of parameters on a bound are 0. A parameter that the data do not
   * determine has infinite variance.
   */
  readonly covariance: DenseMatrix;
  /** Sum of squared residuals. */
  readonly chi_square: number;
  /** The N residuals at the end. */
  readonly residuals: Float64Array;
  /** Iterations, each with one Jacobian. */
  readonly iterations: number;
  /** Calls of the residual function, those for the Jacobian included. */
  readonly evaluations: number;
  /** False when the iterations ran out, or the function could not be lowered along its gradient. */
  readonly converged: boolean;
  /** For each parameter the bound it ended on, or null. Fixed parameters are on "lower". */
  readonly at_bound: readonly ("lower" | "upper" | null)[];
  /** How many of the parameters that are not on a bound the data determine. */
  readonly rank: number;
}

/** Options of `minimise`. */
export interface MinimiseOptions {
  /**
   * K lower bounds.
   *
   * @default None
   */
  readonly lower?: ArrayLike<number>;
  /**
   * K upper bounds; equal to the lower one to hold a parameter fixed.
   *
   * @default None
   */
  readonly upper?: ArrayLike<number>;
  /**
   * Derivatives of the residuals, N × K row-major: element i·K + j is ∂r_i/∂p_j.
   *
   * @default Differences
   */
  readonly jacobian?: (parameters: Float64Array) => Float64Array;
  /**
   * Differences to use when no Jacobian is given.
   *
   * @default "forward"
   */
  readonly differences?: "forward" | "central";
  /**
   * Size below which each parameter counts as small, for the step of differences.
   *
   * @default |start|, or 1 where that is 0
   */
  readonly typical?: ArrayLike<number>;
  /**
   * Relative change of chi-square and of the scaled parameters at which to stop.
   *
   * @default 1e-10
   */
  readonly tolerance?: number;
  /**
   * Iterations allowed.
   *
   * @default 200
   */
  readonly max_iterations?: number;
}
