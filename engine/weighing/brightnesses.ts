/** Columns of a linear problem and what is to be explained, by their products alone. */
export interface Products {
  /** Number of columns, m. */
  readonly size: number;
  /** Products of columns, m × m row-major. */
  readonly gram: Float64Array;
  /** Product of each column with the data, m values. */
  readonly target: Float64Array;
}

/** Products of columns with each other and with the data. */
export function productsOf(columns: readonly Float64Array[], data: Float64Array): Products {
  const size = columns.length;
  const gram = new Float64Array(size * size);
  const target = new Float64Array(size);
  for (let a = 0; a < size; a++) {
    const column = columns[a]!;
    target[a] = dot(column, data);
    for (let b = 0; b <= a; b++) gram[a * size + b] = gram[b * size + a] = dot(column, columns[b]!);
  }
  return { size, gram, target };
}

/** Scalar product. */
export function dot(a: Float64Array, b: Float64Array): number {
  // Four sums, so that one addition need not wait for the last.
  let s0 = 0, s1 = 0, s2 = 0, s3 = 0;
  const whole = a.length & ~3;
  let n = 0;
  for (; n < whole; n += 4) {
    s0 += a[n]! * b[n]!;
    s1 += a[n + 1]! * b[n + 1]!;
    s2 += a[n + 2]! * b[n + 2]!;
    s3 += a[n + 3]! * b[n + 3]!;
  }
  for (; n < a.length; n++) s0 += a[n]! * b[n]!;
  return s0 + s1 + (s2 + s3);
}

/** Columns nearer to their neighbours' span than this (squared, relative) do not count. */
const DEPENDENT = 1e-12;

/**
 * Lower triangle L with L Lᵀ = gram, m × m row-major; a column that depends on those before it
 * gets a row of zeros.
 */
export function cholesky(gram: Float64Array, size: number): Float64Array {
  const lower = new Float64Array(size * size);
  for (let i = 0; i < size; i++) {
    for (let j = 0; j <= i; j++) {
      let sum = gram[i * size + j]!;
      for (let k = 0; k < j; k++) sum -= lower[i * size + k]! * lower[j * size + k]!;
      const pivot = lower[j * size + j]!;
      if (i !== j) lower[i * size + j] = pivot > 0 ? sum / pivot : 0;
      else if (sum > DEPENDENT * gram[i * size + i]!) lower[i * size + i] = Math.sqrt(sum);
      else lower.fill(0, i * size, i * size + i + 1);
    }
  }
  return lower;
}

/** Solves L x = b; rows of zeros give zeros. */
export function solveLower(lower: Float64Array, right: ArrayLike<number>): Float64Array {
  const size = right.length;
  const x = new Float64Array(size);
  for (let i = 0; i < size; i++) {
    const pivot = lower[i * size + i]!;
    if (!(pivot > 0)) continue;
    let sum = right[i]!;
    for (let k = 0; k < i; k++) sum -= lower[i * size + k]! * x[k]!;
    x[i] = sum / pivot;
  }
  return x;
}

/** Solves Lᵀ x = b; rows of zeros give zeros. */
export function solveUpper(lower: Float64Array, right: ArrayLike<number>): Float64Array {
  const size = right.length;
  const x = new Float64Array(size);
  for (let i = size - 1; i >= 0; i--) {
    const pivot = lower[i * size + i]!;
    if (!(pivot > 0)) continue;
    let sum = right[i]!;
    for (let k = i + 1; k < size; k++) sum -= lower[k * size + i]! * x[k]!;
    x[i] = sum / pivot;
  }
  return x;
}

/** Slope below which a dark part is dark for a reason, relative to its own. */
const FLAT = 1e-9;

/**
 * Amplitudes that fit best when some may have either sign and the others must not be negative. The
 * first kind is eliminated (variable projection: Golub & Pereyra 1973, SIAM J. Numer. Anal. 10,
 * 413). Of the others there are as many as a hypothesis has parts, so every choice of dark ones is
 * tried until one meets the conditions of the minimum (Karush, Kuhn & Tucker): no iteration can cycle.
 *
 * @param products Columns of either sign first.
 * @param signed Number of columns of either sign.
 * @returns Amplitudes, in the order of the columns.
 */
export function solveBrightnesses(products: Products, signed: number): Float64Array {
  const { size, gram, target } = products;
  const positive = size - signed;
  let best = new Float64Array(size);
  let least = Infinity;
  for (let dark = 0; dark < 1 << positive; dark++) {
    const lit = Array.from({ length: size }, (_, j) => j)
      .filter((j) => j < signed || (dark & 1 << (j - signed)) === 0);
    const inner = Float64Array.from(
      { length: lit.length * lit.length },
      (_, k) => gram[lit[Math.floor(k / lit.length)]! * size + lit[k % lit.length]!]!,
    );
    const lower = cholesky(inner, lit.length);
    const found = solveUpper(lower, solveLower(lower, lit.map((j) => target[j]!)));
    if (lit.some((j, i) => j >= signed && found[i]! < 0)) continue;
    const all = new Float64Array(size);
    lit.forEach((j, i) => all[j] = found[i]!);
    // Half the square of the residual, less that of the data; and how it falls as dark parts light up.
    let value = 0, optimal = true;
    for (let i = 0; i < size; i++) {
      let product = 0;
      for (let j = 0; j < size; j++) product += gram[i * size + j]! * all[j]!;
      value += all[i]! * (0.5 * product - target[i]!);
      const slope = target[i]! - product;
      if (all[i] === 0 && i >= signed && slope > FLAT * Math.abs(target[i]!)) optimal = false;
    }
    if (optimal) return all;
    if (value < least) [least, best] = [value, all];
  }
  return best;
}
