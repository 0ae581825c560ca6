// Small campaigns of one invented source, written as files with a target file beside them.
import { join } from "@std/path";
import {
  type CheckDocument,
  type MapDocument,
  openSession,
  readTarget,
  runCheck,
  runMap,
  type Session,
} from "../../engine/campaign/mod.ts";
import { encodeExposures, type RawExposure, type SpectraLayout } from "../../engine/spectra/mod.ts";
import { EPHEMERIS } from "../spectra/made_exposures.ts";

const [DAY, FRACTION] = EPHEMERIS.zero;

/** The sections of the usual target file; a test changes what it is about. */
export const SECTIONS: Readonly<Record<string, string>> = {
  head: 'format = 1\ntitle = "VX-0417"\n',
  orbit: `[orbit]
period_d = ${EPHEMERIS.period_d}
period_error_d = ${EPHEMERIS.period_error_d}
zero_bjd_tdb = ${DAY + FRACTION}
zero_error_d = ${EPHEMERIS.zero_error_d}
systemic_kms = 0.0
`,
  binary: "[binary]\nk_accretor_kms = 70.0\nk_donor_kms = 350.0\n",
  exposures: '[[exposures]]\nfiles = ["night/*.fits"]\n',
  lines: `[[lines]]
name = "H beta"
reach_kms = 2000
continuum_kms = [[-5000, -2500], [2500, 5000]]
`,
  map: `[map]
method = "back-projection"
half_width_kms = 1000
pixels = 61
resamples = 4
`,
};

/** Where the one source of these campaigns is on the map, km/s. */
export const SOURCE = { vx_kms: 300, vy_kms: 400 };

/** A folder of exposures. */
export interface Folder {
  /** Its name. */
  readonly name?: string;
  /** The exposures. */
  readonly raw: readonly RawExposure[];
  /** Their layout. */
  readonly layout?: SpectraLayout;
}

/** A campaign on the disc. */
export interface Campaign {
  /** Its folder. */
  readonly folder: string;
  /** Opens the target file, with overrides; with the trails and tests of another session of it. */
  readonly open: (set?: readonly string[], from?: Session) => Promise<Session>;
  /** Runs `check`. */
  readonly check: (set?: readonly string[]) => Promise<CheckDocument>;
  /** Runs `map`, and reads what it wrote. */
  readonly map: (set?: readonly string[], from?: Session) => Promise<MapDocument>;
}

const written: string[] = [];
globalThis.addEventListener("unload", () => {
  for (const folder of written) Deno.removeSync(folder, { recursive: true });
});

/** Writes a campaign: folders of exposures and the target file. */
export async function writeCampaign(
  folders: readonly Folder[],
  sections: Partial<typeof SECTIONS> = {},
): Promise<Campaign> {
  const folder = await Deno.makeTempDir({ prefix: "millrace-campaign-" });
  written.push(folder);
  for (const { name = "night", raw, layout } of folders) {
    await Deno.mkdir(join(folder, name), { recursive: true });
    for (const file of encodeExposures(raw, { layout, stem: name })) {
      await Deno.writeFile(join(folder, name, file.name), file.bytes);
    }
  }
  const text = Object.values({ ...SECTIONS, ...sections }).join("\n");
  await Deno.writeTextFile(join(folder, "star.toml"), text);
  const open = async (set: readonly string[] = [], from?: Session) =>
    openSession(await readTarget(join(folder, "star.toml"), { set }), { from });
  return {
    folder,
    open,
    check: async (set) =>
      (await runCheck(await open(set), { folder: join(folder, "star") })).document,
    map: async (set, from) => {
      await runMap(await open(set, from), { folder: join(folder, "star") });
      return JSON.parse(await Deno.readTextFile(join(folder, "star", "map.json")));
    },
  };
}

/** Codes of warnings. */
export function codes(document: { readonly warnings: readonly { readonly code: string }[] }) {
  return document.warnings.map(({ code }) => code);
}
