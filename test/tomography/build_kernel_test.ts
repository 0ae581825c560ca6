import { assertEquals } from "@std/assert";
import { buildKernel, generatedModule, KERNELS } from "./build_kernel.ts";

for (const name of KERNELS) {
  Deno.test(`${name}_kernel_bytes.ts holds the bytes that its source gives`, async () => {
    assertEquals(await Deno.readTextFile(generatedModule(name)), await buildKernel(name));
  });
}
