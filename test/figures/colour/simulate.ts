import type { Rgb } from "../../../engine/figures/mod.ts";

// Linear-light matrices for full dichromacy: Machado, Oliveira & Fernandes 2009, IEEE TVCG 15, 1291
// (values from memory; each row sums to one, so grey stays grey).
const matrices = {
  protanopia: [
    [0.152286, 1.052583, -0.204868],
    [0.114503, 0.786281, 0.099216],
    [-0.003882, -0.048116, 1.051998],
  ],
  deuteranopia: [
    [0.367322, 0.860646, -0.227968],
    [0.280085, 0.672501, 0.047413],
    [-0.01182, 0.04294, 0.968881],
  ],
  tritanopia: [
    [1.255528, -0.076749, -0.178779],
    [-0.078411, 0.930809, 0.147602],
    [0.004733, 0.691367, 0.3039],
  ],
} as const;

/** A kind of colour blindness. */
export type Deficiency = keyof typeof matrices;

/** The three kinds. */
export const deficiencies = Object.keys(matrices) as Deficiency[];

/** A colour as it looks with a deficiency. */
export function simulate(rgb: Rgb, deficiency: Deficiency): Rgb {
  const linear = rgb.map((value) => {
    const v = value / 255;
    return v <= 0.04045 ? v / 12.92 : ((v + 0.055) / 1.055) ** 2.4;
  });
  const seen = matrices[deficiency].map((row) => {
    const sum = row.reduce((total, weight, i) => total + weight * linear[i]!, 0);
    const v = Math.min(1, Math.max(0, sum));
    return 255 * (v <= 0.0031308 ? 12.92 * v : 1.055 * v ** (1 / 2.4) - 0.055);
  });
  return [seen[0]!, seen[1]!, seen[2]!];
}
