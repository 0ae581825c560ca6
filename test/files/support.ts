/** Runs a test's body in a folder of its own, which is removed afterwards. */
export async function inFolder(body: (folder: string) => Promise<void>): Promise<void> {
  const folder = await Deno.makeTempDir({ prefix: "millrace-test-" });
  try {
    await body(folder);
  } finally {
    await Deno.remove(folder, { recursive: true });
  }
}

/** Names in a folder, sorted. */
export async function namesIn(folder: string): Promise<string[]> {
  const names: string[] = [];
  for await (const { name } of Deno.readDir(folder)) names.push(name);
  return names.sort();
}

/** Whether a program of the system can be run: tests that need it are skipped where it cannot. */
export function isAvailable(program: string, args: readonly string[] = ["--version"]): boolean {
  try {
    const { code } = new Deno.Command(program, {
      args: [...args],
      stdout: "null",
      stderr: "null",
      stdin: "null",
    }).outputSync();
    return code === 0;
  } catch {
    return false;
  }
}
