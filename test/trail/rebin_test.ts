import { assert, assertAlmostEquals, assertEquals } from "@std/assert";
import { pixelEdges, rebin } from "../../engine/trail/mod.ts";
import reference from "../reference/rebin.json" with { type: "json" };

interface Case {
  id: string;
  n: number;
  mask: number[];
  in_edges_A: number[];
  flux: number[];
  err: number[];
  out_edges_A: number[];
  density: (number | string)[];
  error: (number | string)[];
  integral: number[];
  coverage: number[];
  covariance_next: (number | string)[];
  total_integral: number;
}

const cases = reference.cases as unknown as Case[];

// reference/rebin.json: area weighting repeated in exact fractions; Carnall 2017, arXiv:1705.05165
Deno.test("rebin() agrees with exact area weighting in every reference case", () => {
  assertEquals(cases.length, 8);
  for (const c of cases) {
    const error = Float64Array.from(c.err, (e, i) => c.mask.includes(i) ? Infinity : e);
    const out = rebin(
      { edges: Float64Array.from(c.in_edges_A), flux: Float64Array.from(c.flux), error },
      Float64Array.from(c.out_edges_A),
    );
    const near = (
      a: number,
      b: number | string,
      scale: number,
      tolerance: number,
      what: string,
    ) => {
      if (typeof b === "string") assert(Number.isNaN(a), `${c.id} ${what}: ${a} is not NaN`);
      else assertAlmostEquals(a, b, tolerance * Math.abs(scale), `${c.id} ${what}`);
    };
    c.density.forEach((d, j) => {
      // The file: bins covered by less than 1e-9 may be either, rounding of the edge decides.
      if (c.coverage[j]! > 0 && c.coverage[j]! < 1e-9) return;
      near(out.flux[j]!, d, Number(d), 1e-8, `density ${j}`);
      near(out.error[j]!, c.error[j]!, Number(c.error[j]), 1e-8, `error ${j}`);
      near(
        out.integral[j]!,
        c.integral[j]!,
        Math.max(c.integral[j]!, 1e-300),
        1e-8,
        `integral ${j}`,
      );
      near(out.coverage[j]!, c.coverage[j]!, 1, 1e-8, `coverage ${j}`);
    });
    c.covariance_next.forEach((v, j) => {
      if (Math.min(c.coverage[j]!, c.coverage[j + 1]!) < 1e-9 && typeof v !== "string") return;
      const scale = Number(c.error[j]) * Number(c.error[j + 1]);
      near(out.covariance_next[j]!, v, scale, 1e-7, `covariance ${j}`);
    });
    const total = out.integral.reduce((a, b) => a + b, 0);
    assertAlmostEquals(total, c.total_integral, 1e-8 * Math.abs(c.total_integral));
  }
});

Deno.test("rebin() leaves its inputs as they were", () => {
  const pixels = {
    edges: Float64Array.of(0, 1, 2, 3),
    flux: Float64Array.of(1, NaN, 3),
    error: Float64Array.of(1, 1, Infinity),
  };
  const before = structuredClone(pixels);
  const out = rebin(pixels, Float64Array.of(0, 1.5, 3));
  assertEquals(pixels, before);
  assertEquals(out.flux[0], 1);
  assert(Number.isNaN(out.flux[1]!));
});

Deno.test("rebin() averages and does not sum: a constant stays the constant on any grid", () => {
  const edges = Float64Array.from({ length: 101 }, (_, i) => i + 0.2 * Math.sin(i));
  const out = rebin({
    edges,
    flux: new Float64Array(100).fill(7),
    error: new Float64Array(100).fill(1),
  }, Float64Array.from({ length: 20 }, (_, j) => 3 + 3.7 * j));
  out.flux.forEach((f) => assertAlmostEquals(f, 7, 1e-12));
});

Deno.test("pixelEdges() gives a single pixel the width one and an empty run no width", () => {
  assertEquals(pixelEdges(Float64Array.of(5)), Float64Array.of(4.5, 5.5));
  assertEquals(pixelEdges(new Float64Array(0)).length, 1);
});
