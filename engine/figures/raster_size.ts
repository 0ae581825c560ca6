/** Size of a raster. */
export interface RasterSize {
  /** Pixels along a row. */
  readonly columns: number;
  /** Rows. */
  readonly rows: number;
}
