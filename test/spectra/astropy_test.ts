import { assert, assertAlmostEquals, assertEquals } from "@std/assert";
import { airToVacuum } from "../../engine/sky/mod.ts";
import { readExposures, type ReadExposuresOptions } from "../../engine/spectra/mod.ts";

const PYTHON = "/usr/bin/python3";
const available = await hasAstropy();

async function hasAstropy(): Promise<boolean> {
  try {
    return (await new Deno.Command(PYTHON, { args: ["-c", "import astropy"] }).output()).success;
  } catch {
    return false;
  }
}

interface Truth {
  bjd: [number, number][];
  factor: number[];
  flux: number[][];
  error: number[][];
  exposure_s: number;
  files: {
    name: string;
    layout: string;
    wavelength_angstrom: number[];
    medium: "air" | "vacuum";
    rows: number[];
    masked?: number[];
    log?: string;
    rough_time?: boolean;
    wavelength_medium?: "vacuum";
  }[];
}

Deno.test({
  name:
    "readExposures() reads what astropy writes in each layout, times and wavelengths as astropy has them",
  ignore: !available,
  async fn() {
    const folder = await Deno.makeTempDir();
    const script = new URL("./astropy_layouts.py", import.meta.url).pathname;
    const { stdout, stderr, success } = await new Deno.Command(PYTHON, { args: [script, folder] })
      .output();
    assert(success, new TextDecoder().decode(stderr));
    const truth = JSON.parse(new TextDecoder().decode(stdout)) as Truth;
    assertEquals(truth.files.length, 5);
    for (const file of truth.files) {
      const options: ReadExposuresOptions = {
        ...(file.log === undefined ? {} : { log: `${folder}/${file.log}` }),
        ...(file.wavelength_medium === undefined
          ? {}
          : { wavelength_medium: file.wavelength_medium }),
      };
      const { spectra, decisions } = await readExposures([`${folder}/${file.name}`], options);
      const decided = (what: string) => decisions.find((d) => d.what === what)?.value;
      assertEquals(decided("layout"), file.layout);
      assertEquals(decided("wavelength medium"), file.medium, file.name);
      assertEquals(spectra.length, file.rows.length, file.name);
      file.rows.forEach((row, k) => {
        const spectrum = spectra[k]!;
        const [whole, fraction] = truth.bjd[row]!;
        const off_s = (spectrum.mid[0] - whole + spectrum.mid[1] - fraction) * 86400;
        // 0.01 s: the Earth's place. A double BJD in a table, and MJD-OBS, are rounded to 40 µs.
        assertAlmostEquals(off_s, 0, 0.01, file.name);
        // 2 m/s: reference/README.md, what the ephemeris in use is good to.
        assertAlmostEquals(
          (spectrum.observer_factor! / truth.factor[row]! - 1) * 299792458,
          0,
          2,
          file.name,
        );
        file.wavelength_angstrom.forEach((w, i) => {
          const wanted = (file.medium === "air" ? airToVacuum(w) : w) * truth.factor[row]!;
          // 2 m/s at 5000 Å is 3e-5 Å.
          assertAlmostEquals(spectrum.wavelength_angstrom[i]!, wanted, 5e-5, file.name);
          // A single is written with as many digits as make it unique: 1e-7 of it.
          assertAlmostEquals(spectrum.flux[i]! / truth.flux[row]![i]!, 1, 1e-7, file.name);
          const error = file.masked?.includes(i) ? Infinity : truth.error[row]![i]!;
          if (error === Infinity) assertEquals(spectrum.error[i], Infinity);
          else assertAlmostEquals(spectrum.error[i]! / error, 1, 1e-6, file.name);
        });
        assertEquals(spectrum.exposure_s, truth.exposure_s);
      });
    }
  },
});
