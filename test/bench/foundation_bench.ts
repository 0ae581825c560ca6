// Speed of the rooms at the foundation: fits, streams, times, worker threads.
import {
  chiSquareTail,
  minimise,
  nonNegativeLeastSquares,
  randomStream,
  solveLeastSquares,
} from "@millrace/millrace/numerics";
import { lineNamed, midExposureBjd } from "@millrace/millrace/sky";
import { runTasks } from "@millrace/millrace/workers";
import { Matrix } from "ml-matrix";

const stream = randomStream(1);
const noise = Float64Array.from({ length: 14_080 }, () => stream.normal());
const bump = (p: Float64Array, i: number) =>
  p[0]! + p[1]! * Math.exp(-0.5 * ((i - p[2]!) / p[3]!) ** 2);
const data = noise.map((n, i) => n + bump(Float64Array.of(1, 20, 7000, 900), i));
const design = new Matrix(
  Array.from({ length: 2000 }, () => Array.from({ length: 10 }, () => stream.normal() + 0.5)),
);
const samples = noise.slice(0, 2000);
const sight = {
  target: { ra_deg: 83.1, dec_deg: -12.4 },
  site: { latitude_deg: -30.2, longitude_east_deg: -70.7, height_m: 2700 },
};

Deno.bench("minimise: 14 080 samples, 4 parameters", () => {
  minimise((p) => data.map((d, i) => d - bump(p, i)), Float64Array.of(0, 10, 6500, 1200));
});

Deno.bench("solveLeastSquares: 2000 × 10", () => {
  solveLeastSquares(design, samples);
});

Deno.bench("nonNegativeLeastSquares: 2000 × 10", () => {
  nonNegativeLeastSquares(design, samples);
});

Deno.bench("randomStream: 100 000 normal deviates", () => {
  const fresh = randomStream(2, 7);
  for (let i = 0; i < 100_000; i++) fresh.normal();
});

Deno.bench("randomStream: stream 1000", () => {
  randomStream(2, 1000);
});

Deno.bench("chiSquareTail: 20 500 at 20 000 degrees of freedom", () => {
  chiSquareTail(20_500, 20_000);
});

Deno.bench("midExposureBjd: one exposure", () => {
  midExposureBjd({ date: [2460311, 0.7], exposure_s: 300 }, sight);
});

Deno.bench("lineNamed: rounded wavelength", () => {
  lineNamed("He I 5875");
});

const text = "export const runTask = (task) => task * 2;";
const module = new URL(`data:text/javascript,${encodeURIComponent(text)}`);
const tasks = Array.from({ length: 100 }, (_, i) => i);

Deno.bench("runTasks: 100 empty tasks, one thread", async () => {
  await runTasks(tasks, { module });
});

Deno.bench("runTasks: 100 empty tasks, two workers from start to end", async () => {
  await runTasks(tasks, { module, workers: 2 });
});
