import { assert, assertEquals, assertStringIncludes } from "@std/assert";
import { encodeExposure } from "../../engine/spectra/mod.ts";
import { LAUNCH, runMillrace } from "./run_millrace.ts";
import { rawExposure, TARGET, writeCampaign } from "./small_campaign.ts";

interface Case {
  readonly name: string;
  /** Command and its words; `star.toml` when not stated. */
  readonly args?: readonly string[];
  readonly target?: string;
  readonly prepare?: (folder: string) => Promise<void>;
  readonly code: number;
  readonly message: string;
}

const CASES: readonly Case[] = [
  {
    name: "a missing target file",
    args: ["check", "none.toml"],
    code: 2,
    message:
      "millrace: Cannot read target file as the file must exist (none.toml); check the name and the folder it is looked for in",
  },
  {
    name: "a missing exposure",
    target: TARGET.replace("*.fits", "none.fits"),
    code: 2,
    message:
      'millrace: Cannot find files as the file must exist: current value is "none.fits" (star.toml:10, key exposures[0].files[0]); check the name; it is looked for from this folder',
  },
  {
    name: "an empty glob",
    target: TARGET.replace("*.fits", "n*.fits"),
    code: 2,
    message:
      'millrace: Cannot find files as a pattern must match at least one file: current value is "n*.fits" (star.toml:10, key exposures[0].files[0]); check the name; it is looked for from this folder',
  },
  {
    name: "nothing that covers the line",
    target: TARGET.replace("H beta", "H alpha"),
    code: 2,
    message:
      'millrace: Cannot make trail of H alpha as an exposure must cover 6531.8 to 6597.5 angstrom in vacuum: current value is "4791.2 to 4934.8" angstrom; name a line within what is covered',
  },
  {
    name: "an unknown line",
    target: TARGET.replace("H beta", "H betta"),
    code: 2,
    message:
      'millrace: Cannot find spectral line as its name must be in the list of lines: current value is "H betta" (star.toml:13:1, key lines[0].name); the nearest known name is "H beta"; for another line state its wavelength',
  },
  {
    name: "wavelengths that are not monotonic",
    target: TARGET.replace("*.fits", "*.txt").replace("[[lines]]", 'log = "log.csv"\n\n[[lines]]'),
    prepare: async (folder) => {
      await Deno.writeTextFile(`${folder}/a.txt`, "4800 1\n4801 1\n4800.5 1\n4802 1\n");
      await Deno.writeTextFile(`${folder}/log.csv`, "file,mid,exposure_s\na.txt,2460311.4,300\n");
    },
    code: 2,
    message:
      "millrace: Cannot read spectrum as wavelengths must increase (or decrease) throughout, and pixel 3 does not after 4801: current value is 4800.5 angstrom (a.txt); join overlapping orders into one spectrum, or give each its own",
  },
  {
    name: "exposures that are all NaN",
    prepare: async (folder) => {
      for (let k = 0; k < 6; k++) {
        const raw = rawExposure(k);
        await Deno.writeFile(
          `${folder}/e${k}.fits`,
          encodeExposure({ ...raw, flux: raw.flux.map(() => NaN) }),
        );
      }
    },
    code: 2,
    message:
      "millrace: Cannot make trail of H beta as at least one exposure must hold a spectrum: current value is 0; dropped as blank (no two usable samples differ): e0.fits, e1.fits, e2.fits, e3.fits, e4.fits and 1 more",
  },
  {
    name: "an exposure of zero seconds",
    prepare: (folder) =>
      Deno.writeFile(`${folder}/e0.fits`, encodeExposure(rawExposure(0, { exposure_s: 0 }))),
    code: 2,
    message:
      "millrace: Cannot read exposure time as exposure time must be positive, and below 1e6 s: current value is 0 s (e0.fits, key XPOSURE); mend the header or the log, or leave the exposure out",
  },
  {
    name: "a negative exposure",
    prepare: (folder) =>
      Deno.writeFile(`${folder}/e0.fits`, encodeExposure(rawExposure(0, { exposure_s: -5 }))),
    code: 2,
    message:
      "millrace: Cannot read exposure time as exposure time must be positive, and below 1e6 s: current value is -5 s (e0.fits, key XPOSURE); mend the header or the log, or leave the exposure out",
  },
  {
    name: "an unknown key",
    target: TARGET.replace("period_d", "perod_d"),
    code: 2,
    message:
      'millrace: Cannot read target file as key "perod_d" is not known in [orbit] (star.toml:5:1, key orbit.perod_d); the nearest known key is "period_d"',
  },
  {
    name: "a wrong type",
    target: TARGET.replace("0.0823714", '"2 h"'),
    code: 2,
    message:
      'millrace: Cannot read target file as period_d must be a number: current value is "2 h" (star.toml:5:1, key orbit.period_d)',
  },
  {
    name: "a syntax error",
    target: TARGET.replace("period_d = ", "period_d : "),
    code: 2,
    message:
      "millrace: Cannot read target file as it is not valid TOML: unexpected character (star.toml:5:10)",
  },
  {
    name: "a duplicate key",
    target: TARGET.replace("[[exposures]]", "period_d = 1.0\n[[exposures]]"),
    code: 2,
    message:
      "millrace: Cannot read target file as it is not valid TOML: defining a key multiple times is invalid (star.toml:9:1)",
  },
  {
    name: "a period of zero",
    target: TARGET.replace("0.0823714", "0.0"),
    code: 2,
    message:
      "millrace: Cannot read target file as period_d must be greater than 0: current value is 0 d (star.toml:5:1, key orbit.period_d)",
  },
  {
    name: "a folder that cannot be written",
    args: ["trail", "star.toml", "--out", "star.toml/out"],
    code: 1,
    message:
      "millrace: Cannot make folder: a part of the path is not a folder (star.toml/out); choose another output folder",
  },
  {
    name: "a truncated FITS file",
    prepare: async (folder) => {
      const bytes = await Deno.readFile(`${folder}/e0.fits`);
      await Deno.writeFile(`${folder}/e0.fits`, bytes.subarray(0, 4000));
    },
    code: 2,
    message:
      'millrace: Cannot read FITS file as the data must end within the file (HDU 0, byte 4000): current value is "1280 bytes of data from byte 2880 in a file of 4000 bytes" (e0.fits); copy the file again from where it came from',
  },
  {
    name: "a foreign file named as FITS",
    prepare: (folder) => Deno.writeTextFile(`${folder}/e0.fits`, "GIF89a and so on"),
    code: 2,
    message:
      'millrace: Cannot read FITS file as a FITS file must begin with SIMPLE = T (HDU 0, byte 0): current value is "GIF89a and so on" (e0.fits); give a FITS file, or say the right layout for another kind of file',
  },
  {
    name: "an override that is no assignment",
    args: ["check", "star.toml", "--set", "orbit"],
    code: 2,
    message:
      'millrace: Cannot apply --set as it must read section.key=value: current value is "orbit"',
  },
  {
    name: "a number of workers that is none",
    args: ["check", "star.toml", "--workers", "0"],
    code: 2,
    message:
      "error: option '--workers <n>' argument '0' is invalid. It must be a whole number above zero.",
  },
];

