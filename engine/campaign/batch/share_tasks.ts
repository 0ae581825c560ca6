import { join } from "@std/path";
import { WorkError } from "../../errors.ts";
import { makeFolder, sha256, withLock, writeFileAtomically } from "../../files/mod.ts";
import type { StoredCall, TaskStore } from "../../workers/mod.ts";
import { VERSION } from "../version.ts";
import { packValue, unpackValue } from "./packed_value.ts";
import { type Part, trialsOfPart } from "./share_jobs.ts";

/** Folder, within an output folder, of the results of divided tasks. */
export const SHARES_FOLDER = ".millrace-shares";

/** Between two looks for results of other processes, ms. */
const LOOK_MS = 200;

/** How tasks are divided. */
export interface ShareOptions {
  /**
   * Which of the tasks are done first; after them those that no other process has in hand. Null to do
   * none, and to say which are missing.
   */
  readonly part: Part | null;
  /** Tasks taken in hand at a time after the own share. @default {1} */
  readonly workers?: number;
}

/**
 * A store through which processes on several machines share the tasks of one step in a common folder. Every
 * process goes through the same work in the same order; where tasks are run, each one is run by one
 * process, which holds its lock, and read by the others. A task of a killed process is free again.
 *
 * @param folder The output folder, common to all.
 * @param options Which tasks this process does.
 * @returns The store, for `withTaskStore`.
 */
export function shareTasks(folder: string, options: ShareOptions): TaskStore {
  return {
    async results<Result>(call: StoredCall<Result>): Promise<Result[]> {
      const key = callKey(call);
      const name = call.what.replace(/[^a-z0-9]+/gi, "-");
      const shared = join(folder, SHARES_FOLDER, `${name}-${key.slice(0, 16)}`);
      await makeFolder(shared);
      const share = new Share(call, { folder: shared, key });
      await (options.part === null ? share.lookAll() : share.work(options.part, options));
      return share.all();
    },
  };
}

/** One call's tasks in their folder. */
class Share<Result> {
  readonly #found = new Map<number, Result>();

  constructor(
    readonly call: StoredCall<Result>,
    readonly place: { readonly folder: string; readonly key: string },
  ) {}

  /** Looks once; names what is missing. */
  async lookAll(): Promise<void> {
    await this.#look();
    const missing = this.#missing();
    if (missing.length === 0) return;
    throw new WorkError({
      action: "gather the parts",
      reason: `${missing.length} of ${this.call.tasks.length} pieces of the ${this.call.what} ` +
        `are missing: ${ranges(missing)}`,
      file: this.place.folder,
      remedy: "run the parts again: what is done is kept",
    });
  }

  /** Works until there is nothing left to do, by whomever. */
  async work(part: Part, options: ShareOptions): Promise<void> {
    const { workers = 1 } = options;
    const own = new Set(trialsOfPart(this.call.tasks.length, part));
    for (;;) {
      await this.#look();
      const missing = this.#missing();
      if (missing.length === 0) return;
      const mine = missing.filter((index) => own.has(index));
      // Half of the own share at a time: the rest stays free for others that are done with theirs.
      const taken = await this.#take(mine.length > 0 ? mine : missing, {
        most: Math.max(workers, Math.ceil(mine.length / 2)),
      });
      if (taken > 0) continue;
      own.clear(); // what is left of the own share is in another's hands
      await new Promise((resolve) => setTimeout(resolve, LOOK_MS));
      this.call.signal?.throwIfAborted();
    }
  }

  all(): Result[] {
    return this.call.tasks.map((_, index) => this.#found.get(index)!);
  }

  /** Locks tasks that nobody holds, and runs them; says how many. */
  async #take(candidates: readonly number[], { most }: { most: number }): Promise<number> {
    const [first, ...rest] = candidates;
    if (most === 0 || first === undefined) return await this.#run(this.#held);
    try {
      return await withLock(this.#path(first, "lock"), async () => {
        this.#held.push(first);
        return await this.#take(rest, { most: most - 1 });
      });
    } catch (error) {
      // Another process has this one in hand; an error of the work itself passes.
      if (!(error instanceof WorkError) || error.file !== this.#path(first, "lock")) throw error;
      return await this.#take(rest, { most });
    }
  }

  #held: number[] = [];

  async #run(indices: readonly number[]): Promise<number> {
    this.#held = [];
    await this.#look();
    const wanted = indices.filter((index) => !this.#found.has(index));
    const writing: Promise<void>[] = [];
    if (wanted.length > 0) {
      await this.call.run(wanted, (index, result) => writing.push(this.#store(index, result)));
    }
    await Promise.all(writing);
    return indices.length;
  }

  async #store(index: number, result: Result): Promise<void> {
    const bytes = packValue(this.#keyOf(index), result);
    if (bytes === null) throw new TypeError(`results of ${this.call.what} are not plain data`);
    await writeFileAtomically(this.#path(index, "bin"), bytes, { overwrite: true });
    this.#found.set(index, result);
    this.call.progress(this.#found.size);
  }

  async #look(): Promise<void> {
    const before = this.#found.size;
    for (const index of this.#missing()) {
      try {
        const bytes = await Deno.readFile(this.#path(index, "bin"));
        const found = unpackValue(this.#keyOf(index), bytes);
        if (found !== null) this.#found.set(index, found.value as Result);
      } catch (error) {
        if (!(error instanceof Deno.errors.NotFound)) throw error;
      }
    }
    if (this.#found.size > before) this.call.progress(this.#found.size);
  }

  #missing(): number[] {
    return this.call.tasks.map((_, index) => index).filter((index) => !this.#found.has(index));
  }

  #path(index: number, kind: "bin" | "lock"): string {
    return join(this.place.folder, `${index}.${kind}`);
  }

  #keyOf(index: number): string {
    return `${this.place.key} ${index}`;
  }
}

/** Digest of all that the results of a call depend on, wherever the program lies. */
function callKey({ module, shared, tasks }: StoredCall<unknown>): string {
  const name = module.replace(/^.*\/engine\//, "");
  return sha256(`${VERSION} ${name} ${digestText({ shared, tasks })}`);
}

function digestText(value: unknown): string {
  return JSON.stringify(value, (_key, part) => {
    if (ArrayBuffer.isView(part)) {
      const { buffer, byteOffset, byteLength, constructor: { name } } = part;
      return `${name} ${sha256(new Uint8Array(buffer, byteOffset, byteLength))}`;
    }
    if (part instanceof Map || part instanceof Set) return [...part];
    if (typeof part === "number" && (!Number.isFinite(part) || Object.is(part, -0))) {
      return `number ${Object.is(part, -0) ? "-0" : part}`;
    }
    return part;
  });
}

/** Numbers in words: "3, 7 to 9". */
function ranges(numbers: readonly number[]): string {
  const words: string[] = [];
  for (let i = 0; i < numbers.length;) {
    let end = i;
    while (numbers[end + 1] === numbers[end]! + 1) end++;
    words.push(end === i ? `${numbers[i]}` : `${numbers[i]} to ${numbers[end]}`);
    i = end + 1;
  }
  return words.length > 8 ? `${words.slice(0, 8).join(", ")}, …` : words.join(", ");
}
