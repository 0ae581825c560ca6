import { assert, assertEquals, assertRejects, assertStringIncludes } from "@std/assert";
import { join } from "@std/path";
import { WorkError } from "@millrace/millrace/errors";
import { parseEcsv } from "@millrace/millrace/files";
import {
  batchJobs,
  gatherBatch,
  holdFolder,
  readManifest,
  readProvenance,
  runBatch,
} from "@millrace/millrace/campaign";
import { inFolder } from "../files/support.ts";
import { assertSameOutputs, filesUnder, smallCampaign } from "./batch_fixture.ts";

/** Runs a campaign's batch on this thread. */
async function run(
  manifest: string,
  folder: string,
  options: Partial<Parameters<typeof runBatch>[1]> = {},
) {
  return await runBatch(await readManifest(manifest), { folder, ...options });
}

function statuses(report: Awaited<ReturnType<typeof runBatch>>): string[] {
  return report.outcomes.map(({ name, runs }) =>
    `${name}: ${runs.flatMap(({ steps }) => steps.map(({ status }) => status)).join(" ")}`
  );
}

Deno.test("runBatch() gives the same bytes on one worker, on two, and in parts joined", () =>
  inFolder(async (folder) => {
    const { manifest } = await smallCampaign(folder, {
      stars: 2,
      commands: ["check", "trail", "map"],
      more: `
[[variants]]
name = "narrow"
commands = ["map"]
set = ["map.half_width_kms=1500"]

[[sample_plates]]
panels = ["map", "trail", "residual"]
columns = 1
`,
    });
    const one = join(folder, "one");
    const { result, cost } = await run(manifest, one);
    assertEquals([result!.document.failed, result!.document.missing], [[], []]);
    assert(cost.peak_memory_bytes > 2 ** 20);
    const files = await filesUnder(one);
    for (
      const name of ["summary.ecsv", "summary.csv", "index.html", "sample.png", "sample.txt"]
        .concat(["vx-2402/map.json", "vx-2402/thumbnail.png", "vx-2402/narrow/map.fits"])
    ) assert(files.has(name), name);
    assertEquals(result!.document.files.includes("sample.png"), true);
    // The page shows every target's picture and opens its report.
    const page = new TextDecoder().decode(files.get("index.html")!);
    const links = [...page.matchAll(/(?:href|src)="([^"#:]+)"/g)].map((match) => match[1]!);
    assert(links.includes("vx-2402/thumbnail.png"));
    for (const link of links) assert(files.has(decodeURIComponent(link)), link);

    const two = join(folder, "two");
    await run(manifest, two, { workers: 2 });
    await assertSameOutputs(two, one);

    const parts = join(folder, "parts");
    for (const index of [2, 1]) {
      const report = await run(manifest, parts, { part: { index, count: 2 } });
      assertEquals(report.result, null);
      assert(report.outcomes.length > 0);
    }
    const read = await readManifest(manifest);
    await gatherBatch(read, { jobs: batchJobs(read), folder: parts });
    await assertSameOutputs(parts, one);

    // Without sample plates in the manifest the old ones go.
    const plain = { ...read, settings: { ...read.settings, sample_plates: [] } };
    await gatherBatch(plain, { jobs: batchJobs(plain), folder: parts });
    const left = [...(await filesUnder(parts)).keys()].filter((name) => /^[^/]+$/.test(name));
    assertEquals(left.sort(), ["batch.json", "index.html", "summary.csv", "summary.ecsv"]);
  }));

Deno.test("runBatch() goes on when a target is bad, and says which and why", () =>
  inFolder(async (folder) => {
    const { manifest } = await smallCampaign(folder, { commands: ["check", "trail"] });
    // One cannot be read, one has a damaged exposure, one is right.
    await Deno.writeTextFile(join(folder, "stars/vx-2401.toml"), "format = 1\n[orbt]\n");
    const stack = join(folder, "stars/vx-2402/blue/blues.fits");
    await Deno.writeFile(stack, (await Deno.readFile(stack)).subarray(0, 4000));
    const out = join(folder, "out");
    for (const workers of [1, 2]) {
      const { result, outcomes } = await run(manifest, out, { workers });
      assertEquals(result!.document.failed, ["vx-2401", "vx-2402"]);
      assertEquals(outcomes.map(({ runs }) => runs[0]!.error === null), [false, false, true]);
    }
    const document = JSON.parse(await Deno.readTextFile(join(out, "batch.json")));
    const errors = document.runs.map((entry: { error: { kind: string; message: string } | null }) =>
      entry.error
    );
    assertEquals(errors[0], {
      kind: "InputError",
      message: 'Cannot read target file as key "orbt" is not known in the target file ' +
        '(vx-2401.toml:2:1, key orbt); the nearest known key is "orbit"',
    });
    assertEquals(errors[1].kind, "InputError");
    assertStringIncludes(errors[1].message, "vx-2402/blue/blues.fits");
    assertEquals(errors[2], null);
    const table = parseEcsv(await Deno.readTextFile(join(out, "summary.ecsv")));
    const column = (name: string) =>
      Array.from(table.columns.find((one) => one.name === name)!.values);
    assertEquals(column("status"), ["failed", "failed", "done"]);
    assertEquals(
      column("error"),
      errors.map((error: { message: string } | null) => error?.message ?? null),
    );
    const page = await Deno.readTextFile(join(out, "index.html"));
    assertStringIncludes(page, "3 targets: 1 done, 2 failed");
    assertStringIncludes(page, "the nearest known key is &#34;orbit&#34;");
  }));

Deno.test("runBatch() keeps what is done, does again what has changed", () =>
  inFolder(async (folder) => {
    const { manifest } = await smallCampaign(folder, { commands: ["check", "trail"] });
    const out = join(folder, "out");
    const kept = (name: string) => `${name}: kept kept`;
    const made = (name: string) => `${name}: made made`;
    const names = ["vx-2401", "vx-2402", "vx-2403"];
    assertEquals(statuses(await run(manifest, out)), names.map(made));
    const before = await Deno.stat(join(out, "vx-2401/trail.fits"));
    assertEquals(statuses(await run(manifest, out)), names.map(kept));
    const after = await Deno.stat(join(out, "vx-2401/trail.fits"));
    assertEquals([after.ino, after.mtime], [before.ino, before.mtime]);

    // An input: the digest counts, not the time.
    const stack = join(folder, "stars/vx-2402/blue/blues.fits");
    const bytes = await Deno.readFile(stack);
    await Deno.writeFile(stack, bytes);
    assertEquals(statuses(await run(manifest, out)), names.map(kept));
    const changed = bytes.slice();
    changed[bytes.length - 2000]! ^= 1;
    await Deno.writeFile(stack, changed);
    assertEquals(statuses(await run(manifest, out)), [
      kept("vx-2401"),
      made("vx-2402"),
      kept("vx-2403"),
    ]);

    // A setting of the target file, and one of the call.
    const star = join(folder, "stars/vx-2403.toml");
    const text = await Deno.readTextFile(star);
    await Deno.writeTextFile(star, text.replace(/systemic_kms = .*/, "systemic_kms = 1.0"));
    assertEquals(statuses(await run(manifest, out))[2], made("vx-2403"));
    assertEquals(statuses(await run(manifest, out, { set: ["seed=7"] })), names.map(made));
    assertEquals(statuses(await run(manifest, out, { set: ["seed=7"] })), names.map(kept));

    // An output that somebody removed or changed is made again; the other one is kept.
    await Deno.remove(join(out, "vx-2401/trail.fits"));
    await Deno.writeTextFile(join(out, "vx-2402/check.json"), '{"schema":"check/1","version":"0"}');
    assertEquals(statuses(await run(manifest, out, { set: ["seed=7"] })), [
      "vx-2401: kept made",
      "vx-2402: made kept",
      kept("vx-2403"),
    ]);
  }));

Deno.test("runBatch() takes away what other settings made before it makes anew", () =>
  inFolder(async (folder) => {
    const { manifest } = await smallCampaign(folder, { stars: 1, commands: ["plate"] });
    const out = join(folder, "out");
    await run(manifest, out, { set: ['plate.formats=["svg"]'] });
    assert((await filesUnder(out)).has("vx-2401/plate.svg"));
    const { result } = await run(manifest, out, { set: ["plate.formats=[]"] });
    assertEquals(result!.document.failed, ["vx-2401"]);
    await run(manifest, out, { set: ['plate.formats=["png"]'] });
    const files = await filesUnder(out);
    assertEquals([files.has("vx-2401/plate.png"), files.has("vx-2401/plate.svg")], [true, false]);
    const reference = join(folder, "reference");
    await run(manifest, reference, { set: ['plate.formats=["png"]'] });
    await assertSameOutputs(out, reference);
  }));

Deno.test("runBatch() never replaces another's file unasked", () =>
  inFolder(async (folder) => {
    const { manifest } = await smallCampaign(folder, { stars: 2, commands: ["check"] });
    const out = join(folder, "out");
    await Deno.mkdir(join(out, "vx-2401"), { recursive: true });
    await Deno.writeTextFile(join(out, "vx-2401/check.json"), "mine");
    const { result } = await run(manifest, out);
    assertEquals(result!.document.failed, ["vx-2401"]);
    assertStringIncludes(result!.document.runs[0]!.error!.message, "Millrace did not write");
    assertEquals(await Deno.readTextFile(join(out, "vx-2401/check.json")), "mine");
    await Deno.writeTextFile(join(out, "summary.csv"), "a,b\n1,2\n");
    await assertRejects(() => run(manifest, out), Error, "Millrace did not write");
    assertEquals((await run(manifest, out, { overwrite: true })).result!.document.failed, []);
  }));

Deno.test("a second run in the same folder says so and stops", () =>
  inFolder(async (folder) => {
    const { manifest } = await smallCampaign(folder, { stars: 2, commands: ["check"] });
    const out = join(folder, "out");
    const told: string[] = [];
    const refused = async (options: Parameters<typeof run>[2]) => {
      const error = await assertRejects(() => run(manifest, out, options), WorkError);
      assertStringIncludes(error.message, "another run is at work there: the first");
      told.push(error.message);
    };
    // While the whole is at work neither it nor a part of it may begin.
    const attempts: Promise<void>[] = [];
    await run(manifest, out, {
      owner: "the first",
      onTarget: () => {
        if (attempts.length > 0) return;
        attempts.push(refused({}), refused({ part: { index: 1, count: 2 } }));
      },
    });
    await Promise.all(attempts);
    assertEquals(told.length, 2);
  }));

Deno.test("runBatch() lets parts of one division work at the same time", () =>
  inFolder(async (folder) => {
    const { manifest } = await smallCampaign(folder, { stars: 2, commands: ["check"] });
    const out = join(folder, "out");
    const reports = await Promise.all(
      [1, 2].map((index) => run(manifest, out, { part: { index, count: 2 } })),
    );
    assertEquals(reports.map(({ outcomes }) => outcomes.length), [1, 1]);
    assertEquals((await filesUnder(out)).has(".millrace-part-1-of-2.lock"), false);
  }));

Deno.test("runBatch() fails one target when its folder is another's at the moment", () =>
  inFolder(async (folder) => {
    const { manifest } = await smallCampaign(folder, { stars: 2, commands: ["check"] });
    const out = join(folder, "out");
    const { result } = await holdFolder(
      join(out, "vx-2402"),
      () => run(manifest, out),
      { owner: "millrace map" },
    );
    assertEquals(result!.document.failed.concat(result!.document.missing), ["vx-2402"]);
    assertEquals((await run(manifest, out)).result!.document.missing, []);
  }));

Deno.test("gatherBatch() names what is missing and what has to be made again", () =>
  inFolder(async (folder) => {
    const { manifest } = await smallCampaign(folder, { commands: ["check", "trail"] });
    const read = await readManifest(manifest);
    const out = join(folder, "out");
    await run(manifest, out);
    await Deno.remove(join(out, "vx-2401"), { recursive: true });
    await Deno.remove(join(out, "vx-2402/trail.fits"));
    await Deno.writeTextFile(join(folder, "stars/vx-2403.toml"), "# changed\n", { append: true });
    const { document } = await gatherBatch(read, { jobs: batchJobs(read), folder: out });
    assertEquals(document.missing, ["vx-2401", "vx-2402", "vx-2403"]);
    assertEquals(
      document.runs.map(({ steps }) => steps.map(({ status }) => status).join(" ")),
      ["missing missing", "done missing", "missing missing"],
    );
    const page = await Deno.readTextFile(join(out, "index.html"));
    assertStringIncludes(page, "3 targets: 0 done, 3 missing");
    assertStringIncludes(page, "or to be made again: VX-2401; VX-2403.");
    assertStringIncludes(page, "not made: trail");
  }));

Deno.test("provenance.json says from what, when and with what digests a target was made", () =>
  inFolder(async (folder) => {
    const { manifest } = await smallCampaign(folder, { stars: 1, commands: ["check", "trail"] });
    const out = join(folder, "out");
    let second = 0;
    const now = () => `2030-01-01T00:00:0${second++}Z`;
    await run(manifest, out, { now });
    const { runs } = (await readProvenance(join(out, "vx-2401")))!;
    assertEquals(runs.length, 1);
    const [{ inputs, target_file, steps, set, target_text }] = runs as [typeof runs[0]];
    assertEquals(inputs.map(({ file }) => file), ["vx-2401/blue/blues.fits"]);
    assertEquals(target_file, "../../stars/vx-2401.toml");
    assertEquals(target_text, await Deno.readTextFile(join(folder, "stars/vx-2401.toml")));
    assertEquals(set.length, 5);
    assertEquals(steps.map(({ command, started }) => [command, started]), [
      ["check", "2030-01-01T00:00:01Z"],
      ["trail", "2030-01-01T00:00:03Z"],
    ]);
    assertEquals(steps[0]!.files.map(({ file }) => file), ["check.json", "journal.ecsv"]);
    // No other output knows the time.
    for (const [name, bytes] of await filesUnder(out)) {
      if (/(provenance|batch)\.json$/.test(name)) continue;
      assert(!new TextDecoder("latin1").decode(bytes).includes("2030-01-01"), name);
    }
  }));

Deno.test("runBatch() maps in spite of a large gap in phase when told to, and keeps what it made", () =>
  inFolder(async (folder) => {
    const more =
      '[[changes]]\ntargets = ["*"]\nset = ["trail.skip_phases=[[0.07, 0.44], [0.57, 0.94]]"]\n';
    const { manifest } = await smallCampaign(folder, { stars: 1, commands: ["map"], more });
    const out = join(folder, "out");
    const refused = await run(manifest, out);
    assertEquals(refused.result!.document.failed.length, 1);
    assertStringIncludes(refused.outcomes[0]!.runs[0]!.error!.message, "gap");
    const forced = await run(manifest, out, { force: true });
    assertEquals(forced.result!.document.failed, []);
    assertEquals(statuses(await run(manifest, out, { force: true })), ["vx-2401: kept kept"]);
    const read = await readManifest(manifest);
    const jobs = batchJobs(read, { force: true });
    assertEquals((await gatherBatch(read, { jobs, folder: out })).document.missing, []);
  }));
