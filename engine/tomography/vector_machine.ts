import { VECTOR_KERNEL_BYTES } from "./vector_kernel_bytes.ts";

/**
 * Long-vector arithmetic on vectors that it owns. Two machines do the same sums in the same order, in
 * two lanes of even and odd elements: one in WebAssembly with SIMD, one in TypeScript.
 */
export interface VectorMachine {
  /** Which code does the work. */
  readonly code: "kernel" | "plain";
  /** Makes a vector of zeros. Only vectors made here may be passed to the other functions. */
  readonly vector: (length: number) => Float64Array;
  /** residual = 2 w (model − flux); returns Σ w (model − flux)². */
  readonly residuals: (vectors: {
    readonly model: Float64Array;
    readonly flux: Float64Array;
    readonly weight: Float64Array;
    readonly residual: Float64Array;
  }) => number;
  /** Σ g s², Σ g c², Σ g s c and Σ g for metric g, slope s and pull c. */
  readonly norms: (vectors: Gradients) => readonly [number, number, number, number];
  /** step = g (α s − c); returns its squared length in the metric, Σ step²/g. */
  readonly direction: (
    vectors: Gradients & { readonly step: Float64Array },
    alpha: number,
  ) => number;
  /** values × factor, in place. */
  readonly scale: (values: Float64Array, factor: number) => void;
  /** out = 1 / values. */
  readonly invert: (values: Float64Array, out: Float64Array) => void;
  /** Σ w a b for each b of the list. */
  readonly weightedDots: (
    a: Float64Array,
    weight: Float64Array,
    list: readonly Float64Array[],
  ) => Float64Array;
  /** Σ a b for each b of the list. */
  readonly dots: (a: Float64Array, list: readonly Float64Array[]) => Float64Array;
  /** Σ w a b of all pairs, K × K row-major. */
  readonly gram: (list: readonly Float64Array[], weight: Float64Array) => Float64Array;
  /** out = Σ c v. */
  readonly combine: (
    list: readonly Float64Array[],
    coefficients: Float64Array,
    out: Float64Array,
  ) => void;
  /**
   * image += step, but no value falls below the given share of itself (unless that is negative); step
   * becomes what was added. Returns how many values were held.
   */
  readonly advance: (image: Float64Array, step: Float64Array, least: number) => number;
  /** a += b. */
  readonly add: (a: Float64Array, b: Float64Array) => void;
  /**
   * Blurs along the slow axis of an array whose rows are as long as `columns`:
   * out[r] = k0 v[r] + Σ kj (v[r − j] + v[r + j]), zero beyond the border.
   */
  readonly blur: (vectors: {
    readonly values: Float64Array;
    readonly out: Float64Array;
    readonly kernel: Float64Array;
    readonly columns: number;
  }) => void;
}

/** Gradients of entropy and chi-square, and the metric. */
export interface Gradients {
  /** Inverse of minus the entropy's second derivative. */
  readonly metric: Float64Array;
  /** Gradient of the entropy. */
  readonly slope: Float64Array;
  /** Gradient of chi-square. */
  readonly pull: Float64Array;
}

/** Vectors per list, and elements per chunk of `gram`: as in vector_kernel.as. */
const LONGEST_LIST = 64, CHUNK = 512;

/**
 * Makes a vector machine.
 *
 * @param bytes Memory to reserve for vectors, bytes; each takes 8 per element and 32 more.
 * @param options `plain`: TypeScript even where WebAssembly has SIMD.
 * @returns The machine.
 *
 * @example
 * ```ts
 * import { vectorMachine } from "@millrace/millrace/tomography";
 * import { assertEquals } from "@std/assert";
 *
 * const machine = vectorMachine(1000);
 * const a = machine.vector(3), b = machine.vector(3);
 * a.set([1, 2, 3]);
 * b.set([1, 0, 2]);
 * assertEquals(machine.dots(a, [b]), Float64Array.of(7));
 * ```
 */
export function vectorMachine(
  bytes: number,
  options: {
    /** @default {false} */
    readonly plain?: boolean;
  } = {},
): VectorMachine {
  const { plain = false } = options;
  const module = plain ? null : kernelModule();
  return module === null ? plainMachine() : kernelMachine(module, bytes);
}

/** The machine given back last. One is kept: its memory would cost more to make than to clear. */
let kept: { readonly bytes: number; readonly machine: ReusableMachine } | null = null;

