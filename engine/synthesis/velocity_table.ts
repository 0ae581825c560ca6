/** Light against velocity on a uniform grid whose middle is at velocity zero. */
export interface VelocityTable {
  /** Distance between grid points, km/s. */
  readonly step_kms: number;
  /** Grid points on either side of the middle; the table has 2 half + 1 values. */
  readonly half: number;
  /** Light at each grid point, or per km/s after {@linkcode blur}. */
  readonly values: Float64Array;
}

/** Grid points to a standard deviation: cubic deposit and look-up are then good to 5e-5 of a Gaussian's peak. */
export const POINTS_PER_SIGMA = 6;

/** Beyond this many standard deviations a Gaussian is cut off: 1e-8 of its peak. */
export const REACH_SIGMA = 6;

/** An empty table that reaches at least `reach_kms` on either side, with room for cubic weights. */
export function emptyTable(step_kms: number, reach_kms: number): VelocityTable {
  const half = Math.ceil(reach_kms / step_kms) + 3;
  return { step_kms, half, values: new Float64Array(2 * half + 1) };
}

/**
 * Adds light at a velocity to the four nearest grid points, by the weights of cubic interpolation:
 * light, mean, variance and third moment are kept exactly.
 */
export function deposit(table: VelocityTable, velocity_kms: number, light: number): void {
  const { step_kms, half, values } = table;
  const x = velocity_kms / step_kms + half;
  const k = Math.floor(x);
  const t = x - k;
  const s = 1 - t;
  const sixth = light * t * s / 6;
  const middle = light * (1 + t) * (1 + s) / 2;
  values[k - 1]! -= sixth * (1 + s);
  values[k]! += middle * s;
  values[k + 1]! += middle * t;
  values[k + 2]! -= sixth * (1 + t);
}

/** The table convolved with a Gaussian, as light per km/s, long enough to hold the Gaussian's wings. */
export function blur(table: VelocityTable, sigma_kms: number): VelocityTable {
  const { step_kms, half, values } = table;
  const reach = Math.ceil(REACH_SIGMA * sigma_kms / step_kms);
  const weights = new Float64Array(reach + 1);
  const scale = step_kms / sigma_kms;
  let sum = 0;
  for (let j = 0; j <= reach; j++) {
    const z = j * scale;
    weights[j] = Math.exp(-0.5 * z * z);
    sum += j === 0 ? 1 : 2 * weights[j]!;
  }
  for (let j = 0; j <= reach; j++) weights[j]! /= sum * step_kms;

  const wide = half + reach;
  const blurred = new Float64Array(2 * wide + 1);
  const middle = weights[0]!;
  for (let k = 0; k < values.length; k++) {
    const value = values[k]!;
    if (value === 0) continue;
    const at = k + reach;
    blurred[at]! += value * middle;
    for (let j = 1; j <= reach; j++) {
      const share = value * weights[j]!;
      blurred[at - j]! += share;
      blurred[at + j]! += share;
    }
  }
  return { step_kms, half: wide, values: blurred };
}

/**
 * Adds the table, shifted and scaled, to samples: cubic interpolation at each velocity within its
 * reach.
 */
export function addTable(
  table: VelocityTable,
  { velocity, from, to, shift, scale, into }: {
    /** Velocities of the samples, increasing between `from` and `to`, km/s. */
    readonly velocity: Float64Array;
    readonly from: number;
    readonly to: number;
    /** Velocity at which the table's middle is seen, km/s. */
    readonly shift: number;
    readonly scale: number;
    readonly into: Float64Array;
  },
): void {
  const { step_kms, half, values } = table;
  const per_step = 1 / step_kms;
  const last = 2 * half - 2;
  const offset = half - shift * per_step;
  for (let n = from; n < to; n++) {
    const x = velocity[n]! * per_step + offset;
    const k = Math.floor(x);
    if (k < 1 || k > last) continue;
    const t = x - k;
    const s = 1 - t;
    const outer = t * s / 6;
    const inner = (1 + t) * (1 + s) / 2;
    into[n]! += scale * (
      inner * (s * values[k]! + t * values[k + 1]!) -
      outer * ((1 + s) * values[k - 1]! + (1 + t) * values[k + 2]!)
    );
  }
}
