import { assertEquals } from "@std/assert";
import { selectExposures } from "../../engine/trail/mod.ts";
import { madeSpectra } from "./made_spectra.ts";

Deno.test("selectExposures() drops blank and duplicate exposures, sorts the rest and says so", () => {
  const made = madeSpectra({ count: 6 });
  const blank = [
    { ...made[1]!, source: "zero.fits", flux: made[1]!.flux.map(() => 0) },
    { ...made[2]!, source: "nan.fits", flux: made[2]!.flux.map(() => NaN) },
    // What a reader makes of errors of zero, and of masked samples.
    { ...made[3]!, source: "errorless.fits", error: made[3]!.error.map(() => Infinity) },
  ];
  const copy = { ...made[4]!, source: "copy.fits", group: 1, flux: made[4]!.flux.slice() };
  const mixed = [made[5]!, ...blank, copy, ...made.slice(0, 5)];
  const before = mixed.map((s) => s.source);
  const { spectra, warnings } = selectExposures(mixed);
  assertEquals(mixed.map((s) => s.source), before);
  assertEquals(spectra.length, 6);
  assertEquals(
    spectra.map((s) => s.mid[1]),
    spectra.map((s) => s.mid[1]).toSorted((a, b) => a - b),
  );
  assertEquals(warnings.map((w) => w.code), [
    "blank-exposures",
    "exposures-without-errors",
    "exposures-reordered",
    "duplicate-exposures",
  ]);
  assertEquals(
    warnings[0]!.text,
    "dropped as blank (no two usable samples differ): zero.fits, nan.fits",
  );
  assertEquals(
    warnings[1]!.text,
    "dropped as no two samples have an error above zero and are not masked (are the errors in the file all zero?): errorless.fits",
  );
  assertEquals(
    warnings[3]!.text,
    "dropped as copies of another exposure: night-0/004.fits (as copy.fits)",
  );
});

Deno.test("selectExposures() keeps the two arms of one exposure without a word", () => {
  const blue = madeSpectra({ count: 4, high_angstrom: 4900 });
  const red = madeSpectra({ count: 4, low_angstrom: 4900, group: 1 });
  const { spectra, warnings } = selectExposures([...blue, ...red]);
  assertEquals([spectra.length, warnings.filter((w) => w.code !== "exposures-reordered")], [8, []]);
});

Deno.test("selectExposures() suspects two reductions of one exposure", () => {
  const made = madeSpectra({ count: 4 });
  const again = { ...made[2]!, source: "again.fits", flux: made[2]!.flux.map((f) => 1.01 * f) };
  const { spectra, warnings } = selectExposures([...made, again]);
  assertEquals([spectra.length, warnings.map((w) => w.code)], [5, [
    "exposures-reordered",
    "simultaneous-exposures",
  ]]);
});

Deno.test("selectExposures() keeps equal spectra that were taken at different times", () => {
  const made = madeSpectra({ count: 2 });
  const later = {
    ...made[0]!,
    source: "later.fits",
    mid: [made[0]!.mid[0], made[0]!.mid[1] + 0.01] as const,
  };
  assertEquals(selectExposures([...made, later]).spectra.length, 3);
});
