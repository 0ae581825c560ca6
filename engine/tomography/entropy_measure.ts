/** Gradient and curvature of an entropy at an image. */
export interface EntropyMeasure {
  /** Whether the image must stay positive. */
  readonly positive: boolean;
  /**
   * Entropy of an image relative to its default image. Writes the gradient, and the metric: the inverse
   * of minus the second derivative.
   */
  readonly evaluate: (
    image: Float64Array,
    prior: Float64Array,
    into: { readonly gradient: Float64Array; readonly metric: Float64Array },
  ) => number;
}

/**
 * Entropy of a positive image, S = Σ (f − m − f ln(f/m)): gradient −ln(f/m), metric f (Skilling &
 * Bryan 1984, MNRAS 211, 111). The level of the default image m matters, not only its shape.
 */
export const POSITIVE_ENTROPY: EntropyMeasure = {
  positive: true,
  evaluate(image, prior, { gradient, metric }) {
    let entropy = 0;
    for (let i = 0; i < image.length; i++) {
      const f = image[i]!, m = prior[i]!;
      const slope = -Math.log(f / m);
      gradient[i] = slope;
      metric[i] = f;
      entropy += f - m + f * slope;
    }
    return entropy;
  },
};

/**
 * Entropy of an image of either sign, the difference of two positive ones with default image m each:
 * S = Σ (ψ − 2m − f ln((ψ + f)/2m)), ψ = √(f² + 4m²): gradient −asinh(f/2m), metric ψ (Hobson &
 * Lasenby 1998, MNRAS 298, 905). Zero is the most likely image; m says how large it may be.
 */
export const SIGNED_ENTROPY: EntropyMeasure = {
  positive: false,
  evaluate(image, prior, { gradient, metric }) {
    let entropy = 0;
    for (let i = 0; i < image.length; i++) {
      const f = image[i]!, m = prior[i]!;
      const psi = Math.sqrt(f * f + 4 * m * m);
      const slope = -Math.asinh(f / (2 * m));
      gradient[i] = slope;
      metric[i] = psi;
      entropy += psi - 2 * m + f * slope;
    }
    return entropy;
  },
};
