// The slanted projection in AssemblyScript with SIMD. Same arithmetic in the same order as
// slant_projector.ts, so that results in double precision are the same to the bit.
//
// The caller owns the memory: every field of Plan that is an address points to an array it has laid
// out. Map lines are `stride` values apart, with PAD zeros before each and at least PAD after it.

/** Zeros on either side of a map line. */
const PAD: i32 = 16;

/** Lines, or instants, that share one pass through memory. */
const GROUP: i32 = 4;

@unmanaged
class Plan {
  pixels: i32;
  stride: i32;
  over: i32;
  strand_length: i32;
  instants: i32;
  axis: usize; // i32 × instants
  wanted: usize; // i32 × instants: zero where an instant is to be passed over
  u0: usize; // f64 × instants
  du: usize; // f64 × instants
  tap_start: usize; // i32 × (instants + 1)
  taps: usize; // f64
  entry_start: usize; // i32 × (instants + 1)
  sample: usize; // i32 × instants
  first: usize; // i32 × entries
  scale: usize; // f64 × entries
  ratio: usize; // f64 × entries
  data: usize; // f64 × samples
  rows: usize; // T × pixels × stride
  columns: usize; // T × pixels × stride
  sum: usize; // T × GROUP × over × strand_length
  part: usize; // T × GROUP × over × strand_length
  whole: usize; // f64 × (over × strand_length + 2)
  strand: usize; // i32 × GROUP × pixels: strand that a line lands on
  at: usize; // i32 × GROUP × pixels: its place on the strand
  offset: usize; // f64 × GROUP × pixels: its fractional offset
  order: usize; // i32 × pixels: lines sorted by strand
}

@inline
function i32At(array: usize, k: i32): i32 {
  return load<i32>(array + (<usize> k << 2));
}

@inline
function f64At(array: usize, k: i32): f64 {
  return load<f64>(array + (<usize> k << 3));
}

@inline
function address<T>(array: usize, k: i32): usize {
  return array + <usize> k * sizeof<T>();
}

/** Finds where every line of instant t lands; the result goes to the given slot. */
function placeLines(plan: Plan, t: i32, slot: i32): void {
  const n = plan.pixels, over = plan.over;
  const u0 = f64At(plan.u0, t), du = f64At(plan.du, t);
  for (let l = 0; l < n; l++) {
    const u = u0 + <f64> l * du;
    const start = Math.floor(u);
    const turn = <i32> start / over;
    const k = <usize> (slot * n + l);
    store<i32>(plan.strand + (k << 2), <i32> start - turn * over);
    store<i32>(plan.at + (k << 2), turn);
    store<f64>(plan.offset + (k << 3), u - start);
  }
}

/** Adds one line to a strand of `sum` and of `part`. */
function depositOne<T>(line: usize, at: i32, p: T, sum: usize, part: usize, pixels: i32): void {
  const weight = v128.splat<T>(p);
  const end = address<T>(line, pixels);
  sum = address<T>(sum, at);
  part = address<T>(part, at);
  for (; line < end; line += 16, sum += 16, part += 16) {
    const f = v128.load(line);
    v128.store(sum, v128.add<T>(v128.load(sum), f));
    v128.store(part, v128.add<T>(v128.load(part), v128.mul<T>(weight, f)));
  }
}

