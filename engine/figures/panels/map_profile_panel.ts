import type { VelocityMap } from "../../tomography/mod.ts";
import type { Group } from "../display_list.ts";
import type { PlotLayer } from "../plot_layer.ts";
import { tidyExponent } from "../colour/colour_bar.ts";
import {
  azimuthProfile,
  type MapProfile,
  type MapProfileOptions,
  radialProfile,
} from "./map_profile.ts";
import { type PanelPlace, plotPanel } from "./plot_panel.ts";
import { KMS_LABEL } from "./trail_panel.ts";

/** How a profile of a map is taken and drawn. */
export interface MapProfilePanelOptions extends PanelPlace, MapProfileOptions {}

/**
 * Draws the mean intensity of a map against the speed about the accretor, the spread of the pixels
 * as a band.
 *
 * @param map The map.
 * @param options Place and centre.
 * @returns The panel.
 *
 * @example
 * ```ts
 * import { radialProfilePanel } from "@millrace/millrace/figures";
 * import { assertEquals } from "@std/assert";
 *
 * const map = { pixels: 5, half_width_kms: 200, intensity: new Float64Array(25).fill(3) };
 * const frame = { x: 30, y: 10, width: 100, height: 60 };
 * assertEquals(radialProfilePanel(map, { frame }).name, "radial-profile");
 * ```
 */
export function radialProfilePanel(map: VelocityMap, options: MapProfilePanelOptions): Group {
  return draw(radialProfile(map, options), options, {
    name: "radial-profile",
    label: `speed about the accretor (${KMS_LABEL})`,
    range: [0, map.half_width_kms],
  });
}

/**
 * Draws the mean intensity of a map against azimuth about the accretor: 0° towards +Vx, 90° towards +Vy.
 *
 * @param map The map.
 * @param options Place, centre, range of speeds.
 * @returns The panel.
 *
 * @example
 * ```ts
 * import { azimuthProfilePanel } from "@millrace/millrace/figures";
 * import { assertEquals } from "@std/assert";
 *
 * const map = { pixels: 5, half_width_kms: 200, intensity: new Float64Array(25).fill(3) };
 * const frame = { x: 30, y: 10, width: 100, height: 60 };
 * assertEquals(azimuthProfilePanel(map, { frame }).name, "azimuth-profile");
 * ```
 */
export function azimuthProfilePanel(map: VelocityMap, options: MapProfilePanelOptions): Group {
  return draw(azimuthProfile(map, options), options, {
    name: "azimuth-profile",
    label: "azimuth about the accretor (°)",
    range: [-180, 180],
    ticks: [-180, -90, 0, 90, 180],
  });
}

interface ProfileAxis {
  readonly name: string;
  readonly label: string;
  readonly range: readonly [number, number];
  readonly ticks?: readonly number[];
}

function draw(profile: MapProfile, options: PanelPlace, axis: ProfileAxis): Group {
  const { frame, name = axis.name, x_range = axis.range, y_range } = options;
  const peak = profile.mean.reduce((top, v) => Number.isFinite(v) ? Math.max(top, v) : top, 0);
  const exponent = tidyExponent([0, peak]);
  const scaled = (values: Float64Array) => values.map((value) => value / 10 ** exponent);
  const mean = scaled(profile.mean);
  const spread = scaled(profile.spread);
  const seen = Array.from(mean.keys()).filter((i) => Number.isFinite(mean[i]!));
  const layers: PlotLayer[] = [
    {
      kind: "band",
      x: seen.map((i) => profile.x[i]!),
      low: seen.map((i) => mean[i]! - spread[i]!),
      high: seen.map((i) => mean[i]! + spread[i]!),
    },
    { kind: "line", x: profile.x, y: mean },
  ];
  const power = exponent === 0 ? "" : `10^{${String(exponent).replace("-", "−")}} `;
  return plotPanel(layers, {
    frame,
    name,
    x: { range: x_range, label: axis.label, ticks: axis.ticks ?? 5 },
    y: {
      label: `mean (${power}(${KMS_LABEL})^{−1})`,
      ticks: 4,
      ...(y_range ? { range: y_range } : {}),
    },
  });
}
