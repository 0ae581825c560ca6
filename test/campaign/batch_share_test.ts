import { assert, assertEquals, assertThrows } from "@std/assert";
import { InputError } from "@millrace/millrace/errors";
import { randomStream } from "@millrace/millrace/numerics";
import { dearestFirst, parsePart, shareByCost, trialsOfPart } from "@millrace/millrace/campaign";

Deno.test("shareByCost() gives each piece to one share and loads within the bound", () => {
  for (let seed = 1; seed <= 20; seed++) {
    const random = randomStream(seed);
    const costs = Array.from({ length: 40 }, () => Math.exp(2 * random.normal()));
    const total = costs.reduce((sum, cost) => sum + cost, 0);
    for (const count of [1, 2, 3, 7]) {
      const share = shareByCost(costs, count);
      const load = new Array<number>(count).fill(0);
      share.forEach((part, i) => load[part - 1]! += costs[i]!);
      // Graham 1969: at most 4/3 - 1/(3 N) of the best division, which is no shorter than this.
      const best = Math.max(total / count, ...costs);
      assert(Math.max(...load) <= best * (4 / 3 - 1 / (3 * count)) + 1e-9, `seed ${seed}`);
    }
  }
});

Deno.test("shareByCost() divides in the same way whenever it is asked", () => {
  const costs = [3, 3, 3, 1, 1, 8];
  assertEquals(shareByCost(costs, 3), shareByCost([...costs], 3));
  assertEquals(shareByCost(costs, 3), [2, 3, 2, 3, 3, 1]);
  assertEquals(shareByCost([], 2), []);
  assertEquals(costs, [3, 3, 3, 1, 1, 8]);
});

Deno.test("shareByCost() leaves shares empty when there are more than pieces", () => {
  assertEquals(shareByCost([1, 1], 4).toSorted(), [1, 2]);
});

Deno.test("dearestFirst() names every treatment once, job by job, the dearest first", () => {
  const costs = [[2, 5], [5], [1, 7, 2], [7]];
  const pieces = dearestFirst(costs).map(({ job, run }) => [job, run]);
  assertEquals(pieces, [[2, 0], [2, 1], [2, 2], [0, 0], [0, 1], [3, 0], [1, 0]]);
  assertEquals(dearestFirst([]), []);
});

Deno.test("trialsOfPart() gives every trial to one part", () => {
  const parts = [1, 2, 3, 4].map((index) => trialsOfPart(10, { index, count: 4 }));
  assertEquals(parts.flat().toSorted((a, b) => a - b), [0, 1, 2, 3, 4, 5, 6, 7, 8, 9]);
  assertEquals(parts.map((part) => part.length), [3, 3, 2, 2]);
});

for (const text of ["0/3", "4/3", "1", "1/", "a/b", "-1/3", "1/3/5", "1.5/3"]) {
  Deno.test(`parsePart() refuses ${text}`, () => {
    const error = assertThrows(() => parsePart(text), InputError);
    assertEquals(
      error.message,
      `Cannot divide the work as the part must read I/N, whole numbers with I from 1 to N: current value is "${text}" (key --part)`,
    );
  });
}