/** Adds four lines to one strand; where a line does not reach, its zeros are added. */
function depositFour<T>(
  a: usize,
  b: usize,
  c: usize,
  d: usize,
  pa: T,
  pb: T,
  pc: T,
  pd: T,
  sum: usize,
  part: usize,
  count: i32,
): void {
  const wa = v128.splat<T>(pa), wb = v128.splat<T>(pb);
  const wc = v128.splat<T>(pc), wd = v128.splat<T>(pd);
  const end = address<T>(sum, count);
  // Two vectors a turn: what overshoots are the zeros after the lines.
  for (; sum < end; sum += 32, part += 32, a += 32, b += 32, c += 32, d += 32) {
    const fa = v128.load(a), fb = v128.load(b), fc = v128.load(c), fd = v128.load(d);
    let s = v128.add<T>(v128.load(sum), fa);
    s = v128.add<T>(s, fb);
    s = v128.add<T>(s, fc);
    v128.store(sum, v128.add<T>(s, fd));
    let q = v128.add<T>(v128.load(part), v128.mul<T>(wa, fa));
    q = v128.add<T>(q, v128.mul<T>(wb, fb));
    q = v128.add<T>(q, v128.mul<T>(wc, fc));
    v128.store(part, v128.add<T>(q, v128.mul<T>(wd, fd)));
    const ga = v128.load(a, 16), gb = v128.load(b, 16);
    const gc = v128.load(c, 16), gd = v128.load(d, 16);
    s = v128.add<T>(v128.load(sum, 16), ga);
    s = v128.add<T>(s, gb);
    s = v128.add<T>(s, gc);
    v128.store(sum, v128.add<T>(s, gd), 16);
    q = v128.add<T>(v128.load(part, 16), v128.mul<T>(wa, ga));
    q = v128.add<T>(q, v128.mul<T>(wb, gb));
    q = v128.add<T>(q, v128.mul<T>(wc, gc));
    v128.store(part, v128.add<T>(q, v128.mul<T>(wd, gd)), 16);
  }
}

function deposit<T>(plan: Plan, t: i32): void {
  const n = plan.pixels, over = plan.over, stride = plan.stride, length = plan.strand_length;
  const lines = i32At(plan.axis, t) == 1 ? plan.columns : plan.rows;
  const order = plan.order, at = plan.at, offset = plan.offset;
  memory.fill(plan.sum, 0, <usize> (over * length) * sizeof<T>());
  memory.fill(plan.part, 0, <usize> (over * length) * sizeof<T>());
  placeLines(plan, t, 0);
  for (let strand = 0; strand < over; strand++) {
    let count = 0;
    for (let l = 0; l < n; l++) {
      if (i32At(plan.strand, l) != strand) continue;
      store<i32>(order + (<usize> count << 2), l);
      count++;
    }
    const sum = address<T>(plan.sum, strand * length);
    const part = address<T>(plan.part, strand * length);
    let i = 0;
    while (i < count) {
      const a = i32At(order, i);
      if (i + GROUP <= count) {
        const b = i32At(order, i + 1), c = i32At(order, i + 2), d = i32At(order, i + 3);
        const ka = i32At(at, a), kb = i32At(at, b), kc = i32At(at, c), kd = i32At(at, d);
        // Lines come in order and the shift per line has one sign: the ends are the extremes.
        const low = min(ka, kd), high = max(ka, kd);
        if (high - low <= PAD) {
          depositFour<T>(
            address<T>(lines, a * stride + low - ka),
            address<T>(lines, b * stride + low - kb),
            address<T>(lines, c * stride + low - kc),
            address<T>(lines, d * stride + low - kd),
            <T> f64At(offset, a),
            <T> f64At(offset, b),
            <T> f64At(offset, c),
            <T> f64At(offset, d),
            address<T>(sum, low),
            address<T>(part, low),
            high - low + n,
          );
          i += GROUP;
          continue;
        }
      }
      const line = address<T>(lines, a * stride);
      depositOne<T>(line, i32At(at, a), <T> f64At(offset, a), sum, part, n);
      i++;
    }
  }
  for (let strand = 0; strand < over; strand++) {
    let s = address<T>(plan.sum, strand * length), p = address<T>(plan.part, strand * length);
    let left = strand > 0
      ? address<T>(plan.part, (strand - 1) * length)
      : address<T>(plan.part, (over - 1) * length - 1);
    let w = plan.whole + (<usize> strand << 3);
    const end = address<T>(s, length);
    if (strand == 0) {
      store<f64>(w, <f64> (load<T>(s) - load<T>(p)));
      s += sizeof<T>();
      p += sizeof<T>();
      left += sizeof<T>();
      w += <usize> over << 3;
    }
    for (; s < end; s += sizeof<T>(), p += sizeof<T>(), left += sizeof<T>(), w += <usize> over << 3) {
      store<f64>(w, <f64> (load<T>(s) - load<T>(p) + load<T>(left)));
    }
  }
}

@inline
function lanes(a: f64, b: f64): v128 {
  return f64x2.replace_lane(f64x2.splat(a), 1, b);
}

