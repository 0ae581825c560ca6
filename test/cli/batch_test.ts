import { assert, assertEquals, assertMatch, assertStringIncludes } from "@std/assert";
import { join } from "@std/path";
import { smallCampaign } from "../campaign/batch_fixture.ts";
import { inFolder, namesIn } from "../files/support.ts";
import { LAUNCH, runMillrace } from "./run_millrace.ts";

Deno.test("millrace batch says a line a target, names what failed, and exits 1 with the count", () =>
  inFolder(async (folder) => {
    await smallCampaign(folder, { commands: ["check"] });
    await Deno.writeTextFile(join(folder, "stars/vx-2402.toml"), "format = 1\n");
    const { code, stdout, stderr } = await runMillrace(["batch", "night.toml"], { cwd: folder });
    assertEquals(code, 1);
    const news = stderr.trimEnd().split("\n");
    assertEquals(news.length, 4, stderr);
    assertMatch(news[0]!, /^1 of 3 targets/);
    assertEquals(
      news.find((line) => line.includes("vx-2402"))!.replace(/^.*targets[^:]*: /, ""),
      "vx-2402 failed: Cannot read exposures as the target file must name at least one set of " +
        'files (vx-2402.toml); add a table such as [[exposures]] with files = ["night1/*.fits"]',
    );
    assertEquals(
      news[3],
      "millrace: Cannot finish the batch: 1 failed (vx-2402); mend what is named and run the " +
        "same again: what is done is kept",
    );
    assertStringIncludes(stdout, "A night: 3 targets, 2 done, 1 failed");
    assertStringIncludes(stdout, "wrote night/summary.ecsv");
    // With --json nothing is printed on failure; the document is written all the same.
    const json = await runMillrace(["batch", "night.toml", "--json", "--quiet"], { cwd: folder });
    assertEquals([json.code, json.stdout], [1, ""]);
    const document = JSON.parse(await Deno.readTextFile(join(folder, "night/batch.json")));
    assertEquals([document.schema, document.failed], ["batch/1", ["vx-2402"]]);
  }));

Deno.test("millrace batch does parts, and gathers them with what is missing", () =>
  inFolder(async (folder) => {
    await smallCampaign(folder, { stars: 2, commands: ["check"] });
    const run = (...args: string[]) =>
      runMillrace(["batch", "night.toml", ...args], { cwd: folder });
    const both = await run("--part", "1/2", "--gather");
    assertEquals(both.code, 2);
    assertStringIncludes(both.stderr, "--part and --gather must not stand together");
    const part = await run("--part", "1/2", "--json");
    assertEquals(part.code, 0, part.stderr);
    const document = JSON.parse(part.stdout);
    assertEquals([document.schema, document.outcomes.length], ["batch-part/1", 1]);
    const early = await run("--gather");
    assertEquals(early.code, 1);
    const [{ name: done }] = document.outcomes;
    const missing = done === "vx-2401" ? "vx-2402" : "vx-2401";
    assertStringIncludes(early.stderr, `1 not made (${missing})`);
    assertEquals((await run("--part", "2/2")).code, 0);
    const late = await run("--gather", "--json");
    assertEquals(late.code, 0, late.stderr);
    assertEquals(JSON.parse(late.stdout).missing, []);
  }));

Deno.test("millrace batch leaves no lock and nothing half-written when interrupted", () =>
  inFolder(async (folder) => {
    const { manifest } = await smallCampaign(folder);
    for (const workers of ["1", "2"]) {
      const out = join(folder, `out-${workers}`);
      const child = new Deno.Command(Deno.execPath(), {
        args: [...LAUNCH, "batch", manifest, "--out", out, "--workers", workers],
        stdin: "null",
        stdout: "null",
        stderr: "null",
      }).spawn();
      // At work: the first target's folder has its lock.
      for (;;) {
        const names = await namesIn(join(out, "vx-2401")).catch((): string[] => []);
        if (names.includes(".millrace.lock")) break;
        await new Promise((resolve) => setTimeout(resolve, 5));
      }
      child.kill("SIGINT");
      assertEquals((await child.status).code, 130);
      const left: string[] = [];
      for (const path of [out, ...["vx-2401", "vx-2402"].map((name) => join(out, name))]) {
        left.push(
          ...(await namesIn(path).catch((): string[] => [])).filter((name) => name.startsWith(".")),
        );
      }
      // What a step has made for the next one stays: the batch goes on from there.
      const hidden = left.filter((name) => name.startsWith(".") && name !== ".millrace-kept");
      assertEquals(hidden, [], `${workers} workers`);
    }
  }));

