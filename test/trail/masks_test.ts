import { assertEquals } from "@std/assert";
import { maskObserved } from "../../engine/trail/mod.ts";
import { madeSpectra } from "./made_spectra.ts";

Deno.test("maskObserved() follows the observer's frame from exposure to exposure", () => {
  const [made] = madeSpectra({
    count: 1,
    pixel_angstrom: 0.01,
    low_angstrom: 4860,
    high_angstrom: 4862,
  });
  const shifts = [-30, 0, 30].map((kms) => 1 + kms / 299792.458);
  const spectra = shifts.map((observer_factor) => ({ ...made!, observer_factor }));
  const before = structuredClone(spectra);
  const out = maskObserved(spectra, [{
    name: "line",
    low_angstrom: 4860.9,
    high_angstrom: 4861.1,
  }]);
  assertEquals(spectra, before);
  out.spectra.forEach((spectrum, k) => {
    const at = [...spectrum.error.keys()].filter((i) => spectrum.error[i] === Infinity);
    const middle = spectrum.wavelength_angstrom[at[Math.floor(at.length / 2)]!]!;
    // The mask's middle in the barycentric frame, to a pixel of 0.01 Å.
    assertEquals(Math.abs(middle - 4861 * shifts[k]!) < 0.011, true);
  });
});

Deno.test("maskObserved() widens masks where the observer's frame is not known", () => {
  const [made] = madeSpectra({
    count: 1,
    pixel_angstrom: 0.01,
    low_angstrom: 4860,
    high_angstrom: 4862,
  });
  const mask = [{ name: "line", low_angstrom: 4860.9, high_angstrom: 4861.1 }];
  const { spectra, widened } = maskObserved([{ ...made!, observer_factor: null }], mask);
  assertEquals(widened, [made!.source]);
  const masked = [...spectra[0]!.wavelength_angstrom].filter((_, i) =>
    spectra[0]!.error[i] === Infinity
  );
  // 0.2 Å and twice 30.8 km/s, which is 0.5 Å here.
  assertEquals(Math.abs(masked.at(-1)! - masked[0]! - 1.2) < 0.03, true);
});
