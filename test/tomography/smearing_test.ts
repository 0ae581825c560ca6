import { assertAlmostEquals, assertEquals, assertGreater, assertLess } from "@std/assert";
import { panelled, type SmearingRule, smearingRule } from "@millrace/millrace/tomography";
import erf from "@stdlib/erf";

/** Profile of unit σ, mean over an exposure, of a pixel that is fastest at phase zero. */
function profile(
  rule: SmearingRule,
  { speed, phase, v }: { readonly speed: number; readonly phase: number; readonly v: number },
): number {
  return rule.offset.reduce((sum, o, q) => {
    const off = v - speed * Math.sin(2 * Math.PI * (phase + o));
    return sum + rule.weight[q]! * Math.exp(-0.5 * off * off);
  }, 0);
}

/** Largest error of a rule over the smeared profile's peak, on the way and at the turning point. */
function worst(
  rule: SmearingRule,
  { speed, width }: { readonly speed: number; readonly width: number },
) {
  const smear = 2 * Math.PI * width * speed;
  const dense = panelled(width, { panels: Math.max(4, Math.ceil(smear)), order: 12 });
  return Math.max(...[0, 0.06, 0.12, 0.18, 0.25].map((phase) => {
    const middle = speed * Math.sin(2 * Math.PI * phase);
    let off = 0, peak = 0;
    for (let v = middle - smear / 2 - 4; v < middle + smear / 2 + 4; v += 0.2) {
      const exact = profile(dense, { speed, phase, v });
      peak = Math.max(peak, exact);
      off = Math.max(off, Math.abs(profile(rule, { speed, phase, v }) - exact));
    }
    return off / peak;
  }));
}

Deno.test("smearingRule() keeps within 1e-4 of the peak, at the map's corners too, whatever the smear", () => {
  for (let smear = 0.01; smear < 30; smear *= 1.3) {
    const half_width = Math.max(40, 3 * smear), width = smear / (2 * Math.PI * half_width);
    const rule = smearingRule(width, smear);
    assertLess(worst(rule, { speed: half_width * Math.SQRT2, width }), 1.05e-4, `L/σ = ${smear}`);
  }
});

Deno.test("smearingRule() takes no more instants than that needs", () => {
  for (
    const [smear, instants] of [[0.02, 1], [0.3, 2], [1, 3], [1.8, 4], [3, 6], [5, 9], [
      8,
      13,
    ]] as const
  ) {
    assertEquals(smearingRule(0.01, smear).offset.length, instants);
    // Where an order has just become too low, it misses 1e-4.
    if (instants === 1) continue;
    const half_width = Math.max(40, 3 * smear), width = 1.04 * smear / (2 * Math.PI * half_width);
    const fewer = panelled(width, { panels: 1, order: instants - 1 });
    assertGreater(worst(fewer, { speed: half_width * Math.SQRT2, width }), 1e-4, `L/σ = ${smear}`);
  }
});

Deno.test("smearingRule() gives the difference of error functions where velocity is linear in time", () => {
  // A constant acceleration: the mean of a Gaussian over [−L/2, L/2] in closed form.
  const speed = 1e5, smear = 4, width = smear / (2 * Math.PI * speed);
  const rule = smearingRule(width, smear);
  for (let v = -6; v <= 6; v += 0.25) {
    const exact = Math.sqrt(Math.PI / 2) / smear *
      (erf((v + smear / 2) / Math.SQRT2) - erf((v - smear / 2) / Math.SQRT2));
    assertAlmostEquals(profile(rule, { speed, phase: 0, v }), exact, 1e-4);
  }
});

Deno.test("smearingRule() cuts long exposures into equal panels whose weights add up to one", () => {
  const { offset, weight } = smearingRule(0.2, 25);
  assertEquals(offset.length, 3 * 14);
  assertAlmostEquals(weight.reduce((a, b) => a + b), 1, 1e-14);
  assertAlmostEquals(offset.reduce((sum, o, q) => sum + o * weight[q]!, 0), 0, 1e-15);
  assertLess(Math.max(...offset.map(Math.abs)), 0.1);
});
