import { assertEquals, assertRejects, assertThrows } from "@std/assert";
import { join } from "@std/path";
import { InputError } from "@millrace/millrace/errors";
import { batchJobs, isMeant, parseManifest, readManifest } from "@millrace/millrace/campaign";
import { inFolder } from "../files/support.ts";

const GOOD = `format = 1
targets = ["stars/*.toml"]

[[variants]]
name = "entropy"
set = ["map.method=entropy"]
`;

// Every wrong manifest with its whole message.
const WRONG: readonly (readonly [name: string, text: string, message: string])[] = [
  [
    "an unknown key",
    GOOD.replace("targets", "target"),
    'Cannot read manifest as key "target" is not known in the manifest (night.toml:2:1, key target); the nearest known key is "targets"',
  ],
  [
    "a missing key",
    GOOD.replace(/targets.*\n/, ""),
    "Cannot read manifest as targets must be given (night.toml, key targets)",
  ],
  [
    "another format",
    GOOD.replace("format = 1", "format = 2"),
    "Cannot read manifest as format must be 1: current value is 2 (night.toml:1:1, key format)",
  ],
  [
    "an unknown command",
    GOOD.replace("[[variants]]", 'commands = ["chek"]\n[[variants]]'),
    'Cannot read manifest as commands[0] must be one of "check", "profile", "trail", "orbit", "map", "synth", "weigh", "plate": current value is "chek" (night.toml:4:13, key commands[0]); the nearest is "check"',
  ],
  [
    "a variant named as a path",
    GOOD.replace('"entropy"', '"../entropy"'),
    'Cannot read manifest as name must be a name for a folder or file: letters, digits, dots, hyphens, underscores: current value is "../entropy" (night.toml:5:1, key variants[0].name)',
  ],
  [
    "a variant twice",
    `${GOOD}[[variants]]\nname = "entropy"\n`,
    'Cannot read manifest as name must not come twice: current value is "entropy" (night.toml:8:1, key variants[1].name)',
  ],
  [
    "a sample plate of no variant",
    `${GOOD}[[sample_plates]]\nvariant = "entropie"\n`,
    'Cannot read manifest as variant must be the name of one of the variants: current value is "entropie" (night.toml:8:1, key sample_plates[0].variant)',
  ],
  [
    "a syntax error",
    `${GOOD}set = [`,
    "Cannot read manifest as it is not valid TOML: unspecified values are invalid (night.toml:7:8)",
  ],
];

for (const [name, text, message] of WRONG) {
  Deno.test(`parseManifest() says where and what when there is ${name}`, () => {
    const error = assertThrows(() => parseManifest(text, { file: "night.toml" }), InputError);
    assertEquals(error.message, message);
  });
}

async function campaign(
  folder: string,
  options: { manifest: string; files: readonly string[] },
): Promise<string> {
  for (const file of options.files) {
    await Deno.mkdir(join(folder, file, ".."), { recursive: true });
    await Deno.writeTextFile(join(folder, file), "format = 1\n");
  }
  const path = join(folder, "night.toml");
  await Deno.writeTextFile(path, options.manifest);
  return path;
}

Deno.test("readManifest() names targets after files, and after folders where files are target.toml", () =>
  inFolder(async (folder) => {
    const manifest = await readManifest(
      await campaign(folder, {
        manifest: 'format = 1\ntargets = ["**/*.toml", "a/b.toml"]\n',
        files: ["z.toml", "a/b.toml", "vx-1/target.toml", "vx-2/target.toml"],
      }),
    );
    assertEquals(manifest.title, "night");
    assertEquals(
      manifest.targets.map(({ name, path }) => [name, path]),
      [
        ["b", "a/b.toml"],
        ["night", "night.toml"],
        ["vx-1", "vx-1/target.toml"],
        ["vx-2", "vx-2/target.toml"],
        ["z", "z.toml"],
      ],
    );
    assertEquals(manifest.targets[0]!.file, join(folder, "a/b.toml"));
  }));

Deno.test("readManifest() refuses two targets of one name, naming both", () =>
  inFolder(async (folder) => {
    const path = await campaign(folder, {
      manifest: 'format = 1\ntargets = ["*/star.toml"]\n',
      files: ["a/star.toml", "b/star.toml"],
    });
    const error = await assertRejects(() => readManifest(path), InputError);
    assertEquals(
      error.rule,
      "each target must have a name of its own: a/star.toml and b/star.toml have one",
    );
    assertEquals([error.line, error.key], [2, "targets"]);
  }));

Deno.test("readManifest() says which pattern finds nothing", () =>
  inFolder(async (folder) => {
    const files = ["vx-1.toml"];
    const none = await campaign(folder, { manifest: 'format = 1\ntargets = ["x*.toml"]\n', files });
    const error = await assertRejects(() => readManifest(none), InputError);
    assertEquals([error.key, error.line, error.value], ["targets[0]", 2, "x*.toml"]);
    const change =
      'format = 1\ntargets = ["v*.toml"]\n[[changes]]\ntargets = ["vx-2"]\nset = ["seed=2"]\n';
    const path = await campaign(folder, { manifest: change, files });
    const second = await assertRejects(() => readManifest(path), InputError);
    assertEquals([second.key, second.line], ["changes[0].targets[0]", 4]);
  }));

Deno.test("isMeant() takes names and paths, not parts of them", () => {
  const target = { name: "vx-0417", file: "/data/stars/vx-0417.toml", path: "stars/vx-0417.toml" };
  assertEquals(
    ["vx-0417", "vx-*", "stars/*.toml", "*", "vx", "vx-0418", "*.toml", "stars"]
      .map((pattern) => isMeant(target, [pattern])),
    [true, true, true, true, false, false, false, false],
  );
});

Deno.test("batchJobs() puts overrides in the order all, some, variant, call", () =>
  inFolder(async (folder) => {
    const manifest = await readManifest(
      await campaign(folder, {
        manifest: `format = 1
targets = ["v*.toml"]
commands = ["plate", "check"]
set = ["seed=1"]
[[changes]]
targets = ["vx-2"]
set = ["seed=2"]
[[variants]]
name = "fine"
targets = ["vx-2"]
commands = ["check"]
set = ["seed=3"]
`,
        files: ["vx-1.toml", "vx-2.toml"],
      }),
    );
    const jobs = batchJobs(manifest, { set: ["seed=4"], seed: 5 });
    assertEquals(jobs.map(({ name, seed }) => [name, seed]), [["vx-1", 5], ["vx-2", 5]]);
    assertEquals(jobs[0]!.runs, [{
      variant: null,
      folder: "vx-1",
      // In the order in which they are run, with the thumbnail that comes with a map.
      commands: ["check", "plate", "thumbnail"],
      set: ["seed=1", "seed=4"],
    }]);
    assertEquals(jobs[1]!.runs.map(({ folder, set }) => [folder, set]), [
      ["vx-2", ["seed=1", "seed=2", "seed=4"]],
      [join("vx-2", "fine"), ["seed=1", "seed=2", "seed=3", "seed=4"]],
    ]);
    assertEquals(jobs[1]!.runs[1]!.commands, ["check"]);
  }));
