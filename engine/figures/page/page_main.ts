/// <reference lib="dom" />
// The script of the report page. It reads the data block, draws the views with the same code that
// draws plates, and joins them: what is pointed at in one is shown in the others.
import { lineLabel } from "../line_label.ts";
import type { StretchName } from "../colour/stretch.ts";
import { itemsMarkup, pictureMarkup } from "./browser_svg.ts";
import { bindPointer, type PlacedPointer } from "./page_pointer.ts";
import { saveView } from "./page_save.ts";
import {
  lineReader,
  nearestRow,
  type PageBinary,
  type PageState,
  type Probe,
  startBinary,
} from "./page_state.ts";
import {
  exposurePicture,
  MAP_SIZE,
  mapOverlay,
  mapPicture,
  mapPlace,
  type Shown,
  TRAIL_FRAMES,
  TRAIL_SIZE,
  trailOverlay,
  trailPicture,
  trailPlace,
} from "./page_views.ts";
import { describeProbe } from "./page_words.ts";
import type { ReportData } from "./report_data.ts";

function element<T extends HTMLElement>(id: string): T {
  return document.getElementById(id) as T;
}

const data = JSON.parse(element("report-data").textContent!) as ReportData;
const readLine = lineReader(data);

let state: PageState = {
  line: 0,
  map: 0,
  stretch: "linear",
  exposure: 0,
  binary: startBinary(data.binary, data.lines[0]!.systemic_kms),
  probe: null,
};

function shown(of = state): Shown {
  const line = readLine(of.line);
  return { line, map: line.maps[Math.min(of.map, line.maps.length - 1)]! };
}

/** Goes to a new state and draws what it changes. */
function go(change: Partial<PageState>): void {
  const before = state;
  state = { ...state, ...change };
  const other = (...keys: (keyof PageState)[]) => keys.some((key) => state[key] !== before[key]);
  if (other("line", "map", "stretch")) drawAll();
  else {
    if (other("probe", "binary")) drawOver();
    else if (other("exposure")) drawTrailOver();
    if (other("probe", "binary", "exposure")) drawExposure();
  }
  if (other("line", "map", "probe", "exposure", "binary")) tell();
}

function drawAll(): void {
  const seen = shown();
  element("map-drawing").innerHTML = pictureMarkup(mapPicture(seen, state), "map");
  element("trail-drawing").innerHTML = pictureMarkup(trailPicture(seen, state), "trail");
  drawOver();
  drawExposure();
}

function layer(id: string, size: { width: number; height: number }, body: string): void {
  const box = `viewBox="0 0 ${size.width} ${size.height}"`;
  element(id).innerHTML =
    `<svg xmlns="http://www.w3.org/2000/svg" ${box} aria-hidden="true">${body}</svg>`;
}

function drawOver(): void {
  layer("map-over", MAP_SIZE, itemsMarkup(mapOverlay(shown(), state), "map-over"));
  drawTrailOver();
}

function drawTrailOver(): void {
  layer("trail-over", TRAIL_SIZE, itemsMarkup(trailOverlay(shown(), state), "trail-over"));
}

function drawExposure(): void {
  element("exposure-drawing").innerHTML = pictureMarkup(
    exposurePicture(shown(), state),
    "exposure",
  );
}

function tell(): void {
  const seen = shown();
  element("readout").textContent = describeProbe(seen, state);
  const { grid, sources } = seen.line;
  const phase = grid.phase[state.exposure]!;
  const source = sources[state.exposure];
  element("exposure-name").textContent = `${state.exposure + 1} of ${grid.rows}, phase ` +
    `${phase.toFixed(3)}${source ? `, ${source}` : ""}`;
  const chi = seen.map.reduced_chi_square;
  element("shown-name").textContent = `${lineLabel(seen.line.name)}, rest wavelength ` +
    `${seen.line.air_angstrom.toFixed(2)} Å in air, ${seen.map.method}` +
    (chi === null ? "" : `, χ²/N = ${chi.toFixed(2)}`);
}

function clampProbe(probe: Probe): Probe {
  const seen = shown();
  if (probe.at === "map") {
    const { half_width_kms } = seen.map.map;
    const clamp = (v: number) => Math.max(-half_width_kms, Math.min(half_width_kms, v));
    return { at: "map", vx_kms: clamp(probe.vx_kms), vy_kms: clamp(probe.vy_kms) };
  }
  const { first_kms, step_kms, columns } = seen.line.grid;
  const last = first_kms + (columns - 1) * step_kms;
  const velocity_kms = Math.max(first_kms, Math.min(last, probe.velocity_kms));
  return { at: "trail", velocity_kms, phase: probe.phase - Math.floor(probe.phase) };
}

function pointAtMap({ x, y }: PlacedPointer): Probe | null {
  const place = mapPlace(shown());
  const unit = place.x(1) - place.x(0);
  const vx_kms = (x - place.x(0)) / unit;
  const vy_kms = (place.y(0) - y) / unit;
  return Math.hypot(vx_kms, vy_kms) > place.reach_kms ? null : { at: "map", vx_kms, vy_kms };
}

function pointAtTrail({ x, y }: PlacedPointer): Probe | null {
  const frame = TRAIL_FRAMES.find((f) => {
    return x >= f.x && x <= f.x + f.width && y >= f.y && y <= f.y + f.height;
  });
  if (!frame) return null;
  const place = trailPlace(shown(), frame);
  const velocity_kms = (x - place.x(0)) / (place.x(1) - place.x(0));
  const phase = (y - place.y(0)) / (place.y(1) - place.y(0));
  return { at: "trail", velocity_kms, phase: phase - Math.floor(phase) };
}

