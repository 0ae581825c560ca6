// Long-vector arithmetic of the entropy solver in AssemblyScript with SIMD. Sums run in two lanes,
// even and odd elements, as vector_machine.ts does them in TypeScript: the same bits.
//
// Every vector is followed by at least one zero, so that a last odd element has a partner.

/** Elements that stay in the first-level cache while all pairs of vectors are multiplied. */
const CHUNK: i32 = 512;

@inline
function vector(list: usize, k: i32): usize {
  return <usize> load<u32>(list + (<usize> k << 2));
}

@inline
function sum(v: v128): f64 {
  return f64x2.extract_lane(v, 0) + f64x2.extract_lane(v, 1);
}

@inline
function bytes(n: i32): usize {
  return <usize> ((n + 1) & ~1) << 3;
}

/** residual = 2 w (model − flux); returns Σ w (model − flux)². */
export function residuals(model: usize, flux: usize, weight: usize, residual: usize, n: i32): f64 {
  const two = f64x2.splat(2);
  let total = f64x2.splat(0);
  for (let i: usize = 0, end = bytes(n); i < end; i += 16) {
    const r = f64x2.sub(v128.load(model + i), v128.load(flux + i));
    const wr = f64x2.mul(v128.load(weight + i), r);
    v128.store(residual + i, f64x2.mul(two, wr));
    total = f64x2.add(total, f64x2.mul(wr, r));
  }
  return sum(total);
}

/** Writes Σ g s², Σ g c², Σ g s c and Σ g. */
export function norms(metric: usize, slope: usize, pull: usize, out: usize, n: i32): void {
  let ss = f64x2.splat(0), cc = f64x2.splat(0), sc = f64x2.splat(0), all = f64x2.splat(0);
  for (let i: usize = 0, end = bytes(n); i < end; i += 16) {
    const g = v128.load(metric + i), s = v128.load(slope + i), c = v128.load(pull + i);
    const gs = f64x2.mul(g, s), gc = f64x2.mul(g, c);
    ss = f64x2.add(ss, f64x2.mul(gs, s));
    cc = f64x2.add(cc, f64x2.mul(gc, c));
    sc = f64x2.add(sc, f64x2.mul(gs, c));
    all = f64x2.add(all, g);
  }
  store<f64>(out, sum(ss));
  store<f64>(out + 8, sum(cc));
  store<f64>(out + 16, sum(sc));
  store<f64>(out + 24, sum(all));
}

/** step = g (α s − c); returns its squared length in the metric. */
export function direction(
  metric: usize,
  slope: usize,
  pull: usize,
  alpha: f64,
  step: usize,
  n: i32,
): f64 {
  const a = f64x2.splat(alpha);
  let total = f64x2.splat(0);
  for (let i: usize = 0, end = bytes(n); i < end; i += 16) {
    const d = f64x2.sub(f64x2.mul(a, v128.load(slope + i)), v128.load(pull + i));
    const gd = f64x2.mul(v128.load(metric + i), d);
    v128.store(step + i, gd);
    total = f64x2.add(total, f64x2.mul(gd, d));
  }
  return sum(total);
}

export function scale(values: usize, factor: f64, n: i32): void {
  const f = f64x2.splat(factor);
  for (let i: usize = 0, end = bytes(n); i < end; i += 16) {
    v128.store(values + i, f64x2.mul(f, v128.load(values + i)));
  }
}

/** out = 1 / values; the zero after the end stays. */
export function invert(values: usize, out: usize, n: i32): void {
  const one = f64x2.splat(1);
  for (let i: usize = 0, end = bytes(n & ~1); i < end; i += 16) {
    v128.store(out + i, f64x2.div(one, v128.load(values + i)));
  }
  if (n & 1) {
    const last = <usize> (n - 1) << 3;
    store<f64>(out + last, 1 / load<f64>(values + last));
  }
}

/** Σ w a b for the given vector a and each vector of the list. */
export function weightedDots(a: usize, weight: usize, list: usize, count: i32, out: usize, n: i32): void {
  for (let k = 0; k < count; k++) {
    const b = vector(list, k);
    let total = f64x2.splat(0);
    for (let i: usize = 0, end = bytes(n); i < end; i += 16) {
      const wa = f64x2.mul(v128.load(weight + i), v128.load(a + i));
      total = f64x2.add(total, f64x2.mul(wa, v128.load(b + i)));
    }
    store<f64>(out + (<usize> k << 3), sum(total));
  }
}

/** Σ a b for the given vector a and each vector of the list. */
export function dots(a: usize, list: usize, count: i32, out: usize, n: i32): void {
  for (let k = 0; k < count; k++) {
    const b = vector(list, k);
    let total = f64x2.splat(0);
    for (let i: usize = 0, end = bytes(n); i < end; i += 16) {
      total = f64x2.add(total, f64x2.mul(v128.load(a + i), v128.load(b + i)));
    }
    store<f64>(out + (<usize> k << 3), sum(total));
  }
}

