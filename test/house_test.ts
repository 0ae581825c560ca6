import { assertEquals } from "@std/assert";
import { fromFileUrl, relative } from "@std/path";

// The rooms from the ground up: each may import only from those before it, through their mod.ts.
const ROOMS = [
  "errors.ts",
  "constants.ts",
  "numerics",
  "workers",
  "files",
  "fits",
  "sky",
  "binary",
  "spectra",
  "trail",
  "tomography",
  "synthesis",
  "orbit",
  "weighing",
  "figures",
  "campaign",
  "cli",
];
const OPEN = new Set(["errors.ts", "constants.ts"]);
const MAY_TOUCH_SYSTEM = new Set(["files", "workers", "campaign", "cli"]);

const root = fromFileUrl(new URL("..", import.meta.url));

interface Module {
  readonly specifier: string;
  readonly dependencies?: readonly {
    readonly code?: { readonly specifier?: string };
    readonly type?: { readonly specifier?: string };
  }[];
}

async function graphOf(entry: string): Promise<Module[]> {
  const { stdout } = await new Deno.Command(Deno.execPath(), {
    args: ["info", "--json", entry],
    cwd: root,
    stderr: "null",
  }).output();
  return (JSON.parse(new TextDecoder().decode(stdout)) as { modules: Module[] }).modules;
}

function ours(specifier: string): string | null {
  if (!specifier.startsWith("file://")) return null;
  const path = relative(root, fromFileUrl(specifier));
  return path.startsWith("..") ? null : path;
}

function roomOf(path: string): string | null {
  const [top, second] = path.split("/");
  if (top === "cli") return "cli";
  return top === "engine" && second !== undefined ? second : null;
}

async function sources(folder: string): Promise<string[]> {
  const found: string[] = [];
  for await (const entry of Deno.readDir(`${root}/${folder}`)) {
    const path = `${folder}/${entry.name}`;
    if (entry.isDirectory) found.push(...await sources(path));
    else if (path.endsWith(".ts") && !path.endsWith(".d.ts")) found.push(path);
  }
  return found;
}

// A module loaded as a worker or bundled for the page is an entry of its own.
const ownEntry = (path: string) =>
  /(^|_|\/)worker\.ts$/.test(path) || path.startsWith("engine/figures/page/") ||
  path.includes("/kernel/");

Deno.test("rooms are entered in order and by their door", async () => {
  const files = [...await sources("engine"), ...await sources("cli")];
  const entries = files.filter((path) =>
    /^engine\/[^/]+\/mod\.ts$/.test(path) || path === "cli/main.ts" ||
    (ownEntry(path) && !path.includes("/kernel/"))
  );
  const reached = new Set<string>();
  const faults = new Set<string>();
  for (const entry of entries) {
    for (const module of await graphOf(entry)) {
      const from = ours(module.specifier);
      if (from === null) continue;
      reached.add(from);
      const room = roomOf(from);
      for (const dependency of module.dependencies ?? []) {
        const target = dependency.code?.specifier ?? dependency.type?.specifier;
        const to = target === undefined ? null : ours(target);
        const other = to === null ? null : roomOf(to);
        if (to === null || room === null || other === null || other === room) continue;
        if (!ROOMS.includes(room)) faults.add(`${from}: no such room`);
        if (ROOMS.indexOf(other) >= ROOMS.indexOf(room)) faults.add(`${from} -> ${to}: order`);
        else if (!OPEN.has(other) && to !== `engine/${other}/mod.ts`) {
          faults.add(`${from} -> ${to}: not by the door`);
        }
      }
    }
  }
  assertEquals([...faults].sort(), []);
  // A file that nothing reaches is dead.
  const dead = files.filter((path) => !reached.has(path) && !ownEntry(path));
  assertEquals(dead.sort(), []);
});

Deno.test("only files, workers, campaign and cli touch the system", async () => {
  const faults: string[] = [];
  for (const path of await sources("engine")) {
    const room = roomOf(path)!;
    if (MAY_TOUCH_SYSTEM.has(room) || path.startsWith("engine/figures/page/")) continue;
    const code = (await Deno.readTextFile(`${root}/${path}`))
      .replace(/\/\*[\s\S]*?\*\/|\/\/.*$/gm, "");
    if (/\bDeno\.|\bconsole\.|\bDate\.now\b|\bnew Date\(\)|\bMath\.random\b/.test(code)) {
      faults.push(path);
    }
  }
  assertEquals(faults, []);
});

Deno.test("the top level holds only what the house allows", async () => {
  const allowed = new Set(
    ["mod.ts", "engine", "cli", "test", "examples", "deno.json", "deno.lock", "LICENSE"]
      .concat(["README.md", "DEVELOPERS.md", "demo-run"]),
  );
  const names: string[] = [];
  for await (const entry of Deno.readDir(root)) names.push(entry.name);
  assertEquals(names.filter((name) => !name.startsWith(".") && !allowed.has(name)), []);
});