/**
 * Makes a vector machine, or lends one that was given back, with all its memory free again.
 *
 * @param bytes Memory to reserve for vectors, as for {@linkcode vectorMachine}.
 * @param options `plain`: TypeScript even where WebAssembly has SIMD.
 * @returns The machine, and what to call when its vectors are not used any more.
 *
 * @example
 * ```ts
 * import { borrowMachine } from "@millrace/millrace/tomography";
 * import { assertEquals } from "@std/assert";
 *
 * const first = borrowMachine(1000, {});
 * first.machine.vector(3).set([1, 2, 3]);
 * first.giveBack();
 * assertEquals(borrowMachine(1000, {}).machine.vector(3), new Float64Array(3));
 * ```
 */
export function borrowMachine(
  bytes: number,
  options: {
    /** @default {false} */
    readonly plain?: boolean;
  },
): { readonly machine: VectorMachine; readonly giveBack: () => void } {
  const module = options.plain === true ? null : kernelModule();
  if (module === null) return { machine: plainMachine(), giveBack() {} };
  const machine = kept?.bytes === bytes ? kept.machine : kernelMachine(module, bytes);
  kept = null;
  machine.clear();
  return {
    machine,
    giveBack() {
      kept = { bytes, machine };
    },
  };
}

/** A machine all of whose vectors can be given up at once. */
interface ReusableMachine extends VectorMachine {
  /** Gives up all vectors; those made from now on are zeros again. */
  readonly clear: () => void;
}

let compiled: WebAssembly.Module | null | undefined;

function kernelModule(): WebAssembly.Module | null {
  if (compiled === undefined) {
    const bytes = Uint8Array.from(atob(VECTOR_KERNEL_BYTES), (c) => c.charCodeAt(0));
    compiled = typeof WebAssembly === "object" && WebAssembly.validate(bytes)
      ? new WebAssembly.Module(bytes)
      : null;
  }
  return compiled;
}

type Run = (...numbers: number[]) => number;

function kernelMachine(module: WebAssembly.Module, bytes: number): ReusableMachine {
  const fixed = 4 * LONGEST_LIST + 8 * (LONGEST_LIST * LONGEST_LIST + LONGEST_LIST + CHUNK + 4);
  const memory = new WebAssembly.Memory({ initial: Math.ceil((fixed + bytes) / 65536) + 1 });
  const run = new WebAssembly.Instance(module, { env: { memory } })
    .exports as unknown as Readonly<Record<string, Run>>;
  const { buffer } = memory;
  const list = new Uint32Array(buffer, 16, LONGEST_LIST);
  const scratch = 16 + 4 * LONGEST_LIST;
  const factors = new Float64Array(buffer, scratch + 8 * CHUNK, LONGEST_LIST);
  const out = new Float64Array(
    buffer,
    factors.byteOffset + factors.byteLength,
    LONGEST_LIST * LONGEST_LIST,
  );
  const bottom = 16 * Math.ceil((out.byteOffset + out.byteLength) / 16);
  let top = bottom, used = bottom;
  const at = (v: Float64Array) => v.byteOffset;
  const listed = (vectors: readonly Float64Array[]) => {
    vectors.forEach((v, k) => list[k] = at(v));
    return list.byteOffset;
  };
  return {
    code: "kernel",
    vector(length) {
      const made = new Float64Array(buffer, top, length);
      if (top < used) made.fill(0);
      top += 16 * Math.ceil((8 * length + 16) / 16);
      return made;
    },
    clear() {
      used = Math.max(used, top);
      top = bottom;
    },
    residuals: ({ model, flux, weight, residual }) =>
      run.residuals!(at(model), at(flux), at(weight), at(residual), model.length),
    norms({ metric, slope, pull }) {
      run.norms!(at(metric), at(slope), at(pull), out.byteOffset, metric.length);
      return [out[0]!, out[1]!, out[2]!, out[3]!];
    },
    direction: ({ metric, slope, pull, step }, alpha) =>
      run.direction!(at(metric), at(slope), at(pull), alpha, at(step), metric.length),
    scale: (values, factor) => void run.scale!(at(values), factor, values.length),
    invert: (values, into) => void run.invert!(at(values), at(into), values.length),
    weightedDots(a, weight, vectors) {
      run.weightedDots!(
        ...[at(a), at(weight), listed(vectors), vectors.length, out.byteOffset, a.length],
      );
      return out.slice(0, vectors.length);
    },
    dots(a, vectors) {
      run.dots!(at(a), listed(vectors), vectors.length, out.byteOffset, a.length);
      return out.slice(0, vectors.length);
    },
    gram(vectors, weight) {
      const count = vectors.length;
      run.gram!(
        ...[listed(vectors), count, at(weight), scratch, out.byteOffset, weight.length],
      );
      return mirrored(out.slice(0, count * count), count);
    },
    combine(vectors, coefficients, into) {
      factors.set(coefficients);
      const count = vectors.length;
      run.combine!(listed(vectors), factors.byteOffset, count, at(into), into.length);
    },
    advance: (image, step, least) => run.advance!(at(image), at(step), least, image.length),
    add: (a, b) => void run.add!(at(a), at(b), a.length),
    blur({ values, out: into, kernel, columns }) {
      const rows = values.length / columns;
      run.blur!(...[at(values), at(into), at(kernel), kernel.length - 1, rows, columns]);
    },
  };
}

