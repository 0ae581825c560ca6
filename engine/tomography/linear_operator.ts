/** A linear map from images to samples, with its exact transpose. */
export interface LinearOperator {
  /** Number of values of an image (or of several, one after another). */
  readonly image_size: number;
  /** Number of samples. */
  readonly sample_count: number;
  /** Samples of an image. The second argument, when given, receives and is the result. */
  readonly forward: (image: Float64Array, into?: Float64Array) => Float64Array;
  /** The transpose of `forward`. The second argument, when given, receives and is the result. */
  readonly adjoint: (samples: Float64Array, into?: Float64Array) => Float64Array;
  /**
   * The same operator for samples of these weights: where all samples of an exposure have weight
   * zero, `forward` may leave them zero and `adjoint` may take them as zero.
   */
  readonly sparing?: (weight: Float64Array) => LinearOperator;
}
