import { deserialize, serialize } from "node:v8";
import { join } from "@std/path";
import { makeFolder, sha256, writeFileAtomically } from "../../files/mod.ts";

/** Folder, within an output folder, of what is kept from one step to the next. */
export const KEPT_FOLDER = ".millrace-kept";

const DIGEST_LENGTH = 64;

/** Keeps what is costly to make and is needed by several steps. */
export interface ResultKeeper {
  /** Gives what was kept under a name, or makes it and keeps it. */
  keep<T>(name: string, make: () => Promise<T>): Promise<T>;
  /** Throws away all that is kept. */
  clear(): Promise<void>;
}

/**
 * Keeps results in an output folder, so that a run that was killed between two steps need not make a
 * map again to draw it. Only plain data are kept; what cannot be kept is made again.
 *
 * @param folder The output folder.
 * @param key What the results depend on: those of another key are not taken.
 * @returns The keeper.
 */
export function keepResults(folder: string, key: string): ResultKeeper {
  const kept = join(folder, KEPT_FOLDER);
  return {
    async keep<T>(name: string, make: () => Promise<T>): Promise<T> {
      const path = join(kept, `${sha256(name).slice(0, 16)}.bin`);
      const found = await load(path, `${key} ${name}`);
      if (found !== undefined) return found.value as T;
      const value = await make();
      if (isPlain(value)) await store(kept, { path, key: `${key} ${name}`, value });
      return value;
    },
    async clear() {
      try {
        await Deno.remove(kept, { recursive: true });
      } catch (error) {
        if (!(error instanceof Deno.errors.NotFound)) throw error;
      }
    },
  };
}

async function load(path: string, key: string): Promise<{ value: unknown } | undefined> {
  try {
    const bytes = await Deno.readFile(path);
    const payload = bytes.subarray(DIGEST_LENGTH);
    const digest = new TextDecoder().decode(bytes.subarray(0, DIGEST_LENGTH));
    return digest === digestOf(key, payload) ? { value: deserialize(payload) } : undefined;
  } catch {
    return undefined;
  }
}

async function store(
  folder: string,
  { path, key, value }: { path: string; key: string; value: unknown },
): Promise<void> {
  const payload = new Uint8Array(serialize(value));
  const bytes = new Uint8Array(DIGEST_LENGTH + payload.length);
  bytes.set(new TextEncoder().encode(digestOf(key, payload)));
  bytes.set(payload, DIGEST_LENGTH);
  try {
    await makeFolder(folder);
    await writeFileAtomically(path, bytes, { overwrite: true });
  } catch {
    // Without space for it, it is made again when it is needed.
  }
}

function digestOf(key: string, payload: Uint8Array): string {
  return sha256(`${key} ${sha256(payload)}`);
}

/** Whether a value comes back from the disc as it went: no functions, no classes of ours. */
function isPlain(value: unknown): boolean {
  if (value === null || typeof value !== "object") return typeof value !== "function";
  if (ArrayBuffer.isView(value)) return true;
  if (Array.isArray(value)) return value.every(isPlain);
  return Object.getPrototypeOf(value) === Object.prototype && Object.values(value).every(isPlain);
}