function plainMachine(): VectorMachine {
  const weightedDots = (
    a: Float64Array,
    weight: Float64Array,
    list: readonly Float64Array[],
  ) => Float64Array.from(list, (b) => twoLanes(a.length, (i) => weight[i]! * a[i]! * b[i]!));
  return {
    code: "plain",
    vector: (length) => new Float64Array(length),
    residuals: ({ model, flux, weight, residual }) =>
      twoLanes(model.length, (i) => {
        const r = model[i]! - flux[i]!;
        const wr = weight[i]! * r;
        residual[i] = 2 * wr;
        return wr * r;
      }),
    norms({ metric, slope, pull }) {
      const n = metric.length;
      return [
        twoLanes(n, (i) => metric[i]! * slope[i]! * slope[i]!),
        twoLanes(n, (i) => metric[i]! * pull[i]! * pull[i]!),
        twoLanes(n, (i) => metric[i]! * slope[i]! * pull[i]!),
        twoLanes(n, (i) => metric[i]!),
      ];
    },
    direction: ({ metric, slope, pull, step }, alpha) =>
      twoLanes(metric.length, (i) => {
        const d = alpha * slope[i]! - pull[i]!;
        const gd = metric[i]! * d;
        step[i] = gd;
        return gd * d;
      }),
    scale(values, factor) {
      for (let i = 0; i < values.length; i++) values[i] = factor * values[i]!;
    },
    invert(values, out) {
      for (let i = 0; i < values.length; i++) out[i] = 1 / values[i]!;
    },
    weightedDots,
    dots: (a, list) => Float64Array.from(list, (b) => twoLanes(a.length, (i) => a[i]! * b[i]!)),
    gram(list, weight) {
      const count = list.length;
      const gram = new Float64Array(count * count);
      for (let from = 0; from < weight.length; from += CHUNK) {
        const size = Math.min(CHUNK, weight.length - from);
        for (let a = 0; a < count; a++) {
          const left = list[a]!;
          for (let b = 0; b <= a; b++) {
            const right = list[b]!;
            const at = a * count + b;
            gram[at] = gram[at]! +
              twoLanes(size, (i) => left[from + i]! * weight[from + i]! * right[from + i]!);
          }
        }
      }
      return mirrored(gram, count);
    },
    combine(list, coefficients, out) {
      out.fill(0);
      list.forEach((v, k) => {
        const c = coefficients[k]!;
        for (let i = 0; i < out.length; i++) out[i] = out[i]! + c * v[i]!;
      });
    },
    advance(image, step, least) {
      let held = 0;
      for (let i = 0; i < image.length; i++) {
        const f = image[i]!, next = f + step[i]!;
        if (least >= 0 && next < least * f) {
          image[i] = least * f;
          step[i] = least * f - f;
          held++;
        } else image[i] = next;
      }
      return held;
    },
    add(a, b) {
      for (let i = 0; i < a.length; i++) a[i] = a[i]! + b[i]!;
    },
    blur({ values, out, kernel, columns }) {
      const reach = kernel.length - 1, length = values.length;
      for (let i = 0; i < length; i++) {
        let sum = kernel[0]! * values[i]!;
        for (let j = 1; j <= reach; j++) {
          const before = i - j * columns, after = i + j * columns;
          let both = before >= 0 ? values[before]! : 0;
          if (after < length) both += values[after]!;
          sum += kernel[j]! * both;
        }
        out[i] = sum;
      }
    },
  };
}

/** Σ term(i), even and odd elements apart. */
function twoLanes(count: number, term: (i: number) => number): number {
  let even = 0, odd = 0, i = 0;
  for (; i + 1 < count; i += 2) {
    even += term(i);
    odd += term(i + 1);
  }
  if (i < count) even += term(i);
  return even + odd;
}

function mirrored(lower: Float64Array, count: number): Float64Array {
  for (let a = 0; a < count; a++) {
    for (let b = 0; b < a; b++) lower[b * count + a] = lower[a * count + b]!;
  }
  return lower;
}
