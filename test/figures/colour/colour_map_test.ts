import { assert, assertAlmostEquals, assertGreater, assertLess } from "@std/assert";
import {
  ACCENT,
  COLOUR_COUNT,
  type ColourMapName,
  colourMapNames,
  colourTable,
  INK,
  type Lab,
  labToRgb,
  QUIET,
  type Rgb,
  rgbToLab,
  SERIES,
} from "../../../engine/figures/mod.ts";
import { deficiencies, type Deficiency, simulate } from "./simulate.ts";

function colours(name: ColourMapName): Rgb[] {
  const table = colourTable(name);
  return Array.from(
    { length: COLOUR_COUNT },
    (_, i) => [table[3 * i]!, table[3 * i + 1]!, table[3 * i + 2]!],
  );
}

function distance(a: Lab, b: Lab): number {
  return Math.hypot(a[0] - b[0], a[1] - b[1], a[2] - b[2]); // CIE 1976
}

Deno.test("labToRgb() undoes rgbToLab() when colours lie on the screen", () => {
  for (const rgb of [[0, 0, 0], [255, 255, 255], [12, 200, 99], [250, 3, 120]] as const) {
    labToRgb(rgbToLab(rgb)).forEach((value, i) => assertAlmostEquals(value, rgb[i]!, 0.01));
  }
});

// Seen by everyone and in grey: the maps that stand as defaults.
for (const name of ["ink", "tide", "grey", "viridis", "cividis", "magma"] as const) {
  Deno.test(`colourTable() of ${name} has even steps of lightness when printed in grey`, () => {
    const lightness = colours(name).map((rgb) => rgbToLab(rgb)[0]);
    const steps = lightness.slice(16).map((value, i) => (value - lightness[i]!) / 16);
    const mean = steps.reduce((sum, step) => sum + step, 0) / steps.length;
    for (const step of steps) assertGreater(step / mean, 0.5);
  });

  for (const deficiency of deficiencies) {
    Deno.test(`colourTable() of ${name} keeps its order with ${deficiency}`, () => {
      const seen = colours(name).map((rgb) => rgbToLab(simulate(rgb, deficiency)));
      const rising = Math.sign(seen.at(-1)![0] - seen[0]![0]);
      for (let i = 0; i + 16 < COLOUR_COUNT; i++) {
        assertGreater(rising * (seen[i + 16]![0] - seen[i]![0]), 0);
        // A step of 1/16 of the scale stays visible: 2.3 is just noticeable (Mahy et al. 1994).
        assertGreater(distance(seen[i + 16]!, seen[i]!), 2.3);
      }
    });
  }
}

Deno.test("colourTable() has perceptually even steps when the map is one of ours", () => {
  for (const name of ["ink", "tide", "grey"] as const) {
    const seen = colours(name).map(rgbToLab);
    const steps = seen.slice(8).map((lab, i) => distance(lab, seen[i]!));
    assertLess(Math.max(...steps) / Math.min(...steps), 1.7);
  }
});

Deno.test("colourTable() of tide and balance has a neutral middle", () => {
  for (const name of ["tide", "balance"] as const) {
    const [, a, b] = rgbToLab(colours(name)[127]!);
    assertLess(Math.hypot(a, b), 8);
  }
});

Deno.test("ACCENT stands off every colour of the default map however it is seen", () => {
  const accent = hexRgb(ACCENT);
  for (const deficiency of [undefined, ...deficiencies]) {
    const view = (rgb: Rgb) => rgbToLab(deficiency ? simulate(rgb, deficiency as Deficiency) : rgb);
    for (const rgb of colours("ink")) assertGreater(distance(view(accent), view(rgb)), 25);
  }
});

function hexRgb(colour: string): Rgb {
  return [1, 3, 5].map((i) => parseInt(colour.slice(i, i + 2), 16)) as unknown as Rgb;
}

Deno.test("SERIES stand apart from each other however they are seen", () => {
  for (const deficiency of [undefined, ...deficiencies]) {
    const seen = SERIES.map(hexRgb).map((rgb) =>
      rgbToLab(deficiency ? simulate(rgb, deficiency) : rgb)
    );
    for (let i = 0; i < seen.length; i++) {
      for (let k = 0; k < i; k++) assertGreater(distance(seen[i]!, seen[k]!), 20);
    }
  }
});

Deno.test("text colours have the contrast of 4.5 that small letters need on paper", () => {
  // Web Content Accessibility Guidelines 2.2, 1.4.3: (L1 + 0.05) / (L2 + 0.05) of relative luminance.
  const luminance = (colour: string) => ((rgbToLab(hexRgb(colour))[0] + 16) / 116) ** 3;
  for (const colour of [INK, QUIET, ...SERIES]) {
    const contrast = 1.05 / (luminance(colour) + 0.05);
    assertGreater(contrast, 4.5);
  }
});

Deno.test("colourTable() has 256 colours when any map is asked for", () => {
  for (const name of colourMapNames) assert(colourTable(name).length === 3 * COLOUR_COUNT);
});
