/**
 * What this room asks of a matrix, and promises of those it returns: the reading part of ml-matrix's
 * `Matrix`, which is what they are. `new Matrix(m.to2DArray())` gives one to calculate with.
 */
export interface DenseMatrix {
  /** Number of rows. */
  readonly rows: number;
  /** Number of columns. */
  readonly columns: number;
  /**
   * One element.
   *
   * @param row Row, from 0.
   * @param column Column, from 0.
   */
  get(row: number, column: number): number;
  /** A copy as an array of rows. */
  to2DArray(): number[][];
  /** A copy of the diagonal. */
  diagonal(): number[];
}
