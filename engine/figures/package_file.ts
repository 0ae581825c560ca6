import { readFileSync } from "node:fs";

/**
 * Reads a file of a package: a font, a WebAssembly module. The package must be in the module graph
 * (its `package.json` imported where nothing else is), or a clean machine will not have fetched it.
 *
 * @param resolved What `import.meta.resolve` made of the file's name.
 * @returns The bytes.
 */
export function packageFile(resolved: string): Uint8Array<ArrayBuffer> {
  const bytes = readFileSync(new URL(resolved));
  // Fonts are looked into by offset: an array of their own keeps that simple.
  return new Uint8Array(bytes);
}
