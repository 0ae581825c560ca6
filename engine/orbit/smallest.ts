/**
 * The entry with the smallest number, of those that have one.
 *
 * @param entries Entries.
 * @param number Number of an entry; null when it has none.
 * @returns The entry; undefined when none has a number.
 */
export function smallest<T>(
  entries: readonly T[],
  number: (entry: T) => number | null,
): T | undefined {
  let found: T | undefined;
  let least = Infinity;
  for (const entry of entries) {
    const value = number(entry);
    if (value !== null && value < least) [found, least] = [entry, value];
  }
  return found;
}
