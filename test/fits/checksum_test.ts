import { assert, assertEquals } from "@std/assert";
import { encodeChecksum, onesComplementSum } from "@millrace/millrace/fits";
import { randomStream } from "@millrace/millrace/numerics";

// The definition of FITS 4.0, Appendix J, in whole numbers without end.
function slowSum(bytes: Uint8Array): number {
  let sum = 0n;
  for (let at = 0; at < bytes.length; at += 4) {
    for (let k = 0; k < 4; k++) sum += BigInt(bytes[at + k] ?? 0) << BigInt(24 - 8 * k);
  }
  while (sum >> 32n) sum = (sum & 0xffffffffn) + (sum >> 32n);
  return Number(sum);
}

Deno.test("onesComplementSum() agrees with the definition, at every length and start", () => {
  for (let seed = 1; seed <= 100; seed++) {
    const random = randomStream(seed);
    const bytes = Uint8Array.from({ length: random.integer(4000) }, () => random.integer(256));
    assertEquals(onesComplementSum(bytes), slowSum(bytes));
    const cut = 4 * random.integer(Math.floor(bytes.length / 4) + 1);
    const first = onesComplementSum(bytes.subarray(0, cut));
    assertEquals(onesComplementSum(bytes.subarray(cut), first), slowSum(bytes));
    // At an address that is no multiple of four.
    const shifted = new Uint8Array(bytes.length + 1);
    shifted.set(bytes, 1);
    assertEquals(onesComplementSum(shifted.subarray(1)), slowSum(bytes));
  }
});

Deno.test("onesComplementSum() carries correctly over more words than a double can sum", () => {
  // 3 × 2^21 words of ones: their one's complement sum is all ones (minus zero).
  const ones = new Uint8Array(3 * 2 ** 23 + 1).fill(255);
  assertEquals(onesComplementSum(ones.subarray(0, -1)), 0xffffffff);
  assertEquals(onesComplementSum(ones.subarray(1)), 0xffffffff);
});

Deno.test("encodeChecksum() writes letters and digits that bring the sum to all ones", () => {
  const sums = [0, 1, 0xffffffff, 0x80000000, 0x3a3a3a3a];
  const random = randomStream(1);
  for (let k = 0; k < 5000; k++) sums.push(random.integer(2 ** 32));
  for (const sum of sums) {
    const text = encodeChecksum(sum);
    assert(/^[0-9A-Za-z]{16}$/.test(text), text);
    // In the file the value begins at byte 11 of its card, three beyond a multiple of four. Sixteen
    // zeros stood there when the sum was made.
    const field = (value: string) => onesComplementSum(new TextEncoder().encode(`   ${value} `));
    const zeros = BigInt(field("0".repeat(16)));
    const total = BigInt(sum) + BigInt(field(text)) + 0xffffffffn - zeros;
    assertEquals(Number(total % 0xffffffffn), 0, text);
  }
});