/** Blurs the whole grid of instant t to its samples, four samples at a time: their sums do not wait for one another. */
function blur(plan: Plan, t: i32): void {
  const from = i32At(plan.entry_start, t), to = i32At(plan.entry_start, t + 1);
  const taps = address<f64>(plan.taps, i32At(plan.tap_start, t));
  const taps_end = address<f64>(plan.taps, i32At(plan.tap_start, t + 1));
  const data = address<f64>(plan.data, i32At(plan.sample, t) - from);
  let s = from;
  for (; s + 3 < to; s += 4) {
    const ra = f64At(plan.ratio, s), rb = f64At(plan.ratio, s + 1);
    const rc = f64At(plan.ratio, s + 2), rd = f64At(plan.ratio, s + 3);
    const rra = f64x2.splat(ra * ra), rrb = f64x2.splat(rb * rb);
    const rrc = f64x2.splat(rc * rc), rrd = f64x2.splat(rd * rd);
    let wa = address<f64>(plan.whole, i32At(plan.first, s));
    let wb = address<f64>(plan.whole, i32At(plan.first, s + 1));
    let wc = address<f64>(plan.whole, i32At(plan.first, s + 2));
    let wd = address<f64>(plan.whole, i32At(plan.first, s + 3));
    let pa = lanes(1, ra), pb = lanes(1, rb), pc = lanes(1, rc), pd = lanes(1, rd);
    let sa = f64x2.splat(0), sb = f64x2.splat(0), sc = f64x2.splat(0), sd = f64x2.splat(0);
    for (let j = taps; j < taps_end; j += 16, wa += 16, wb += 16, wc += 16, wd += 16) {
      const c = v128.load(j);
      sa = f64x2.add(sa, f64x2.mul(f64x2.mul(c, pa), v128.load(wa)));
      sb = f64x2.add(sb, f64x2.mul(f64x2.mul(c, pb), v128.load(wb)));
      sc = f64x2.add(sc, f64x2.mul(f64x2.mul(c, pc), v128.load(wc)));
      sd = f64x2.add(sd, f64x2.mul(f64x2.mul(c, pd), v128.load(wd)));
      pa = f64x2.mul(pa, rra);
      pb = f64x2.mul(pb, rrb);
      pc = f64x2.mul(pc, rrc);
      pd = f64x2.mul(pd, rrd);
    }
    const d = address<f64>(data, s);
    v128.store(d, f64x2.add(v128.load(d), lanes(summed(plan, s, sa), summed(plan, s + 1, sb))));
    const e = d + 16;
    v128.store(e, f64x2.add(v128.load(e), lanes(summed(plan, s + 2, sc), summed(plan, s + 3, sd))));
  }
  for (; s < to; s++) {
    const r = f64At(plan.ratio, s);
    const rr = f64x2.splat(r * r);
    let w = address<f64>(plan.whole, i32At(plan.first, s));
    let p = lanes(1, r), sum = f64x2.splat(0);
    for (let j = taps; j < taps_end; j += 16, w += 16) {
      sum = f64x2.add(sum, f64x2.mul(f64x2.mul(v128.load(j), p), v128.load(w)));
      p = f64x2.mul(p, rr);
    }
    const d = address<f64>(data, s);
    store<f64>(d, load<f64>(d) + summed(plan, s, sum));
  }
}

/** The two halves of entry s's sum, scaled. */
@inline
function summed(plan: Plan, s: i32, sum: v128): f64 {
  return (f64x2.extract_lane(sum, 0) + f64x2.extract_lane(sum, 1)) * f64At(plan.scale, s);
}

/** The transpose of `blur`, then the strands of the given slot. */
function spread<T>(plan: Plan, t: i32, slot: i32): void {
  const over = plan.over, length = plan.strand_length;
  const from = i32At(plan.entry_start, t), to = i32At(plan.entry_start, t + 1);
  const taps = address<f64>(plan.taps, i32At(plan.tap_start, t));
  const taps_end = address<f64>(plan.taps, i32At(plan.tap_start, t + 1));
  const data = address<f64>(plan.data, i32At(plan.sample, t) - from);
  memory.fill(plan.whole, 0, <usize> (over * length + 1) << 3);
  for (let s = from; s < to; s++) {
    const r = f64At(plan.ratio, s);
    const rr = f64x2.splat(r * r);
    const d = f64x2.splat(f64At(data, s) * f64At(plan.scale, s));
    let w = address<f64>(plan.whole, i32At(plan.first, s));
    let p = lanes(1, r);
    for (let j = taps; j < taps_end; j += 16, w += 16) {
      v128.store(w, f64x2.add(v128.load(w), f64x2.mul(f64x2.mul(v128.load(j), p), d)));
      p = f64x2.mul(p, rr);
    }
  }
  toStrands<T>(plan, slot);
}

