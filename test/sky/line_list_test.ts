import { assert, assertAlmostEquals, assertEquals, assertThrows } from "@std/assert";
import { InputError } from "@millrace/millrace/errors";
import { lineNamed, linesWithin, spectralLines, vacuumToAir } from "@millrace/millrace/sky";
import constants from "../reference/constants.json" with { type: "json" };

// reference/constants.json line: Dirac levels or Ritz from NIST terms; 0.06 Å, single lines 0.005 Å.
Deno.test("lineNamed() matches the reference when its lines are asked for", () => {
  // deno-lint-ignore no-explicit-any
  const cases = (constants.cases as any[]).filter((one) => one.kind === "line");
  assertEquals(cases.length, 18);
  for (const { id, name, vac_A, air_A, components_vac_A: [low, high] } of cases) {
    const line = lineNamed(name);
    const tolerance = low === high ? 0.005 : 0.06;
    assertAlmostEquals(line.vacuum_angstrom, vac_A, tolerance, `${id} ${name}`);
    assertAlmostEquals(line.air_angstrom, air_A, tolerance, `${id} ${name}`);
    // Ours are the same means, so they agree far better than lists do.
    assertAlmostEquals(line.vacuum_angstrom, vac_A, 2e-4, `${id} ${name}`);
    if (low !== high) {
      assertAlmostEquals(line.span_angstrom![0], low, 0.005, `${id} ${name}`);
      assertAlmostEquals(line.span_angstrom![1], high, 0.005, `${id} ${name}`);
    }
  }
});

// Bohr's formula with the first term of Sommerfeld's fine structure averaged over the lower level: the
// same physics by a shorter way, good to 0.03 Å.
Deno.test("hydrogen lines follow the series formula when n grows", () => {
  const rydberg = 109_677.5834;
  // Energy lowered by α² R/n³ (n/(j + ½) − ¾)/n, here the statistical mean over j.
  const shift = (n: number) => {
    let [sum, weight] = [0, 0];
    for (let k = 1; k <= n; k++) {
      const states = k === n ? 2 * k : 4 * k;
      sum += states * (n / k - 0.75);
      weight += states;
    }
    return (7.2973525693e-3) ** 2 * rydberg / n ** 4 * sum / weight;
  };
  const term = (n: number) => rydberg / (n * n) + shift(n);
  const series: [string, number, number, number][] = [
    ["H alpha", 2, 3, 0.05],
    ["H beta", 2, 4, 0.03],
    ["H 8", 2, 8, 0.03],
    ["H 16", 2, 16, 0.03],
    ["Pa beta", 3, 5, 0.1],
    ["Pa 10", 3, 10, 0.05],
    ["Pa 20", 3, 20, 0.05],
  ];
  for (const [name, lower, upper, tolerance] of series) {
    const expected = 1e8 / (term(lower) - term(upper));
    assertAlmostEquals(lineNamed(name).vacuum_angstrom, expected, tolerance, name);
  }
});

Deno.test("lineNamed() is tolerant when names are written in many ways", () => {
  const ways: Record<string, string[]> = {
    "H alpha": [
      "Hα",
      "halpha",
      "H-alpha",
      "H a",
      "Ha",
      "H ALPHA",
      "H I alpha",
      "HI 6563",
      "Hα ",
      "H_alpha",
    ],
    "H beta": ["Hβ", "Hb", "h beta", "H I 4861"],
    "H 8": ["H8", "Hζ", "H zeta"],
    "Pa delta": ["Paδ", "Pa-delta", "pad"],
    "Pa 12": ["Pa12"],
    "He II 4686": ["HeII4686", "he ii 4686", "He II 4685.7", "HeII λ4686"],
    "He II 5412": ["He II 5411"],
    "He I 5876": ["HeI 5875", "He I 5876 Å"],
    "Ca II K": ["caiik", "Ca II 3933", "Ca II 3934"],
    "Na I D2": ["Na D2", "Na I 5890"],
    "Na I 8195": ["Na I 8194"],
    "[O I] 6300": ["OI 6300", "[OI]6300"],
    "Bowen blend": ["bowen", "Bowen Blend"],
    "O I 7773": ["OI7773"],
  };
  for (const [name, written] of Object.entries(ways)) {
    for (const way of [name, ...written]) assertEquals(lineNamed(way).name, name, way);
  }
});

Deno.test("lineNamed() names the nearest line when there is none of that name", () => {
  const error = assertThrows(() => lineNamed("H bta"), InputError, 'current value is "H bta"');
  assert(error.message.includes('"H beta"'), error.message);
  for (const none of ["", "X", "He II 9999", "O I 4686", "HeI 4686", "__proto__", "6563"]) {
    assertThrows(() => lineNamed(none), InputError, "its name must be in the list of lines");
  }
});

Deno.test("spectralLines are complete and consistent when listed", () => {
  const names = new Set<string>();
  let before = 0;
  for (const line of spectralLines) {
    assert(!names.has(line.name), line.name);
    names.add(line.name);
    assert(line.vacuum_angstrom >= before, line.name);
    before = line.vacuum_angstrom;
    assert(line.source.length > 0);
    assertAlmostEquals(vacuumToAir(line.vacuum_angstrom), line.air_angstrom, 1e-6, line.name);
    const [low, high] = line.span_angstrom ?? [line.vacuum_angstrom, line.vacuum_angstrom];
    assert(low <= line.vacuum_angstrom && line.vacuum_angstrom <= high, line.name);
    // A number in the name is the wavelength in air, rounded.
    const number = / (\d{4,5})$/.exec(line.name);
    if (number) assert(Math.abs(line.air_angstrom - Number(number[1])) <= 1, line.name);
    assertEquals(lineNamed(line.name), line);
  }
});

Deno.test("linesWithin() counts in the medium it is told when lines are near the edge", () => {
  const air = linesWithin(6562, 6563.5).map((line) => line.name);
  assertEquals(air, ["H alpha"]);
  assertEquals(linesWithin(6562, 6563.5, { medium: "vacuum" }), []);
  assertEquals(linesWithin(7000, 6000), []);
});
