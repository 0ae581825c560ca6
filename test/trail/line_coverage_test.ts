import { assertEquals } from "@std/assert";
import { lineCoverage } from "../../engine/trail/mod.ts";
import { H_BETA, madeSpectra } from "./made_spectra.ts";

Deno.test("lineCoverage() sorts exposures by how much of the line they show", () => {
  const make = (low_angstrom: number, high_angstrom: number, group: number) =>
    madeSpectra({ count: 1, low_angstrom, high_angstrom, group });
  const sets = [make(4700, 5000, 0), make(4855, 4870, 1), make(4850, 5000, 2), make(4864, 5000, 3)];
  const { covering, partly, without } = lineCoverage(sets.flat(), {
    line: H_BETA,
    reach_kms: 2500,
  });
  // 2500 km/s are 40.6 Å: a sliver of 15 Å is not half of 81, and one that begins red of the rest
  // wavelength does not hold it.
  assertEquals(covering.map((s) => s.group), [0, 2]);
  assertEquals(partly, ["night-2/000.fits"]);
  assertEquals(without, ["night-1/000.fits", "night-3/000.fits"]);
});

Deno.test("lineCoverage() does not count what is not a number", () => {
  const [spectrum] = madeSpectra({ count: 1 });
  const gone = { ...spectrum!, flux: spectrum!.flux.map((f, i) => i < 400 ? NaN : f), group: 9 };
  const { covering } = lineCoverage([spectrum!, gone], { line: H_BETA, reach_kms: 2500 });
  assertEquals(covering.map((s) => s.group), [0]);
});

Deno.test("lineCoverage() misses exposures whose group covers the line at other moments", () => {
  const night = madeSpectra({ count: 3 });
  const elsewhere = { low_angstrom: 6400, high_angstrom: 6700 };
  const of = (spectra: ReturnType<typeof madeSpectra>) =>
    lineCoverage(spectra, { line: H_BETA, reach_kms: 2500 }).missed;
  // The second exposure of a night taken at another angle of the grating.
  const turned = madeSpectra({ count: 3, ...elsewhere })[1]!;
  assertEquals(of([night[0]!, { ...turned, source: "turned.fits" }, night[2]!]), ["turned.fits"]);
  // Another arm in a group of its own, and other orders of the same exposures in one file.
  assertEquals(of([...night, ...madeSpectra({ count: 3, ...elsewhere, group: 1 })]), []);
  assertEquals(of([...night, ...madeSpectra({ count: 3, ...elsewhere })]), []);
});