/** A click holds a probe until Escape or the next click. */
let held = false;

function bindViews(): void {
  const views = [["map-view", MAP_SIZE, pointAtMap], [
    "trail-view",
    TRAIL_SIZE,
    pointAtTrail,
  ]] as const;
  for (const [id, size, point] of views) {
    bindPointer(element(id), {
      size,
      move: (at) => held || go({ probe: point(at) }),
      leave: () => held || go({ probe: null }),
      press(at) {
        const probe = point(at);
        held = probe !== null;
        const row = probe?.at === "trail"
          ? nearestRow(shown().line.grid, probe.phase)
          : state.exposure;
        setExposure(row);
        go({ probe });
      },
      step: (dx, dy) => stepProbe(id === "map-view" ? "map" : "trail", dx, dy),
      clear() {
        held = false;
        go({ probe: null });
      },
    });
  }
}

/** Moves what is pointed at by pixels of the map, or bins and exposures of the trail. */
function stepProbe(at: Probe["at"], dx: number, dy: number): void {
  held = true;
  const seen = shown();
  if (at === "map") {
    const { half_width_kms, pixels } = seen.map.map;
    const step = 2 * half_width_kms / (pixels - 1);
    const from = state.probe?.at === "map" ? state.probe : { vx_kms: 0, vy_kms: 0 };
    const moved = { vx_kms: from.vx_kms + dx * step, vy_kms: from.vy_kms + dy * step };
    go({ probe: clampProbe({ at: "map", ...moved }) });
    return;
  }
  const { grid } = seen.line;
  const from = state.probe?.at === "trail"
    ? state.probe
    : { velocity_kms: seen.line.systemic_kms, phase: grid.phase[state.exposure]! };
  const velocity_kms = from.velocity_kms + dx * grid.step_kms;
  go({ probe: clampProbe({ at: "trail", velocity_kms, phase: from.phase + dy * 0.01 }) });
}

function setExposure(row: number): void {
  element<HTMLInputElement>("exposure-slider").value = String(row);
  go({ exposure: row });
}

function bindExposure(): void {
  const slider = element<HTMLInputElement>("exposure-slider");
  const order = () => {
    slider.max = String(shown().line.grid.rows - 1);
    setExposure(Math.min(state.exposure, shown().line.grid.rows - 1));
  };
  slider.addEventListener("input", () => go({ exposure: Number(slider.value) }));
  order();
  document.addEventListener("report-line", order);
}

const digits: Readonly<Record<string, number>> = {
  mass_ratio: 3,
  k_sum_kms: 0,
  systemic_kms: 1,
  phase_zero: 3,
  outer_radius_over_a: 2,
  inner_radius_over_a: 3,
};

function bindSliders(): void {
  const start = state.binary;
  if (start === null) return;
  const sliders = Object.keys(start).map((key) => {
    const slider = element<HTMLInputElement>(`slider-${key}`);
    const output = element<HTMLOutputElement>(`value-${key}`);
    const show = () =>
      output.textContent = Number(slider.value).toFixed(digits[key]).replace("-", "−");
    slider.addEventListener("input", () => {
      show();
      go({ binary: { ...state.binary!, [key]: Number(slider.value) } as PageBinary });
    });
    return { key: key as keyof PageBinary, slider, show };
  });
  const set = (binary: PageBinary) => {
    for (const { key, slider, show } of sliders) {
      slider.value = String(binary[key]);
      show();
    }
    go({ binary });
  };
  element("reset").addEventListener("click", () => {
    set(startBinary(data.binary, shown().line.systemic_kms)!);
  });
  set(start);
}

function bindSwitches(): void {
  const on = (name: string, act: (value: string) => void) => {
    for (const input of document.querySelectorAll<HTMLInputElement>(`input[name="${name}"]`)) {
      input.addEventListener("change", () => input.checked && act(input.value));
    }
  };
  on("line", (value) => {
    const line = Number(value);
    const rows = readLine(line).grid.rows;
    go({ line, map: 0, exposure: Math.min(state.exposure, rows - 1) });
    offerMethods();
    document.dispatchEvent(new Event("report-line"));
  });
  on("stretch", (value) => go({ stretch: value as StretchName }));
  element("methods").addEventListener("change", (event) => {
    go({ map: Number((event.target as HTMLInputElement).value) });
  });
  offerMethods();
}

/** The methods of the line shown. */
function offerMethods(): void {
  const box = element("methods");
  box.replaceChildren(
    ...readLine(state.line).maps.map(({ method }, i) => {
      const label = document.createElement("label");
      const input = document.createElement("input");
      Object.assign(input, {
        type: "radio",
        name: "method",
        value: String(i),
        checked: i === state.map,
      });
      label.append(input, ` ${method}`);
      return label;
    }),
  );
}

function bindButtons(): void {
  const save = (format: "svg" | "png") => () => saveView(shown(), state, format);
  element("save-svg").addEventListener("click", save("svg"));
  element("save-png").addEventListener("click", save("png"));
  const copy = document.getElementById("copy-target");
  copy?.addEventListener("click", async () => {
    const text = element("target-text").textContent ?? "";
    await navigator.clipboard.writeText(text).then(
      () => copy.textContent = "Copied",
      () => getSelection()?.selectAllChildren(element("target-text")),
    );
  });
}

bindSwitches();
drawAll();
bindViews();
bindExposure();
bindSliders();
bindButtons();
tell();
document.documentElement.dataset.ready = "true";
