/**
 * Bundles the script of the report page and writes it as a module:
 * `deno run --allow-read --allow-write --allow-run test/figures/build_page.ts`.
 */

const source = new URL("../../engine/figures/page/page_main.ts", import.meta.url);
/** The module that holds the bundle. */
export const pageModule = new URL("../../engine/figures/page/page_script.ts", import.meta.url);

/** The module's text, from its sources; null where the bundler is not to be had. */
export async function bundlePage(): Promise<string | null> {
  const folder = await Deno.makeTempDir();
  try {
    const out = `${folder}/page.js`;
    const args = ["bundle", "--quiet", "--platform", "browser", "--format", "iife", "--minify"];
    const command = new Deno.Command(Deno.execPath(), {
      args: [...args, "--output", out, source.pathname],
      cwd: new URL("../../", import.meta.url).pathname,
    });
    const { success } = await command.output();
    if (!success) return null;
    // No text of the bundle may end the script element.
    const script = (await Deno.readTextFile(out)).replaceAll("</script", "<\\/script");
    return `// Generated from page_main.ts by test/figures/build_page.ts; not to be changed by hand.
// deno-fmt-ignore-file
// deno-lint-ignore-file
/** The bundled script of the report page. */
export const pageScript: string = ${JSON.stringify(script)};
`;
  } finally {
    await Deno.remove(folder, { recursive: true });
  }
}

if (import.meta.main) {
  const text = await bundlePage();
  if (text === null) throw new Error("the bundler failed");
  await Deno.writeTextFile(pageModule, text);
  console.log(`${text.length} characters written`);
}
