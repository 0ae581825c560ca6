import { assert, assertAlmostEquals, assertEquals, assertThrows } from "@std/assert";
import gammainc from "@stdlib/gammainc";
import {
  chiSquareTail,
  erf,
  erfc,
  fTail,
  informationCriteria,
  normalQuantile,
  normalTail,
  studentTail,
} from "@millrace/millrace/numerics";
import { InputError } from "@millrace/millrace/errors";
import stats from "../reference/stats.json" with { type: "json" };

// deno-lint-ignore no-explicit-any
const cases = (kind: string) => (stats.cases as any[]).filter((one) => one.kind === kind);

function assertRelative(actual: number, expected: number, relative: number, what: string) {
  assertAlmostEquals(actual, expected, Math.abs(expected) * relative, what);
}

// reference/stats.json: scipy.stats, 1e-9 relative (1e-7 below 1e-30).
Deno.test("chiSquareTail() matches the reference when given its cases", () => {
  assert(cases("chi2_sf").length >= 14);
  for (const { id, chi2, dof, sf } of cases("chi2_sf")) {
    assertRelative(chiSquareTail(chi2, dof), sf, sf < 1e-30 ? 1e-7 : 1e-9, id);
  }
});

// scipy.stats.chi2.sf (scipy 1.10.1), run once for this test: chi2.sf(x, dof).
Deno.test("chiSquareTail() keeps its precision when degrees of freedom are many", () => {
  const values: [number, number, number][] = [
    [22000, 20000, 1.6928531496469168e-22],
    [25000, 20000, 3.6815197169878376e-119],
    [200000, 200000, 0.4995794778896348],
    [203000, 200000, 1.173684513722169e-06],
    [1e6, 1e6, 0.4998119368033945],
    [1400, 10, 9.92039147980046e-295],
  ];
  for (const [x, dof, tail] of values) {
    assertRelative(chiSquareTail(x, dof), tail, 1e-9, `${x} ${dof}`);
  }
});

Deno.test("chiSquareTail() agrees with the library when degrees of freedom are few", () => {
  for (let dof = 1; dof <= 40; dof++) {
    for (const x of [0.01, 0.5, 1, 3, 10, 30, 100, 300]) {
      const expected = gammainc(x / 2, dof / 2, true, true);
      assertRelative(chiSquareTail(x, dof), expected, 1e-12, `${x} ${dof}`);
    }
  }
});

Deno.test("chiSquareTail() falls and stays continuous when series meets fraction", () => {
  for (const dof of [1, 7, 500, 30_000]) {
    const at = dof + 2;
    const [below, above] = [chiSquareTail(at * (1 - 1e-12), dof), chiSquareTail(at, dof)];
    assertRelative(below, above, 1e-9, `${dof}`);
    assert(chiSquareTail(at * 1.01, dof) < above);
  }
});

Deno.test("chiSquareTail() names the rule when its input is wrong", () => {
  assertEquals(chiSquareTail(Infinity, 3), 0);
  assertEquals(chiSquareTail(0, 3), 1);
  assertThrows(() => chiSquareTail(NaN, 3), InputError, "chi-square must be 0 or more");
  assertThrows(
    () => chiSquareTail(1, 0),
    InputError,
    "degrees of freedom must be finite and positive: current value is 0",
  );
});

// reference/stats.json: scipy.stats.f, nested models.
Deno.test("fTail() matches the reference when given its nested fits", () => {
  for (const { id, chi2_1, k1, chi2_2, k2, n, F, p } of cases("f_test")) {
    const f = (chi2_1 - chi2_2) / (k2 - k1) / (chi2_2 / (n - k2));
    assertRelative(f, F, 1e-9, id);
    assertRelative(fTail(f, { dof1: k2 - k1, dof2: n - k2 }), p, 1e-9, id);
  }
});

// scipy.stats.f.sf (scipy 1.10.1), run once for this test.
Deno.test("fTail() keeps its precision when the tail is far", () => {
  const values: [number, number, number, number][] = [
    [500, 3, 40, 9.915760575405728e-32],
    [1.2, 20000, 20000, 2.805253382430437e-38],
    [1e6, 1, 5, 1.8980131131979717e-14],
    [60, 4, 14000, 2.5222584371778893e-50],
  ];
  for (const [f, dof1, dof2, tail] of values) {
    assertRelative(fTail(f, { dof1, dof2 }), tail, 1e-9, `${f} ${dof1} ${dof2}`);
  }
});

// reference/stats.json: scipy.stats.norm.
Deno.test("normalTail() matches the reference when given its deviates", () => {
  for (const { id, z, one_sided_p, two_sided_p } of cases("normal")) {
    assertRelative(normalTail(z), one_sided_p, 1e-9, id);
    assertRelative(2 * normalTail(Math.abs(z)), two_sided_p, 1e-9, id);
    assertAlmostEquals(normalTail(z) + normalTail(-z), 1, 1e-15);
  }
});

Deno.test("normalQuantile() undoes normalTail() when the tail is anywhere", () => {
  for (const z of [-8, -3, -1, -1e-5, 0, 0.3, 2, 5]) {
    assertAlmostEquals(
      -normalQuantile(normalTail(z)),
      z,
      1e-10 * (1 + Math.exp(z < 0 ? z * z / 2 : 0)),
    );
  }
  assertEquals(normalQuantile(0), -Infinity);
  assertEquals(normalQuantile(1), Infinity);
  assertThrows(() => normalQuantile(1.1), InputError, "probability must be from 0 to 1");
});

Deno.test("studentTail() agrees with F and with the normal when it must", () => {
  // t² with dof degrees of freedom is F(1, dof).
  assertRelative(2 * studentTail(2.5, 7), fTail(6.25, { dof1: 1, dof2: 7 }), 1e-13, "F");
  assertAlmostEquals(studentTail(1.5, 1e7), normalTail(1.5), 1e-7);
  assertAlmostEquals(studentTail(-2, 3) + studentTail(2, 3), 1, 1e-15);
});

Deno.test("erf() and erfc() add to one when summed", () => {
  for (const x of [-3, -0.1, 0, 0.7, 2]) assertAlmostEquals(erf(x) + erfc(x), 1, 1e-15);
});

// reference/stats.json: Burnham & Anderson 2002, Schwarz 1978; 1e-12 relative and the 13 digits given.
Deno.test("informationCriteria() matches the reference when errors are known or not", () => {
  for (const one of cases("criteria")) {
    const size = { parameters: one.k, samples: one.n };
    const known = informationCriteria(one.chi2, size);
    assertRelative(known.aic, one.AIC, 1e-12, one.id);
    assertRelative(known.aicc, one.AICc, 1e-12, one.id);
    assertRelative(known.bic, one.BIC, 1e-12, one.id);
    const unknown = informationCriteria(one.n * Math.log(one.rss / one.n), size);
    assertRelative(unknown.aic, one.AIC_rss, 1e-12, one.id);
    assertRelative(unknown.aicc, one.AICc_rss, 1e-12, one.id);
    assertRelative(unknown.bic, one.BIC_rss, 1e-12, one.id);
  }
});

Deno.test("informationCriteria() is infinite when parameters are too many", () => {
  assertEquals(informationCriteria(1, { parameters: 4, samples: 5 }).aicc, Infinity);
  assertThrows(() => informationCriteria(1, { parameters: 4, samples: 0 }), InputError);
});