Deno.test("millrace redo makes the same bytes, or names what differs", () =>
  inFolder(async (folder) => {
    const { manifest } = await smallCampaign(folder, { stars: 1, commands: ["check", "trail"] });
    const out = join(folder, "out");
    assertEquals((await runMillrace(["batch", manifest, "--out", out])).code, 0);
    const record = join(out, "vx-2401/provenance.json");
    const before = await namesIn(join(out, "vx-2401"));
    const good = await runMillrace(["redo", record]);
    assertEquals(good.code, 0, good.stderr);
    assertStringIncludes(good.stdout, "check, trail: 3 files with the same bytes");
    assertEquals(await namesIn(join(out, "vx-2401")), before);

    // The target file edited: the recorded text is used, and that is said.
    const star = join(folder, "stars/vx-2401.toml");
    await Deno.writeTextFile(star, "# later thoughts\n", { append: true });
    const kept = join(folder, "again");
    const edited = await runMillrace(["redo", record, "--out", kept, "--json"]);
    assertEquals(edited.code, 0, edited.stderr);
    const { same, differences } = JSON.parse(edited.stdout);
    assert(same.includes("trail.fits"));
    assertEquals(differences.map(({ kind }: { kind: string }) => kind), ["target-file"]);
    assertEquals(
      await Deno.readFile(join(kept, "trail.fits")),
      await Deno.readFile(join(out, "vx-2401/trail.fits")),
    );

    // An exposure changed: its name, and those of the outputs that differ for it.
    const stack = join(folder, "stars/vx-2401/blue/blues.fits");
    const bytes = await Deno.readFile(stack);
    bytes[bytes.length - 5000]! ^= 64;
    await Deno.writeFile(stack, bytes);
    const changed = await runMillrace(["redo", record]);
    assertEquals(changed.code, 1);
    assertStringIncludes(changed.stdout, "vx-2401/blue/blues.fits");
    assertStringIncludes(changed.stdout, "it has changed since");
    assertStringIncludes(changed.stderr, "Cannot make the same bytes again");
    await Deno.remove(stack);
    const gone = await runMillrace(["redo", record]);
    assertEquals(gone.code, 1);
    assertStringIncludes(gone.stderr, "vx-2401/blue/blues.fits: it is missing");

    const wrong = await runMillrace(["redo", join(out, "batch.json")]);
    assertEquals(wrong.code, 2);
    assertStringIncludes(wrong.stderr, 'its schema must be "provenance/1"');
  }));

Deno.test("single commands record themselves, other settings apart, and redo takes them all", () =>
  inFolder(async (folder) => {
    const { set } = await smallCampaign(folder, { stars: 1 });
    const settings = set.flatMap((text) => ["--set", text]);
    const star = join(folder, "stars/vx-2401.toml");
    const run = (...args: string[]) => runMillrace([...args, "--quiet"]);
    assertEquals((await run("check", star, ...settings)).code, 0);
    assertEquals((await run("trail", star, ...settings)).code, 0);
    const other = await run("check", star, ...settings, "--seed", "9");
    assertEquals(other.code, 0, other.stderr);
    assertStringIncludes(other.stdout, "stars/vx-2401/provenance.json");
    const record = join(folder, "stars/vx-2401/provenance.json");
    const { runs } = JSON.parse(await Deno.readTextFile(record));
    assertEquals(
      runs.map((one: { seed: number; steps: { command: string }[] }) => [
        one.seed,
        ...one.steps.map(({ command }) => command),
      ]),
      [[1, "trail"], [9, "check"]],
    );
    assertMatch(runs[0].steps[0].started, /^\d{4}-\d\d-\d\dT[\d:.]+Z$/);
    const redone = await run("redo", record);
    assertEquals(redone.code, 0, redone.stderr);
    assertStringIncludes(redone.stdout, "trail, check: 3 files with the same bytes");
  }));

Deno.test("millrace map does shares of its resamples, and gathers them", () =>
  inFolder(async (folder) => {
    const { set } = await smallCampaign(folder, { stars: 1 });
    const settings = set.flatMap((text) => ["--set", text]);
    const star = join(folder, "stars/vx-2401.toml");
    const run = (...args: string[]) => runMillrace(["map", star, ...settings, "--quiet", ...args]);
    const early = await run("--gather");
    assertEquals(early.code, 1);
    assertStringIncludes(early.stderr, "2 of 2 pieces of the replicas are missing: 0 to 1");
    const part = await run("--part", "2/2", "--json");
    assertEquals(part.code, 0, part.stderr);
    assertEquals(JSON.parse(part.stdout).part, { index: 2, count: 2 });
    assertEquals((await run("--gather")).code, 0);
    const shared = await Deno.readFile(join(folder, "stars/vx-2401/map.fits"));
    assertEquals((await run("--out", join(folder, "alone"))).code, 0);
    assertEquals(await Deno.readFile(join(folder, "alone/map.fits")), shared);
  }));
