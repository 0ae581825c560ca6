import { assert, assertEquals, assertRejects } from "@std/assert";
import { join } from "@std/path";
import { InputError } from "@millrace/millrace/errors";
import { formatEcsv, sha256 } from "@millrace/millrace/files";
import { inputDigests, namedFiles, parseTarget, runTrail } from "@millrace/millrace/campaign";
import { captionText } from "../../engine/campaign/caption_text.ts";
import { exposureFiles } from "../../engine/campaign/exposure_files.ts";
import { inFolder } from "../files/support.ts";
import { madeExposures } from "../spectra/made_exposures.ts";
import { writeCampaign } from "./campaign_fixture.ts";

const TARGET = `format = 1
[[exposures]]
files = ["night/*.txt", "night/a.txt"]
log = "log.csv"
wavelength_zero_kms = "shifts.csv"
photometry = "light.csv"
[[exposures]]
files = ["b.txt"]
wavelength_zero_kms = "sky-lines"
photometry = "none"
[model]
parts = ["donor"]
donor = { template = "k7.txt" }
[[lines]]
name = "H beta"
template = ["k5.txt", "k7.txt"]
model = { parts = ["donor"], donor = { template = "m1.txt" } }
[map]
prior_image = "prior.fits"
`;

const FILES = ["night/a.txt", "night/b.txt", "log.csv", "shifts.csv", "light.csv", "b.txt"]
  .concat(["k5.txt", "k7.txt", "m1.txt", "prior.fits"]);

async function campaign(folder: string): Promise<string> {
  await Deno.mkdir(join(folder, "night"));
  for (const name of FILES) await Deno.writeTextFile(join(folder, name), name);
  return join(folder, "star.toml");
}

Deno.test("inputDigests() digests every file that a target names, each once", () =>
  inFolder(async (folder) => {
    const file = await campaign(folder);
    const digests = await inputDigests(parseTarget(TARGET, { file }));
    assertEquals(digests.map((digest) => digest.file), FILES);
    for (const { file, sha256: digest } of digests) assertEquals(digest, sha256(file));
  }));

Deno.test("inputDigests() gives the same paths from wherever it is called", () =>
  inFolder(async (folder) => {
    await campaign(folder);
    const cwd = Deno.cwd();
    try {
      Deno.chdir(join(folder, "night"));
      const digests = await inputDigests(parseTarget(TARGET, { file: "../star.toml" }));
      assertEquals(digests.map((digest) => digest.file), FILES);
    } finally {
      Deno.chdir(cwd);
    }
  }));

Deno.test("namedFiles() takes words for words, and says where a file is missing", () =>
  inFolder(async (folder) => {
    const file = await campaign(folder);
    for (const word of ["uniform", "blurred", "axisymmetric", "mixed"]) {
      const target = parseTarget(`format = 1\n[map]\nprior_image = "${word}"\n`, { file });
      assertEquals(await namedFiles(target), []);
    }
    await Deno.remove(join(folder, "k5.txt"));
    const error = await assertRejects(
      () => namedFiles(parseTarget(TARGET, { file })),
      InputError,
      "the file must exist",
    );
    assertEquals([error.line, error.key, error.value], [16, "lines[0].template[0]", "k5.txt"]);
  }));

Deno.test("results of Millrace among the exposures are left out, and refused by name", async () => {
  const raw = madeExposures({ count: 4 });
  const campaign = await writeCampaign([{ raw }], {
    exposures: '[[exposures]]\nfiles = ["night/*"]\n',
  });
  const night = join(campaign.folder, "night");
  const before = [...Deno.readDirSync(night)].map(({ name }) => name);
  const runAll = async () => {
    const session = await campaign.open();
    const output = { folder: night };
    const { document } = await runTrail(session, output);
    await Deno.writeTextFile(join(night, "plate.txt"), captionText("a caption"));
    const table = {
      meta: { creator: "Millrace" },
      columns: [{ name: "phase", datatype: "float64" as const, values: [0.5] }],
    };
    await Deno.writeTextFile(join(night, "journal.ecsv"), formatEcsv(table));
    return { document, digests: await inputDigests(session.target) };
  };
  const first = await runAll();
  assert([...Deno.readDirSync(night)].length > before.length + 1);
  // The second run finds what the first one found, so that its outputs are the same.
  assertEquals(await runAll(), first);
  assertEquals(
    first.digests.map(({ file }) => file),
    before.toSorted().map((name) => `night/${name}`),
  );
  const { target } = await campaign.open();
  await assertRejects(
    () => exposureFiles(target, { pattern: "night/trail.fits", key: "exposures[0].files[0]" }),
    InputError,
    'an exposure must not be a result of Millrace: current value is "night/trail.fits"',
  );
  await assertRejects(
    () => exposureFiles(target, { pattern: "night/trail*", key: "exposures[0].files[0]" }),
    InputError,
    "a pattern must match a file that is no result of Millrace",
  );
});
