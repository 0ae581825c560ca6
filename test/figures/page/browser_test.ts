import { assertEquals } from "@std/assert";
import { toolExists } from "../decode.ts";
import { BROWSER, checks } from "./browser_checks.ts";

let results: Promise<Map<string, string | null>> | undefined;

/** Runs all checks once, in a process that may do what driving a browser needs. */
async function runChecks(): Promise<Map<string, string | null>> {
  const script = new URL("browser_checks.ts", import.meta.url).pathname;
  const command = new Deno.Command(Deno.execPath(), {
    args: ["run", "--allow-all", "--no-check", script],
  });
  const { stdout, stderr } = await command.output();
  const found = new Map<string, string | null>();
  for (const line of new TextDecoder().decode(stdout).trim().split("\n")) {
    if (!line.startsWith("{")) continue;
    const { name, fault } = JSON.parse(line) as { name: string; fault: string | null };
    found.set(name, fault);
  }
  if (found.size === 0) throw new Error(new TextDecoder().decode(stderr));
  return found;
}

for (const { name } of checks) {
  Deno.test({
    name,
    ignore: !toolExists(BROWSER),
    async fn() {
      results ??= runChecks();
      assertEquals((await results).get(name), null);
    },
  });
}
