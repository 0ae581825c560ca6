const BARS = " ▁▂▃▄▅▆▇█";

/**
 * Draws how the orbit is covered: one character per bin of phase, taller for more exposure time.
 *
 * @param coverage Time on each bin in units of the fullest or any other, B values.
 * @returns Two lines: the bars and the phases under them.
 */
export function phaseStrip(coverage: ArrayLike<number>): string[] {
  const highest = Math.max(...Array.from(coverage), 1e-300);
  const bars = Array.from(coverage, (value) => {
    if (!(value > 0)) return BARS[0]!;
    return BARS[Math.max(1, Math.ceil((value / highest) * (BARS.length - 1)))]!;
  }).join("");
  const quarter = Math.floor(coverage.length / 4);
  const scale = ["0", "0.25", "0.5", "0.75"].map((label) => label.padEnd(quarter)).join("");
  return [`│${bars}│`, ` ${scale.slice(0, coverage.length - 1).padEnd(coverage.length)}1`];
}
