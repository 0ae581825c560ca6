import { assert, assertAlmostEquals, assertEquals } from "@std/assert";
import {
  interstellarWindows,
  lineNamed,
  nightSkyLines,
  nightSkyWindows,
  type ObservedWindow,
  telluricBands,
  vacuumToAir,
} from "@millrace/millrace/sky";

const covers = (windows: readonly ObservedWindow[], air: number) =>
  windows.some(({ low_air_angstrom: low, high_air_angstrom: high }) => low <= air && air <= high);

Deno.test("kept windows are ordered, sourced and sane when listed", () => {
  for (const windows of [telluricBands, interstellarWindows, nightSkyWindows(2)]) {
    windows.forEach((window, i) => {
      const { name, low_angstrom, high_angstrom, source } = window;
      assertAlmostEquals(vacuumToAir(low_angstrom), window.low_air_angstrom, 1e-9, name);
      assertAlmostEquals(vacuumToAir(high_angstrom), window.high_air_angstrom, 1e-9, name);
      assert(low_angstrom < high_angstrom, name);
      assert(high_angstrom - low_angstrom < 600, name);
      assert(i === 0 || low_angstrom >= windows[i - 1]!.low_angstrom, name);
      assert(source.length > 0, name);
    });
  }
});

// The bands that the trade knows by these wavelengths: common practice, no source.
Deno.test("telluricBands cover the known bands when asked at their middles", () => {
  for (const air of [6280, 6870, 6900, 7200, 7600, 7630, 8130, 8200, 8340, 8900, 9300, 9800]) {
    assert(covers(telluricBands, air), `${air}`);
  }
  // The windows between them, where donors are measured.
  for (const air of [5100, 6100, 6400, 6700, 7500, 8000, 8500, 8700]) {
    assert(!covers(telluricBands, air), `${air}`);
  }
});

Deno.test("telluricBands cover the sodium doublet of the donor when it is near 8190", () => {
  for (const name of ["Na I 8183", "Na I 8195"]) {
    assert(covers(telluricBands, lineNamed(name).air_angstrom));
  }
});

Deno.test("interstellarWindows hold the lines of sodium, calcium and potassium when listed", () => {
  for (const name of ["Na I D1", "Na I D2", "Ca II K", "Ca II H", "K I 7699", "K I 7665"]) {
    const { air_angstrom } = lineNamed(name);
    const window = interstellarWindows.find(({ low_air_angstrom, high_air_angstrom }) =>
      Math.abs(low_air_angstrom + high_air_angstrom - 2 * air_angstrom) < 0.02
    )!;
    const reach = (window.high_air_angstrom / air_angstrom - 1) * 299_792.458;
    assertAlmostEquals(reach, 120, 1e-6, name);
  }
  for (const air of [4428, 5780.5, 5797, 6284, 6613.6]) assert(covers(interstellarWindows, air));
  assert(!covers(interstellarWindows, 4861.3) && !covers(interstellarWindows, 6562.8));
});

Deno.test("nightSkyLines agree with the line list where both have a line", () => {
  for (const [sky, name] of [["[O I] 5577", "[O I] 5577"], ["Na I 5890", "Na I D2"]] as const) {
    const line = nightSkyLines.find((one) => one.name === sky)!;
    assertEquals(line.air_angstrom, lineNamed(name).air_angstrom);
  }
  for (const { air_angstrom, vacuum_angstrom, name } of nightSkyLines) {
    assertAlmostEquals(vacuumToAir(vacuum_angstrom), air_angstrom, 1e-9, name);
    const rounded = Number(/(\d{4})$/.exec(name)![1]);
    assert(Math.abs(rounded - air_angstrom) <= 1, name);
  }
});

Deno.test("isolated night-sky lines keep 5 Å from any other when they are to measure", () => {
  for (const line of nightSkyLines.filter(({ isolated }) => isolated)) {
    for (const other of nightSkyLines) {
      const apart = Math.abs(other.air_angstrom - line.air_angstrom);
      assert(other === line || apart > 5, `${line.name}, ${other.name}`);
    }
  }
});

Deno.test("nightSkyWindows() are three resolution elements wide when made", () => {
  const [first] = nightSkyWindows(4);
  assertAlmostEquals(first!.high_air_angstrom - first!.low_air_angstrom, 12, 1e-9);
});
