import { InputError, NotConverged, WorkError } from "../errors.ts";

/** An error as plain data, for the way between threads. */
export type CrossingError =
  | { readonly kind: "InputError" | "WorkError"; readonly parts: Record<string, unknown> }
  | { readonly kind: "NotConverged"; readonly message: string; readonly partial: unknown }
  | { readonly kind: "other"; readonly name: string; readonly message: string };

/** A {@linkcode CrossingError} with what all kinds have. */
export type CrossingErrorWithStack = CrossingError & {
  readonly stack?: string;
  readonly cause?: CrossingErrorWithStack;
};

function cloneable(value: unknown, otherwise: unknown): unknown {
  try {
    return structuredClone(value);
  } catch {
    return otherwise;
  }
}

function packBare(error: unknown): CrossingError {
  if (error instanceof InputError || error instanceof WorkError) {
    const parts = Object.fromEntries(
      Object.entries(error)
        .filter(([key, value]) => key !== "name" && key !== "cause" && value !== undefined)
        .map(([key, value]) => [key, cloneable(value, String(value))]),
    );
    return { kind: error.name, parts };
  }
  if (error instanceof NotConverged) {
    return {
      kind: "NotConverged",
      message: error.message,
      partial: cloneable(error.partial, null),
    };
  }
  if (error instanceof Error) return { kind: "other", name: error.name, message: error.message };
  return { kind: "other", name: "Error", message: String(error) };
}

/** Turns an error into plain data. A part that cannot be cloned becomes text, a partial result null. */
export function packError(error: unknown): CrossingErrorWithStack {
  const packed = packBare(error);
  if (!(error instanceof Error)) return packed;
  const cause = error.cause === undefined ? undefined : packError(error.cause);
  return { ...packed, stack: error.stack, cause };
}

function unpackBare(packed: CrossingError): Error {
  switch (packed.kind) {
    case "InputError":
      return new InputError(packed.parts as unknown as ConstructorParameters<typeof InputError>[0]);
    case "WorkError":
      return new WorkError(packed.parts as unknown as ConstructorParameters<typeof WorkError>[0]);
    case "NotConverged":
      return new NotConverged(packed.message, packed.partial);
    case "other":
      return Object.assign(new Error(packed.message), { name: packed.name });
  }
}

/** The error again, of its class and with its parts. */
export function unpackError(packed: CrossingErrorWithStack): Error {
  const error = unpackBare(packed);
  if (packed.stack !== undefined) error.stack = packed.stack;
  if (packed.cause !== undefined) error.cause = unpackError(packed.cause);
  return error;
}
