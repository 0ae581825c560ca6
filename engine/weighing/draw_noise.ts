import type { RandomStream } from "../numerics/mod.ts";
import type { NoiseBank } from "./noise_bank.ts";
import type { WeighingData } from "./weighing_data.ts";

/** Noise of one trial. */
export interface NoiseDraw {
  /** Residual over error, N values. */
  readonly residual: Float64Array;
  /** Relative excess of each exposure's line, P values. */
  readonly excess: Float64Array;
}

/**
 * Draws noise: contiguous blocks of exposures, at random places, put one after another. A drawn
 * exposure's residuals are laid out in the accretor's frame; where it has no pixel, white noise
 * stands in.
 *
 * @param bank The bank.
 * @param options The data it was made of, and the stream.
 * @returns Noise for the same samples.
 */
export function drawNoise(
  bank: NoiseBank,
  { data, random }: { readonly data: WeighingData; readonly random: RandomStream },
): NoiseDraw {
  const { count, start, pixel_kms } = data.sampling;
  const residual = new Float64Array(bank.residual.length);
  const excess = new Float64Array(count);
  const { source, turn } = drawBlocks(bank, { data, random });
  const white = whiteNoise(data, random);
  for (let i = 0; i < count; i++) {
    const j = source[i]!;
    excess[i] = turn[i]! * bank.excess[j]!;
    const from = start[j]!, to = start[j + 1]!;
    let m = from;
    for (let n = start[i]!; n < start[i + 1]!; n++) {
      const v = bank.velocity_kms[n]!;
      while (m + 1 < to && nearer(bank.velocity_kms, m, v)) m++;
      const near = bank.kind === "resampled" &&
        Math.abs(bank.velocity_kms[m]! - v) <= 0.75 * pixel_kms[n]!;
      residual[n] = near ? turn[i]! * bank.residual[m]! : white();
    }
  }
  return { residual, excess };
}

/**
 * A line with drawn noise: its brightness varied, and residuals in units of the data's errors added.
 *
 * @param line The line, N samples; not changed.
 * @param options The data whose errors count, and the noise.
 * @returns N samples.
 */
export function addNoise(
  line: Float64Array,
  { data, noise }: { readonly data: WeighingData; readonly noise: NoiseDraw },
): Float64Array {
  const { count, start } = data.sampling;
  const flux = new Float64Array(line.length);
  for (let i = 0; i < count; i++) {
    const scale = 1 + noise.excess[i]!;
    for (let n = start[i]!; n < start[i + 1]!; n++) {
      flux[n] = scale * line[n]! + data.error[n]! * noise.residual[n]!;
    }
  }
  return flux;
}

/** Whether the next sample is at least as near to a velocity as this one. */
function nearer(velocity: Float64Array, m: number, v: number): boolean {
  return Math.abs(velocity[m + 1]! - v) <= Math.abs(velocity[m]! - v);
}

/** The exposure from which each takes its noise, and the sign it is given. */
function drawBlocks(
  bank: NoiseBank,
  { data, random }: { readonly data: WeighingData; readonly random: RandomStream },
): { readonly source: Uint32Array; readonly turn: Int8Array } {
  const { count } = data.sampling;
  const members = new Map<number, number[]>();
  data.group.forEach((group, i) => {
    members.set(group, [...(members.get(group) ?? []), i]);
  });
  const source = new Uint32Array(count);
  const turn = new Int8Array(count);
  for (let i = 0; i < count;) {
    const first = random.integer(count);
    const sign = bank.structured || random.integer(2) === 0 ? 1 : -1;
    for (let k = 0; k < bank.block && i < count; k++, i++) {
      const j = (first + k) % count;
      const own = members.get(data.group[i]!)!;
      source[i] = data.group[j] === data.group[i] ? j : own[random.integer(own.length)]!;
      turn[i] = sign;
    }
  }
  return { source, turn };
}

/** Normal deviates with the correlation from pixel to pixel that was measured at lag one. */
function whiteNoise(data: WeighingData, random: RandomStream): () => number {
  const memory = Math.min(0.9, Math.max(0, data.lag_correlation[0] ?? 0));
  if (memory === 0) return () => random.normal();
  const fresh = Math.sqrt(1 - memory * memory);
  let last = random.normal();
  return () => last = memory * last + fresh * random.normal();
}
