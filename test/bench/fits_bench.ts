// Reading FITS beside astropy, in one run on one machine, as ratios of the least times:
// deno run --allow-read --allow-write --allow-run test/bench/fits_bench.ts
//
// Each task is the whole job from the file's name to physical values in memory. astropy's start-up
// is left out: it times itself within one process. Where astropy is missing only our own times come.
import { encodeFits, parseFits } from "@millrace/millrace/fits";
import type { HduSpec } from "@millrace/millrace/fits";
import { readBytes } from "@millrace/millrace/files";
import { randomStream } from "@millrace/millrace/numerics";

const RUNS = 12;

interface Task {
  readonly name: string;
  readonly hdus: () => HduSpec[];
  readonly read: (bytes: Uint8Array) => number;
  /** Python that reads `path` and leaves a number in `total`. */
  readonly python: string;
}

const random = randomStream(1);
const noise = (length: number) => Float32Array.from({ length }, () => random.normal());

const sumOf = (values: ArrayLike<number>) => {
  let sum = 0;
  for (let k = 0; k < values.length; k++) sum += values[k]!;
  return sum;
};

const TASKS: Task[] = [
  {
    name: "spectrum: 4096 pixels, 40 cards",
    hdus: () => [{
      kind: "image",
      shape: [4096],
      data: noise(4096),
      cards: Array.from({ length: 40 }, (_, k) => ({ keyword: `KEY${k}`, value: k / 7 })),
    }],
    read: (bytes) => sumOf(parseFits(bytes).hdus[0]!.image().data),
    python: "total = float(f[0].data.astype('f8').sum()); f[0].header['KEY39']",
  },
  {
    name: "image: 2048 × 2048 floats of 32 bits",
    hdus: () => [{ kind: "image", shape: [2048, 2048], data: noise(2048 ** 2) }],
    read: (bytes) => sumOf(parseFits(bytes).hdus[0]!.image().data),
    python: "total = float(f[0].data.astype('f8').sum())",
  },
  {
    name: "image: 2048 × 2048 unsigned integers of 16 bits",
    hdus: () => [{
      kind: "image",
      shape: [2048, 2048],
      data: Uint16Array.from(noise(2048 ** 2), (x) => 1000 + 100 * x),
    }],
    read: (bytes) => sumOf(parseFits(bytes).hdus[0]!.image().data),
    python: "total = float(f[0].data.astype('f8').sum())",
  },
  {
    name: "table: 100,000 rows, 6 columns",
    hdus: () => [{
      kind: "table",
      columns: [
        { name: "A", data: Float64Array.from(noise(100_000)) },
        { name: "B", data: noise(100_000) },
        { name: "C", data: Int32Array.from(noise(100_000), (x) => 1000 * x) },
        { name: "D", data: Uint16Array.from(noise(100_000), (x) => 1000 + 100 * x) },
        { name: "E", data: noise(400_000), shape: [4] },
        { name: "F", data: Array.from(noise(100_000), (x) => x.toFixed(3)) },
      ],
    }],
    read: (bytes) => {
      const table = parseFits(bytes).hdus[1]!;
      const numbers = ["A", "B", "C", "D", "E"].map((name) => sumOf(table.numbers(name)));
      return sumOf(numbers) + table.texts("F").length;
    },
    python: "d = f[1].data; total = sum(float(np.asarray(d[n], 'f8').sum()) for n in 'ABCDE')" +
      " + len(d['F'].tolist())",
  },
  {
    name: "stack: 300 HDUs of 2048 pixels",
    hdus: () =>
      Array.from({ length: 300 }, (_, k): HduSpec => ({
        kind: "image",
        name: "SCI",
        version: k + 1,
        shape: [2048],
        data: noise(2048),
      })),
    read: (bytes) => sumOf(parseFits(bytes).hdus.map((hdu) => sumOf(hdu.image().data))),
    python: "total = sum(float(h.data.astype('f8').sum()) for h in f)",
  },
];

const script = (python: string) => `
import sys, time, warnings
import numpy as np
from astropy.io import fits
warnings.simplefilter("ignore")
best = 1e9
for k in range(${RUNS}):
    start = time.perf_counter()
    with fits.open(sys.argv[1], memmap=False, checksum=sys.argv[2] == "check", uint=True) as f:
        ${python}
    best = min(best, time.perf_counter() - start)
print(best * 1000, total)
`;

async function astropy(path: string, python: string, checksum: boolean) {
  try {
    const args = ["-c", script(python), path, checksum ? "check" : "no"];
    const { stdout, success } = await new Deno.Command("/usr/bin/python3", { args }).output();
    return success ? new TextDecoder().decode(stdout).trim().split(" ").map(Number) : null;
  } catch {
    return null;
  }
}

const folder = await Deno.makeTempDir();
console.log("least of", RUNS, "runs: ours (ms), astropy without and with checksums (ms), ratios");
for (const { name, hdus, read, python } of TASKS) {
  const path = `${folder}/bench.fits`;
  await Deno.writeFile(path, encodeFits(hdus()));
  let best = Infinity;
  let total = 0;
  for (let run = 0; run < RUNS; run++) {
    const start = performance.now();
    total = read(await readBytes(path));
    best = Math.min(best, performance.now() - start);
  }
  const plain = await astropy(path, python, false);
  const checked = await astropy(path, python, true);
  const agrees = plain === null || Math.abs(plain[1]! - total) <= 1e-6 * Math.abs(total);
  const show = (other: number[] | null) =>
    other === null ? "-" : `${other[0]!.toFixed(2)} (${(best / other[0]!).toFixed(2)})`;
  console.log(
    [name, best.toFixed(2), show(plain), show(checked), agrees ? "" : "SUMS DIFFER"].join(" | "),
  );
}
await Deno.remove(folder, { recursive: true });
