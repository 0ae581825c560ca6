import { assert, assertAlmostEquals, assertEquals, assertLess } from "@std/assert";
import { parseTarget } from "../../engine/campaign/mod.ts";
import { runMillrace } from "./run_millrace.ts";

async function available(command: string, args: readonly string[]): Promise<boolean> {
  try {
    return (await new Deno.Command(command, {
      args: [...args],
      stdout: "null",
      stderr: "null",
      stdin: "null",
    }).output()).success;
  } catch {
    return false;
  }
}

const astropy = await available("/usr/bin/python3", ["-c", "import astropy"]);
const fitsverify = await available("sh", ["-c", "command -v fitsverify"]);

// One demo serves all checks; its second run, all on one thread, must do as the first.
const folder = await Deno.makeTempDir({ prefix: "millrace-demo-" });
const [first, second] = [
  await runMillrace(["demo", "--json"], { cwd: folder }),
  await runMillrace(["demo", "--json", "--workers", "1"], { cwd: folder }),
];
const out = `${folder}/demo-run/vx-0417`;

Deno.test("millrace demo runs twice without complaint to the same bytes, whatever its threads", () => {
  assertEquals([first.code, second.code], [0, 0], first.stderr + second.stderr);
  assertEquals(first.stdout, second.stdout);
});

Deno.test("millrace demo finds the bright spot where it was put, by each inversion", () => {
  const { spots, exposures } = JSON.parse(first.stdout);
  assertEquals(exposures, 120);
  assertEquals(
    spots.map(({ method, line }: { method: string; line: string }) => `${method} ${line}`),
    [
      "back-projection H beta",
      "back-projection He II 4686",
      "entropy H beta",
      "total-variation H beta",
    ],
  );
  for (const { found, truth } of spots) {
    assertEquals(found.nearest, "rim-impact");
    // Noise errors leave out what inversions smear: 4 km/s is a twentieth of the resolution.
    const off = Math.hypot(found.vx_kms - truth.vx_kms, found.vy_kms - truth.vy_kms);
    assertLess(off, 4 + 3 * Math.hypot(found.vx_error_kms, found.vy_error_kms));
    assertAlmostEquals(found.flux_fraction, truth.flux_fraction, 0.05);
  }
});

Deno.test("millrace demo records what it did, as the commands do", async () => {
  const { runs } = JSON.parse(await Deno.readTextFile(`${out}/provenance.json`));
  assertEquals(
    runs.map(({ steps }: { steps: { command: string }[] }) => steps.map(({ command }) => command)),
    [["check", "trail", "map", "orbit", "plate"]],
  );
});

Deno.test("millrace demo ends with a verdict beside the truth", () => {
  const { verdict } = JSON.parse(first.stdout);
  assertEquals(verdict.preferred, verdict.truth);
});

Deno.test("millrace demo measures the binary that it was made of", () => {
  const { orbit, truth } = JSON.parse(first.stdout);
  const { binary } = truth;
  // Three standard deviations: one seed, chosen before it was looked at.
  const near = (value: number, error: number, real: number) =>
    assertLess(Math.abs(value - real), 3 * error, `${value} ± ${error} for ${real}`);
  near(orbit.accretor.k_kms, orbit.accretor.k_error_kms, binary.k_accretor_kms);
  near(orbit.donor.k_centre_kms, orbit.donor.k_centre_error_kms, binary.k_donor_kms);
  near(orbit.donor.systemic_kms, orbit.donor.systemic_error_kms, truth.systemic_kms);
  near(orbit.mass_ratio, orbit.mass_ratio_error, binary.mass_ratio);
  const { masses } = orbit;
  near(masses.accretor_msun, masses.accretor_error_high_msun, binary.mass_accretor_msun);
  near(masses.donor_msun, masses.donor_error_high_msun, binary.mass_donor_msun);
});

Deno.test("millrace orbit --refine writes a better target file and keeps its comments", async () => {
  const target = `${folder}/demo-run/vx-0417.toml`;
  const run = await runMillrace(["orbit", target, "--refine", "--json"]);
  assertEquals(run.code, 0, run.stderr);
  const refined = await Deno.readTextFile(`${folder}/demo-run/vx-0417-refined.toml`);
  const { settings } = parseTarget(refined);
  const { donor, accretor, zero_bjd_tdb } = JSON.parse(run.stdout);
  assertEquals(settings.binary.k_donor_kms, donor.k_centre_kms);
  assertEquals(settings.binary.k_accretor_kms, accretor.k_kms);
  assertEquals(settings.binary.mass_ratio, undefined);
  assertEquals(settings.orbit.zero_bjd_tdb, zero_bjd_tdb);
  assertEquals(settings.orbit.systemic_kms, donor.systemic_kms);
  assert(refined.includes("# clear of He I 4922 and 5016"));
  const check = await runMillrace(["check", `${folder}/demo-run/vx-0417-refined.toml`, "--json"]);
  assertEquals(check.code, 0, check.stderr);
});

