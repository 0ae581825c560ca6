import { assert, assertEquals, assertStringIncludes } from "@std/assert";
import { fromFileUrl, join } from "@std/path";
import { parseTarget } from "../engine/campaign/mod.ts";
import { runMillrace } from "./cli/run_millrace.ts";

const root = fromFileUrl(new URL("..", import.meta.url));
const readme = await Deno.readTextFile(join(root, "README.md"));
const blocks = [...readme.matchAll(/^```(\w+)\n([\s\S]*?)^```/gm)]
  .map(([, language, text]) => ({ language: language!, text: text! }));
const only = (language: string) => blocks.filter((block) => block.language === language);

Deno.test("README's target file is one that Millrace takes", () => {
  const [block] = only("toml");
  const target = parseTarget(block!.text);
  assertEquals(target.settings.lines.map(({ name }) => name), ["H beta"]);
  assertEquals(target.settings.map.half_width_kms, 2000);
});

Deno.test("README's library use works from another folder", async () => {
  const folder = await Deno.makeTempDir({ prefix: "millrace-readme-" });
  try {
    const config = JSON.parse(only("json")[0]!.text);
    assertEquals(config.links, ["../millrace"]);
    await Deno.writeTextFile(
      join(folder, "deno.json"),
      JSON.stringify({ ...config, links: [root] }),
    );
    for (const [i, { text }] of only("ts").entries()) {
      await Deno.writeTextFile(join(folder, `${i}.ts`), text);
      const { code, stderr } = await new Deno.Command(Deno.execPath(), {
        // A folder without a lock asks the registry what versions there are, once.
        args: ["run", "--no-prompt", `${i}.ts`],
        cwd: folder,
      }).output();
      assertEquals(code, 0, new TextDecoder().decode(stderr));
    }
  } finally {
    await Deno.remove(folder, { recursive: true });
  }
});

Deno.test("README opens with one paragraph that states the job and names the two commands", () => {
  const [title, job] = readme.split(/\n\n/);
  assertEquals(title, "# Millrace");
  assertStringIncludes(job!, "velocity space");
  assertStringIncludes(
    readme,
    "    npx --yes deno@2.9.6 task demo\n    npx --yes deno@2.9.6 task test\n",
  );
});

Deno.test("README lists the commands that there are, and no other", async () => {
  const listed = [...readme.matchAll(/^\| `(\w+)/gm)].map(([, name]) => name!);
  const { stdout } = await runMillrace(["--help"]);
  const commands = [...stdout.matchAll(/^ {2}(\w+) .*\[options\]/gm)].map(([, name]) => name!)
    .filter((name) => name !== "help");
  assertEquals(listed.sort(), commands.sort());
});

Deno.test("README's links lead somewhere", async () => {
  const links = [...readme.matchAll(/\]\(([^)#]+)\)/g)].map(([, link]) => link!);
  assert(links.length > 0);
  for (const link of links) assert((await Deno.stat(join(root, link))).size > 0, link);
});
