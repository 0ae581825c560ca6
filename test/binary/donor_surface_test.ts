import { assertAlmostEquals, assertGreater, assertLess, assertThrows } from "@std/assert";
import { InputError } from "@millrace/millrace/errors";
import {
  type DonorSurface,
  donorSurface,
  lagrangePoints,
  lobeRadius,
  rochePotential,
} from "@millrace/millrace/binary";

/** Volume enclosed, by Gauss's theorem from the donor's centre, and the sum of area × normal. */
function enclosed({ count, position, normal, area }: DonorSurface) {
  let volume = 0;
  const closure = [0, 0, 0];
  for (let k = 0; k < count; k++) {
    const outwards = (position[3 * k]! - 1) * normal[3 * k]! +
      position[3 * k + 1]! * normal[3 * k + 1]! + position[3 * k + 2]! * normal[3 * k + 2]!;
    volume += outwards * area[k]! / 3;
    for (let axis = 0; axis < 3; axis++) closure[axis]! += area[k]! * normal[3 * k + axis]!;
  }
  return { radius: Math.cbrt(volume * 3 / (4 * Math.PI)), closure };
}

Deno.test("donorSurface() encloses the lobe's volume, the better the finer", () => {
  for (const q of [0.05, 0.3, 1]) {
    const exact = lobeRadius(q);
    const [coarse, fine] = [20, 80].map((rings) => enclosed(donorSurface(q, { rings })));
    const error = (tiles: { radius: number }) => Math.abs(tiles.radius / exact - 1);
    assertLess(error(coarse!), 5e-3);
    assertLess(error(fine!), error(coarse!) / 8); // a midpoint rule: 16 but for the cone at L1
    for (const part of fine!.closure) assertAlmostEquals(part, 0, 1e-3 * exact ** 2);
  }
});

Deno.test("donorSurface() lies on one equipotential, with normals of unit length", () => {
  const { count, position, normal, gravity } = donorSurface(0.2, { rings: 12 });
  const { l1_potential } = lagrangePoints(0.2);
  for (let k = 0; k < count; k++) {
    const [x, y, z] = position.slice(3 * k, 3 * k + 3) as unknown as [number, number, number];
    assertAlmostEquals(rochePotential({ x, y, z }, 0.2), l1_potential, 1e-12);
    assertAlmostEquals(Math.hypot(...normal.slice(3 * k, 3 * k + 3)), 1, 1e-14);
    assertGreater(gravity[k]!, 0);
  }
});

Deno.test("donorSurface() is weakest in gravity at L1 and nearly round when underfilled", () => {
  const full = donorSurface(0.2, { rings: 40 });
  assertLess(full.gravity[0]!, 0.2 * full.gravity[full.count - 1]!);
  const small = donorSurface(0.2, { rings: 40, filling: 0.1 });
  // A small star is a sphere of gravity μ/r².
  const r = 0.1 * (1 - lagrangePoints(0.2).l1_over_a);
  assertAlmostEquals(enclosed(small).radius / r, 1, 2e-3);
  for (const g of small.gravity) assertAlmostEquals(g * r * r * 6, 1, 0.01);
});

Deno.test("donorSurface() refuses impossible fillings and rings", () => {
  assertThrows(() => donorSurface(0.2, { filling: 1.2 }), InputError, "current value is 1.2");
  assertThrows(() => donorSurface(0.2, { filling: 0 }), InputError, "above 0");
  assertThrows(() => donorSurface(0.2, { rings: 1 }), InputError, "at least 2");
});
