import type { SpectralLine } from "../../sky/mod.ts";
import type { Box, Group } from "../display_list.ts";
import { lineLabel } from "../line_label.ts";
import type { PlotLayer } from "../plot_layer.ts";
import { NOTE_PT, QUIET } from "../style.ts";
import { layerRange, type PanelPlace, plotPanel } from "./plot_panel.ts";

/** A mean spectrum. */
export interface MeanSpectrum {
  /** Wavelengths in vacuum, Å, N values. */
  readonly wavelength_angstrom: ArrayLike<number>;
  /** Flux over the continuum, or in the unit of `unit`; N values. */
  readonly flux: ArrayLike<number>;
  /** One standard deviation, N values. */
  readonly error?: ArrayLike<number>;
  /** Unit or quantity (markup of `labelRuns`). @default {"flux over continuum"} */
  readonly unit?: string;
}

/** How a spectrum is drawn. */
export interface SpectrumPanelOptions extends PanelPlace {
  /** Lines to identify; those outside the range are left out. @default {[]} */
  readonly lines?: readonly SpectralLine[];
}

/**
 * Draws a mean spectrum with its lines named above it. Names that would touch are moved apart and
 * joined to their lines.
 *
 * @param spectrum The spectrum.
 * @param options Place and lines.
 * @returns The panel.
 *
 * @example
 * ```ts
 * import { spectrumPanel } from "@millrace/millrace/figures";
 * import { assertEquals } from "@std/assert";
 *
 * const frame = { x: 30, y: 10, width: 200, height: 80 };
 * const panel = spectrumPanel({ wavelength_angstrom: [4800, 4900], flux: [1, 1] }, { frame });
 * assertEquals(panel.name, "spectrum");
 * ```
 */
export function spectrumPanel(spectrum: MeanSpectrum, options: SpectrumPanelOptions): Group {
  const { frame, name = "spectrum", lines = [] } = options;
  const { wavelength_angstrom: x, flux: y, unit = "flux over continuum" } = spectrum;
  const curve = { kind: "line", x, y, width_pt: 0.6, steps: true } as const;
  const x_range = options.x_range ?? [x[0] ?? 0, x[x.length - 1] ?? 1] as const;
  const [low, high] = options.y_range ?? layerRange([curve], "y");
  // Names stand upright in a band of their own above the spectrum.
  const band = 46 / frame.height;
  const top = low + (high - low) / (1 - Math.min(0.6, band));
  const seen = lines
    .filter((line) => line.vacuum_angstrom > x_range[0] && line.vacuum_angstrom < x_range[1])
    .sort((a, b) => a.vacuum_angstrom - b.vacuum_angstrom);
  const places = spreadOut(seen.map((line) => line.vacuum_angstrom), { x_range, frame });
  const foot = high + 0.02 * (top - low);
  const layers = seen.flatMap((line, i): PlotLayer[] => [
    {
      kind: "line",
      x: [line.vacuum_angstrom, line.vacuum_angstrom, places[i]!],
      y: [foot, foot + 0.02 * (top - low), foot + 0.06 * (top - low)],
      colour: QUIET,
      width_pt: 0.5,
    },
    {
      kind: "note",
      x: places[i]! + 0.3 * NOTE_PT * (x_range[1] - x_range[0]) / frame.width,
      y: foot + 0.08 * (top - low),
      text: lineLabel(line.name),
      plain: true,
      rotate_deg: -90,
      colour: QUIET,
    },
  ]);
  return plotPanel([...layers, curve], {
    frame,
    name,
    x: { range: x_range, label: "wavelength in vacuum (Å)", ticks: Math.round(frame.width / 45) },
    y: { range: [low, top], label: unit, ticks: 4 },
  });
}

/** Moves places apart until neighbours are a line of text away from each other, order kept. */
function spreadOut(
  places: readonly number[],
  axis: { readonly x_range: readonly [number, number]; readonly frame: Box },
): number[] {
  const apart = 1.15 * NOTE_PT * (axis.x_range[1] - axis.x_range[0]) / axis.frame.width;
  const moved = [...places];
  for (let round = 0; round < 200; round++) {
    let touched = false;
    for (let i = 1; i < moved.length; i++) {
      const lack = apart - (moved[i]! - moved[i - 1]!);
      if (lack <= 1e-9 * apart) continue;
      moved[i - 1]! -= lack / 2;
      moved[i]! += lack / 2;
      touched = true;
    }
    if (!touched) break;
  }
  return moved;
}