/** Deals the whole grid out to the strands of the given slot: values, and steps to the next point. */
function toStrands<T>(plan: Plan, slot: i32): void {
  const over = plan.over, length = plan.strand_length;
  const block = slot * over * length;
  for (let strand = 0; strand < over; strand++) {
    let s = address<T>(plan.sum, block + strand * length);
    let p = address<T>(plan.part, block + strand * length);
    let w = plan.whole + (<usize> strand << 3);
    const end = address<T>(s, length);
    for (; s < end; s += sizeof<T>(), p += sizeof<T>(), w += <usize> over << 3) {
      const here = load<f64>(w);
      store<T>(s, <T> here);
      store<T>(p, <T> (load<f64>(w + 8) - here));
    }
  }
}

@inline
function strandOf<T>(plan: Plan, array: usize, slot: i32, l: i32): usize {
  const k = slot * plan.pixels + l;
  const strand = slot * plan.over + i32At(plan.strand, k);
  return address<T>(array, strand * plan.strand_length + i32At(plan.at, k));
}

function gatherOne<T>(plan: Plan, lines: usize, slot: i32): void {
  const n = plan.pixels;
  for (let l = 0; l < n; l++) {
    const p = v128.splat<T>(<T> f64At(plan.offset, slot * n + l));
    let s = strandOf<T>(plan, plan.sum, slot, l), q = strandOf<T>(plan, plan.part, slot, l);
    let g = address<T>(lines, l * plan.stride);
    const end = address<T>(g, n);
    for (; g < end; g += 16, s += 16, q += 16) {
      const value = v128.add<T>(v128.load(s), v128.mul<T>(p, v128.load(q)));
      v128.store(g, v128.add<T>(v128.load(g), value));
    }
  }
}

function gatherFour<T>(plan: Plan, lines: usize): void {
  const n = plan.pixels;
  const apart = plan.part - plan.sum;
  for (let l = 0; l < n; l++) {
    const pa = v128.splat<T>(<T> f64At(plan.offset, l));
    const pb = v128.splat<T>(<T> f64At(plan.offset, n + l));
    const pc = v128.splat<T>(<T> f64At(plan.offset, 2 * n + l));
    const pd = v128.splat<T>(<T> f64At(plan.offset, 3 * n + l));
    let g = address<T>(lines, l * plan.stride);
    const end = address<T>(g, n);
    let a = strandOf<T>(plan, plan.sum, 0, l), b = strandOf<T>(plan, plan.sum, 1, l);
    let c = strandOf<T>(plan, plan.sum, 2, l), d = strandOf<T>(plan, plan.sum, 3, l);
    let qa = a + apart, qb = b + apart, qc = c + apart, qd = d + apart;
    // Two vectors a turn: what overshoots goes to the zeros after the line, which are not read.
    while (g < end) {
      let f = v128.load(g);
      f = v128.add<T>(f, v128.add<T>(v128.load(a), v128.mul<T>(pa, v128.load(qa))));
      f = v128.add<T>(f, v128.add<T>(v128.load(b), v128.mul<T>(pb, v128.load(qb))));
      f = v128.add<T>(f, v128.add<T>(v128.load(c), v128.mul<T>(pc, v128.load(qc))));
      f = v128.add<T>(f, v128.add<T>(v128.load(d), v128.mul<T>(pd, v128.load(qd))));
      v128.store(g, f);
      f = v128.load(g, 16);
      f = v128.add<T>(f, v128.add<T>(v128.load(a, 16), v128.mul<T>(pa, v128.load(qa, 16))));
      f = v128.add<T>(f, v128.add<T>(v128.load(b, 16), v128.mul<T>(pb, v128.load(qb, 16))));
      f = v128.add<T>(f, v128.add<T>(v128.load(c, 16), v128.mul<T>(pc, v128.load(qc, 16))));
      f = v128.add<T>(f, v128.add<T>(v128.load(d, 16), v128.mul<T>(pd, v128.load(qd, 16))));
      v128.store(g, f, 16);
      g += 32;
      a += 32;
      b += 32;
      c += 32;
      d += 32;
      qa += 32;
      qb += 32;
      qc += 32;
      qd += 32;
    }
  }
}

