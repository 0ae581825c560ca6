import type { CrossingErrorWithStack } from "./error_crossing.ts";

/** What the pool tells a worker. */
export type ToWorker =
  | { readonly kind: "open"; readonly module: string; readonly shared: unknown }
  | { readonly kind: "task"; readonly index: number; readonly task: unknown };

/** What a worker tells the pool. */
export type FromWorker =
  | { readonly kind: "ready" }
  | { readonly kind: "unusable"; readonly error: CrossingErrorWithStack }
  | { readonly kind: "done"; readonly index: number; readonly result: unknown }
  | { readonly kind: "failed"; readonly index: number; readonly error: CrossingErrorWithStack };
