// Types of the parts of the standard library in use: its npm mirror ships JavaScript alone. The
// names are the standard ones, so moving to a typed distribution means deleting this file.

declare module "@std/assert" {
  // deno-lint-ignore no-explicit-any
  type ErrorClass<E extends Error = Error> = new (...args: any[]) => E;
  export class AssertionError extends Error {}
  export function assert(expr: unknown, msg?: string): asserts expr;
  export function assertEquals<T>(actual: T, expected: T, msg?: string): void;
  export function assertNotEquals<T>(actual: T, expected: T, msg?: string): void;
  export function assertStrictEquals<T>(actual: unknown, expected: T, msg?: string): void;
  export function assertAlmostEquals(
    actual: number,
    expected: number,
    tolerance?: number,
    msg?: string,
  ): void;
  export function assertExists<T>(actual: T, msg?: string): asserts actual is NonNullable<T>;
  export function assertGreater<T>(actual: T, expected: T, msg?: string): void;
  export function assertGreaterOrEqual<T>(actual: T, expected: T, msg?: string): void;
  export function assertLess<T>(actual: T, expected: T, msg?: string): void;
  export function assertLessOrEqual<T>(actual: T, expected: T, msg?: string): void;
  export function assertStringIncludes(actual: string, expected: string, msg?: string): void;
  export function assertArrayIncludes<T>(
    actual: ArrayLike<T>,
    expected: ArrayLike<T>,
    msg?: string,
  ): void;
  export function assertMatch(actual: string, expected: RegExp, msg?: string): void;
  export function assertNotMatch(actual: string, expected: RegExp, msg?: string): void;
  export function assertInstanceOf<T extends ErrorClass>(
    actual: unknown,
    expected: T,
    msg?: string,
  ): asserts actual is InstanceType<T>;
  export function assertThrows(fn: () => unknown, msg?: string): unknown;
  export function assertThrows<E extends Error>(
    fn: () => unknown,
    errorClass: ErrorClass<E>,
    msgIncludes?: string,
    msg?: string,
  ): E;
  export function assertRejects(fn: () => PromiseLike<unknown>, msg?: string): Promise<unknown>;
  export function assertRejects<E extends Error>(
    fn: () => PromiseLike<unknown>,
    errorClass: ErrorClass<E>,
    msgIncludes?: string,
    msg?: string,
  ): Promise<E>;
  export function fail(msg?: string): never;
}

declare module "@std/path" {
  export function basename(path: string | URL, suffix?: string): string;
  export function dirname(path: string | URL): string;
  export function extname(path: string | URL): string;
  export function fromFileUrl(url: string | URL): string;
  export function toFileUrl(path: string): URL;
  export function isAbsolute(path: string): boolean;
  export function join(path?: string | URL, ...paths: string[]): string;
  export function normalize(path: string | URL): string;
  export function relative(from: string, to: string): string;
  export function resolve(...paths: string[]): string;
  export function isGlob(text: string): boolean;
  export function globToRegExp(
    glob: string,
    options?: { extended?: boolean; globstar?: boolean; caseInsensitive?: boolean },
  ): RegExp;
  export const SEPARATOR: "/" | "\\";
}

declare module "@std/text" {
  export function closestString(
    givenWord: string,
    possibleWords: readonly string[],
    options?: { caseSensitive?: boolean; compareFn?: (a: string, b: string) => number },
  ): string;
  export function levenshteinDistance(a: string, b: string): number;
}

declare module "@std/yaml" {
  export function parse(content: string, options?: { allowDuplicateKeys?: boolean }): unknown;
  export function stringify(
    data: unknown,
    options?: { lineWidth?: number; flowLevel?: number; sortKeys?: boolean; skipInvalid?: boolean },
  ): string;
}