/** Σ w a b of all pairs of the list, lower triangle of a count × count matrix. */
export function gram(
  list: usize,
  count: i32,
  weight: usize,
  scratch: usize,
  out: usize,
  n: i32,
): void {
  memory.fill(out, 0, <usize> (count * count) << 3);
  const length = bytes(n);
  for (let from: usize = 0; from < length; from += <usize> CHUNK << 3) {
    const size = min(<usize> CHUNK << 3, length - from);
    for (let a = 0; a < count; a++) {
      const left = vector(list, a) + from;
      for (let i: usize = 0; i < size; i += 16) {
        v128.store(scratch + i, f64x2.mul(v128.load(left + i), v128.load(weight + from + i)));
      }
      const row = out + (<usize> (a * count) << 3);
      let b = 0;
      for (; b + 3 <= a; b += 4) {
        const r0 = vector(list, b) + from, r1 = vector(list, b + 1) + from;
        const r2 = vector(list, b + 2) + from, r3 = vector(list, b + 3) + from;
        let s0 = f64x2.splat(0), s1 = f64x2.splat(0), s2 = f64x2.splat(0), s3 = f64x2.splat(0);
        for (let i: usize = 0; i < size; i += 16) {
          const l = v128.load(scratch + i);
          s0 = f64x2.add(s0, f64x2.mul(l, v128.load(r0 + i)));
          s1 = f64x2.add(s1, f64x2.mul(l, v128.load(r1 + i)));
          s2 = f64x2.add(s2, f64x2.mul(l, v128.load(r2 + i)));
          s3 = f64x2.add(s3, f64x2.mul(l, v128.load(r3 + i)));
        }
        const at = row + (<usize> b << 3);
        store<f64>(at, load<f64>(at) + sum(s0));
        store<f64>(at + 8, load<f64>(at + 8) + sum(s1));
        store<f64>(at + 16, load<f64>(at + 16) + sum(s2));
        store<f64>(at + 24, load<f64>(at + 24) + sum(s3));
      }
      for (; b <= a; b++) {
        const right = vector(list, b) + from;
        let total = f64x2.splat(0);
        for (let i: usize = 0; i < size; i += 16) {
          total = f64x2.add(total, f64x2.mul(v128.load(scratch + i), v128.load(right + i)));
        }
        const at = row + (<usize> b << 3);
        store<f64>(at, load<f64>(at) + sum(total));
      }
    }
  }
}

/** out = Σ c v over the list. */
export function combine(list: usize, coefficients: usize, count: i32, out: usize, n: i32): void {
  memory.fill(out, 0, bytes(n));
  for (let k = 0; k < count; k++) {
    const v = vector(list, k);
    const c = f64x2.splat(load<f64>(coefficients + (<usize> k << 3)));
    for (let i: usize = 0, end = bytes(n); i < end; i += 16) {
      v128.store(out + i, f64x2.add(v128.load(out + i), f64x2.mul(c, v128.load(v + i))));
    }
  }
}

/**
 * image += step, but no value falls below the given share of itself (unless the share is negative);
 * step becomes what was really added. Returns how many values were held.
 */
export function advance(image: usize, step: usize, least: f64, n: i32): i32 {
  let held = 0;
  for (let i: usize = 0, end = <usize> n << 3; i < end; i += 8) {
    const f = load<f64>(image + i), next = f + load<f64>(step + i);
    if (least >= 0 && next < least * f) {
      store<f64>(image + i, least * f);
      store<f64>(step + i, least * f - f);
      held++;
    } else {
      store<f64>(image + i, next);
    }
  }
  return held;
}

/** a += b. */
export function add(a: usize, b: usize, n: i32): void {
  for (let i: usize = 0, end = bytes(n); i < end; i += 16) {
    v128.store(a + i, f64x2.add(v128.load(a + i), v128.load(b + i)));
  }
}

/**
 * Blurs along the slow axis of a rows × columns array, out[r] = k0 v[r] + Σ kj (v[r−j] + v[r+j]); what
 * lies beyond the border counts as zero.
 */
export function blur(
  values: usize,
  out: usize,
  kernel: usize,
  reach: i32,
  rows: i32,
  columns: i32,
): void {
  const row = <usize> columns << 3;
  for (let r = 0; r < rows; r++) {
    const here = values + <usize> r * row, into = out + <usize> r * row;
    const middle = f64x2.splat(load<f64>(kernel));
    const pairs = <usize> (columns & ~1) << 3;
    for (let i: usize = 0; i < pairs; i += 16) {
      let sum = f64x2.mul(middle, v128.load(here + i));
      for (let j = 1; j <= reach; j++) {
        const away = <usize> j * row;
        let both = f64x2.splat(0);
        if (j <= r) both = v128.load(here + i - away);
        if (j < rows - r) both = f64x2.add(both, v128.load(here + i + away));
        sum = f64x2.add(sum, f64x2.mul(f64x2.splat(load<f64>(kernel + (<usize> j << 3))), both));
      }
      v128.store(into + i, sum);
    }
    if (columns & 1) {
      const i = pairs;
      let sum = load<f64>(kernel) * load<f64>(here + i);
      for (let j = 1; j <= reach; j++) {
        const away = <usize> j * row;
        let both: f64 = 0;
        if (j <= r) both = load<f64>(here + i - away);
        if (j < rows - r) both += load<f64>(here + i + away);
        sum += load<f64>(kernel + (<usize> j << 3)) * both;
      }
      store<f64>(into + i, sum);
    }
  }
}