/**
 * Fills the whole grid of instant t from its profile, by cubic Lagrange interpolation on the four bins
 * around; bins beyond the ends count as zero. Grid point n lies at bin `position + n × rise`.
 */
function interpolate(plan: Plan, t: i32, columns: i32, position: f64, rise: f64): void {
  const count = plan.over * plan.strand_length;
  const row = address<f64>(plan.data, t * columns);
  for (let n = 0; n < count; n++) {
    const at = position + <f64> n * rise;
    const below = Math.floor(at);
    const k = <i32> below;
    let value: f64 = 0;
    if (k >= 1 && k < columns - 2) {
      const q = address<f64>(row, k - 1);
      value = cubic(load<f64>(q), load<f64>(q + 8), load<f64>(q + 16), load<f64>(q + 24), at - below);
    } else if (k >= -1 && k < columns) {
      value = cubic(
        bin(row, k - 1, columns),
        bin(row, k, columns),
        bin(row, k + 1, columns),
        bin(row, k + 2, columns),
        at - below,
      );
    }
    store<f64>(address<f64>(plan.whole, n), value);
  }
}

@inline
function bin(row: usize, k: i32, columns: i32): f64 {
  return k >= 0 && k < columns ? f64At(row, k) : 0;
}

@inline
function cubic(a: f64, b: f64, c: f64, d: f64, p: f64): f64 {
  const third = 1.5 * (b - c) + 0.5 * (d - a);
  return b + p * (0.5 * (c - a) + p * (a - 2.5 * b + 2 * c - 0.5 * d + p * third));
}

function gatherProfiles<T>(plan: Plan, columns: i32, positions: usize, rises: usize): void {
  for (let axis = 0; axis < 2; axis++) {
    const lines = axis == 1 ? plan.columns : plan.rows;
    let filled = 0;
    for (let t = 0; t < plan.instants; t++) {
      if (i32At(plan.axis, t) != axis) continue;
      placeLines(plan, t, filled);
      interpolate(plan, t, columns, f64At(positions, t), f64At(rises, t));
      toStrands<T>(plan, filled);
      filled++;
      if (filled == GROUP) {
        gatherFour<T>(plan, lines);
        filled = 0;
      }
    }
    for (let slot = 0; slot < filled; slot++) gatherOne<T>(plan, lines, slot);
  }
}

function forward<T>(plan: Plan): void {
  for (let t = 0; t < plan.instants; t++) {
    if (i32At(plan.wanted, t) == 0) continue;
    deposit<T>(plan, t);
    blur(plan, t);
  }
}

/** Instants are grouped by the direction of their lines. */
function adjoint<T>(plan: Plan): void {
  for (let axis = 0; axis < 2; axis++) {
    const lines = axis == 1 ? plan.columns : plan.rows;
    let filled = 0;
    for (let t = 0; t < plan.instants; t++) {
      if (i32At(plan.axis, t) != axis || i32At(plan.wanted, t) == 0) continue;
      placeLines(plan, t, filled);
      spread<T>(plan, t, filled);
      filled++;
      if (filled == GROUP) {
        gatherFour<T>(plan, lines);
        filled = 0;
      }
    }
    for (let slot = 0; slot < filled; slot++) gatherOne<T>(plan, lines, slot);
  }
}

export function forward64(plan: Plan): void {
  forward<f64>(plan);
}

export function adjoint64(plan: Plan): void {
  adjoint<f64>(plan);
}

export function forward32(plan: Plan): void {
  forward<f32>(plan);
}

export function adjoint32(plan: Plan): void {
  adjoint<f32>(plan);
}

export function gatherProfiles64(plan: Plan, columns: i32, positions: usize, rises: usize): void {
  gatherProfiles<f64>(plan, columns, positions, rises);
}

export function gatherProfiles32(plan: Plan, columns: i32, positions: usize, rises: usize): void {
  gatherProfiles<f32>(plan, columns, positions, rises);
}
