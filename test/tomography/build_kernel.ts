// Builds the WebAssembly kernel of the tomography room: `deno task wasm`.
import asc from "assemblyscript/asc";

const FOLDER = new URL("../../engine/tomography/", import.meta.url);
const SOURCE = new URL("slant_kernel.as", FOLDER);
export const GENERATED: URL = new URL("slant_kernel_bytes.ts", FOLDER);

/** Compiles the kernel and returns the text of the module that holds it. */
export async function buildKernel(): Promise<string> {
  const source = await Deno.readTextFile(SOURCE);
  let bytes: Uint8Array | undefined;
  const messages: string[] = [];
  const { error } = await asc.main(
    [
      "kernel.ts",
      "-O3",
      "--noAssert",
      "--enable",
      "simd",
      "--runtime",
      "stub",
      "--importMemory",
      "--outFile",
      "kernel.wasm",
    ],
    {
      readFile: (name) => name === "kernel.ts" ? source : null,
      writeFile: (_name, contents) => {
        if (contents instanceof Uint8Array) bytes = contents;
      },
      listFiles: () => [],
      stdout: { write: () => {} },
      stderr: { write: (text) => messages.push(String(text)) },
    },
  );
  if (error !== null || bytes === undefined) {
    throw new Error(`Cannot build kernel: ${error?.message ?? "no output"}\n${messages.join("")}`);
  }
  const lines = btoa(String.fromCharCode(...bytes)).match(/.{1,90}/g) ?? [];
  return [
    "/**",
    " * The slanted projection in WebAssembly, base64. Generated from slant_kernel.as by `deno task wasm`.",
    " */",
    `export const SLANT_KERNEL_BYTES = [`,
    ...lines.map((line) => `  "${line}",`),
    `].join("");`,
    "",
  ].join("\n");
}

if (import.meta.main) await Deno.writeTextFile(GENERATED, await buildKernel());