for (const { name, args = ["trail", "star.toml"], target, prepare, code, message } of CASES) {
  Deno.test(`millrace names what is wrong with ${name}`, async () => {
    const folder = await writeCampaign({ target });
    try {
      await prepare?.(folder);
      const run = await runMillrace([...args, "--json"], { cwd: folder });
      assertEquals(run.stderr.trim(), message);
      assertEquals([run.code, run.stdout], [code, ""]);
      // Nothing half-written, and nothing begun.
      for await (const entry of Deno.readDir(folder)) {
        assert(!entry.isDirectory && !entry.name.startsWith("."), entry.name);
      }
    } finally {
      await Deno.remove(folder, { recursive: true });
    }
  });
}

Deno.test("millrace ends quietly when its output is closed", async () => {
  const folder = await writeCampaign();
  const words = [Deno.execPath(), ...LAUNCH, "trail", "star.toml"].map((word) => `'${word}'`);
  const { code, stderr } = await new Deno.Command("sh", {
    args: ["-c", `${words.join(" ")} | true`],
    cwd: folder,
    env: { NO_COLOR: "1" },
  }).output();
  assertEquals([code, new TextDecoder().decode(stderr)], [0, ""]);
  assert((await Deno.stat(`${folder}/star/trail.fits`)).isFile);
  await Deno.remove(folder, { recursive: true });
});