Deno.test("millrace demo writes outputs that say how they were made", async () => {
  for (const name of ["check", "map"]) {
    const document = JSON.parse(await Deno.readTextFile(`${out}/${name}.json`));
    assertEquals(document.schema, `${name}/1`);
    assertEquals(document.inputs.length, 120);
    assertEquals(document.settings_digest.length, 64);
    assert(Array.isArray(document.warnings));
    assert(!JSON.stringify(document).includes("NaN"));
  }
  assertEquals(
    (await Deno.readFile(`${out}/plate.png`)).slice(1, 4),
    new TextEncoder().encode("PNG"),
  );
  assert((await Deno.readTextFile(`${out}/plate.svg`)).includes("VX-0417"));
});

Deno.test({
  name: "millrace demo writes FITS that fitsverify accepts without a warning",
  ignore: !fitsverify,
  fn: async () => {
    const names = ["trail", "map"].map((name) => `${out}/${name}.fits`);
    for (let k = 1; k <= 60; k++) {
      for (const arm of ["blue", "red"]) {
        names.push(`${folder}/demo-run/${arm}/${arm}-${String(k).padStart(3, "0")}.fits`);
      }
    }
    const { code, stdout } = await new Deno.Command("timeout", {
      args: ["300", "fitsverify", "-q", ...names],
    }).output();
    const text = new TextDecoder().decode(stdout);
    assertEquals([code, text.match(/verification OK/g)?.length], [0, names.length], text);
  },
});

// Source: astropy.io.fits and astropy.wcs read the axes independently.
Deno.test({
  name: "millrace demo writes a map and a trail whose axes astropy reads",
  ignore: !astropy,
  fn: async () => {
    const script = `
import json, sys, warnings
import numpy as np
from astropy.io import fits
from astropy.wcs import WCS
warnings.simplefilter("error", fits.verify.VerifyWarning)
out = {}
with fits.open(sys.argv[1] + "/map.fits", checksum=True) as hdus:
    h = hdus["H BETA"]
    n = h.header["NAXIS1"]
    w = WCS(h.header)
    mid = w.wcs_pix2world([[(n - 1) / 2, (n - 1) / 2], [0, n - 1]], 0)
    out["map"] = dict(axes=list(w.wcs.ctype), units=[str(u) for u in w.wcs.cunit], mid=mid.tolist(),
                      peak=[int(i) for i in np.unravel_index(np.argmax(h.data), h.data.shape)],
                      sum=float(h.data.sum()), step=h.header["CDELT1"])
with fits.open(sys.argv[1] + "/trail.fits", checksum=True) as hdus:
    h = hdus["H BETA"]
    w = WCS(h.header)
    first = w.wcs_pix2world([[0, 0]], 0)[0]
    out["trail"] = dict(axes=list(w.wcs.ctype), unit=str(w.wcs.cunit[0]), first=float(first[0]),
                        rest=w.wcs.restwav, rows=len(hdus["H BETA ROWS"].data),
                        phases=hdus["H BETA EXPOSURES"].data["PHASE"].tolist())
print(json.dumps(out))
`;
    const { code, stdout, stderr } = await new Deno.Command("/usr/bin/python3", {
      args: ["-c", script, out],
    }).output();
    assertEquals(code, 0, new TextDecoder().decode(stderr));
    const read = JSON.parse(new TextDecoder().decode(stdout));
    const { maps } = JSON.parse(await Deno.readTextFile(`${out}/map.json`));
    const [map] = maps;
    assertEquals(read.map.axes, ["VX", "VY"]);
    assertEquals(read.map.mid[0], [0, 0]);
    assertEquals(read.map.mid[1], [-map.half_width_kms * 1, map.half_width_kms * 1]);
    // The brightest pixel stands where map.json says: row is Vy, column Vx.
    const half = (map.pixels - 1) / 2;
    assertLess(
      Math.abs((read.map.peak[0] - half) * read.map.step - map.peak.vy_kms),
      read.map.step,
    );
    assertLess(
      Math.abs((read.map.peak[1] - half) * read.map.step - map.peak.vx_kms),
      read.map.step,
    );
    assertEquals(read.trail.axes[0], "VOPT");
    assertEquals(read.trail.rows, 60);
    // wcslib turns km/s into m/s and keeps the rest wavelength in metres.
    assertEquals(read.trail.unit, "m / s");
    assertAlmostEquals(read.trail.rest, 4862.68e-10, 1e-12);
    assert(read.trail.first < -2.4e6 && read.trail.first > -2.6e6);
  },
});

globalThis.addEventListener("unload", () => Deno.removeSync(folder, { recursive: true }));
