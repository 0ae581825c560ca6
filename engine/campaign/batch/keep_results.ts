import { join } from "@std/path";
import { makeFolder, sha256, writeFileAtomically } from "../../files/mod.ts";
import { packValue, unpackValue } from "./packed_value.ts";

/** Folder, within an output folder, of what is kept from one step to the next. */
export const KEPT_FOLDER = ".millrace-kept";

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
      const own = `${key} ${name}`;
      const found = await load(path, own);
      if (found !== null) return found.value as T;
      const value = await make();
      const bytes = packValue(own, value);
      if (bytes !== null) await store(kept, path, bytes);
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

async function load(path: string, key: string): Promise<{ readonly value: unknown } | null> {
  try {
    return unpackValue(key, await Deno.readFile(path));
  } catch {
    return null;
  }
}

async function store(folder: string, path: string, bytes: Uint8Array): Promise<void> {
  try {
    await makeFolder(folder);
    await writeFileAtomically(path, bytes, { overwrite: true });
  } catch {
    // Without space for it, it is made again when it is needed.
  }
}
