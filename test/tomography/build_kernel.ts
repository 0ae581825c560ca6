// Builds the WebAssembly kernels of the tomography room: `deno task wasm`.
import asc from "assemblyscript/asc";

const FOLDER = new URL("../../engine/tomography/", import.meta.url);

/** Name of a kernel: its source is `<name>_kernel.as`, its module `<name>_kernel_bytes.ts`. */
export type KernelName = "slant" | "vector";

export const KERNELS: readonly KernelName[] = ["slant", "vector"];

/** The module that holds a kernel's bytes. */
export function generatedModule(name: KernelName): URL {
  return new URL(`${name}_kernel_bytes.ts`, FOLDER);
}

/** Compiles a kernel and returns the text of the module that holds it. */
export async function buildKernel(name: KernelName): Promise<string> {
  const source = await Deno.readTextFile(new URL(`${name}_kernel.as`, FOLDER));
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
      readFile: (file) => file === "kernel.ts" ? source : null,
      writeFile: (_file, contents) => {
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
    ` * WebAssembly in base64, generated from ${name}_kernel.as by \`deno task wasm\`.`,
    " */",
    `export const ${name.toUpperCase()}_KERNEL_BYTES = [`,
    ...lines.map((line) => `  "${line}",`),
    `].join("");`,
    "",
  ].join("\n");
}

if (import.meta.main) {
  for (const name of KERNELS) {
    await Deno.writeTextFile(generatedModule(name), await buildKernel(name));
  }
}