Deno.test("millrace refuses to replace a file that is not its own", async () => {
  const folder = await writeCampaign();
  await Deno.mkdir(`${folder}/star`);
  await Deno.writeTextFile(`${folder}/star/trail.fits`, "my own notes");
  const run = await runMillrace(["trail", "star.toml"], { cwd: folder });
  assertEquals([run.code, run.stdout], [2, ""]);
  assertStringIncludes(run.stderr, "star/trail.fits");
  assertEquals(await Deno.readTextFile(`${folder}/star/trail.fits`), "my own notes");
  const forced = await runMillrace(["trail", "star.toml", "--overwrite"], { cwd: folder });
  assertEquals(forced.code, 0, forced.stderr);
  // What it wrote itself it may replace.
  const again = await runMillrace(["trail", "star.toml"], { cwd: folder });
  assertEquals(again.code, 0, again.stderr);
  await Deno.remove(folder, { recursive: true });
});

Deno.test("millrace is stopped by an interrupt with status 130 and leaves nothing behind", async () => {
  const folder = await writeCampaign({
    target: TARGET.replace("resamples = 4", "resamples = 100000"),
  });
  const child = new Deno.Command(Deno.execPath(), {
    args: [...LAUNCH, "map", "star.toml"],
    cwd: folder,
    stdout: "null",
    stderr: "null",
  }).spawn();
  while (!await isThere(`${folder}/star`)) await new Promise((r) => setTimeout(r, 50));
  child.kill("SIGINT");
  const { code } = await child.status;
  assertEquals(code, 130);
  const names = [...Deno.readDirSync(folder)].map(({ name }) => name).sort();
  assertEquals(names, [
    "e0.fits",
    "e1.fits",
    "e2.fits",
    "e3.fits",
    "e4.fits",
    "e5.fits",
    "star.toml",
  ]);
  await Deno.remove(folder, { recursive: true });
});

async function isThere(path: string): Promise<boolean> {
  try {
    await Deno.stat(path);
    return true;
  } catch {
    return false;
  }
}

// A disc of its own can be mounted by root alone.
const canMount = Deno.build.os === "linux" && Deno.uid() === 0 &&
  (await new Deno.Command("sh", {
    args: ["-c", "d=$(mktemp -d) && mount -t tmpfs -o size=16k tmpfs $d && umount $d"],
    stderr: "null",
  })
    .output()).success;

Deno.test({
  name: "millrace says that the disc is full and leaves no file under its final name",
  ignore: !canMount,
  fn: async () => {
    const folder = await writeCampaign();
    const disc = `${folder}/disc`;
    await Deno.mkdir(disc);
    const mount = (args: string[]) => new Deno.Command(args[0]!, { args: args.slice(1) }).output();
    await mount(["mount", "-t", "tmpfs", "-o", "size=16k", "tmpfs", disc]);
    try {
      const run = await runMillrace(["trail", "star.toml", "--out", "disc/out"], { cwd: folder });
      assertEquals([run.code, run.stdout], [1, ""]);
      assertStringIncludes(run.stderr, "Cannot write file: the disc is full (disc/out/trail.fits)");
      assertEquals([...Deno.readDirSync(disc)], []);
    } finally {
      await mount(["umount", disc]);
      await Deno.remove(folder, { recursive: true });
    }
  },
});
