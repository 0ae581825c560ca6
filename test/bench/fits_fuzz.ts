// Reads 100,000 mutated FITS files, or as many as the first argument says:
// deno run --allow-read test/bench/fits_fuzz.ts [count] [first]
import { fuzz } from "../fits/mutate.ts";

const [count = 100_000, first = 1] = Deno.args.map(Number);
const start = performance.now();
const { read, refused, faults, slowest } = await fuzz(first, count);
const seconds = (performance.now() - start) / 1000;
console.log(`${count} inputs in ${seconds.toFixed(1)} s: ${read} read, ${refused} refused`);
console.log(`slowest: input ${slowest.index}, ${slowest.ms.toFixed(1)} ms`);
console.log(`faults: ${faults.length}`);
for (const fault of faults.slice(0, 20)) console.log(fault);
if (faults.length > 0 || slowest.ms > 1000) Deno.exit(1);
