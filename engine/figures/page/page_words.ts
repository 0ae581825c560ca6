import { nearestRow, type PageState } from "./page_state.ts";
import { type Shown, systemicOf } from "./page_views.ts";

/** Says in one line what is pointed at. */
export function describeProbe(shown: Shown, state: PageState): string {
  const { probe } = state;
  if (probe === null) {
    return "Point at the map to see the S-wave of a place; at a trail to see the places of a velocity. " +
      "A click holds it, Escape lets go; arrow keys move it.";
  }
  const gamma = systemicOf(state, shown.line.systemic_kms);
  if (probe.at === "map") {
    const { map } = shown.map;
    const step = 2 * map.half_width_kms / (map.pixels - 1);
    const column = Math.round((probe.vx_kms + map.half_width_kms) / step);
    const row = Math.round((probe.vy_kms + map.half_width_kms) / step);
    const value = map.intensity[row * map.pixels + column];
    const speed = Math.hypot(probe.vx_kms, probe.vy_kms);
    // V − γ = K sin 2π(φ − φ0) with K cos 2πφ0 = Vy and K sin 2πφ0 = Vx.
    const turn = Math.atan2(probe.vx_kms, probe.vy_kms) / (2 * Math.PI);
    const crossing = turn - Math.floor(turn);
    return `Vx ${whole(probe.vx_kms)}, Vy ${whole(probe.vy_kms)} km/s: an S-wave of ${
      whole(speed)
    } ` +
      `km/s about ${whole(gamma)} km/s, crossing upwards at phase ${
        crossing.toFixed(3)
      }; intensity ` +
      `${
        value === undefined || Number.isNaN(value) ? "none" : minus(value.toPrecision(3))
      } per km/s`;
  }
  const { grid } = shown.line;
  const row = nearestRow(grid, probe.phase);
  const column = Math.round((probe.velocity_kms - grid.first_kms) / grid.step_kms);
  const at = row * grid.columns + column;
  const number = (value: number | undefined, digits = 3) =>
    value === undefined || !Number.isFinite(value) ? "none" : minus(value.toFixed(digits));
  return `Phase ${probe.phase.toFixed(3)}, ${whole(probe.velocity_kms)} km/s: nearest exposure ` +
    `${row + 1} has ${number(grid.flux[at])} ± ${number(grid.error[at])}, model ` +
    `${number(shown.map.model[at])}, residual ${
      number(shown.map.residual[at], 1)
    } σ; the line on the ` +
    `map holds all places seen at this velocity`;
}

function whole(value: number): string {
  return minus(String(Math.round(value)));
}

function minus(text: string): string {
  return text.replace("-", "−");
}
