/** Long work in pieces: a generator that yields between them and returns the result. */
export type Steps<Result> = Generator<undefined, Result>;

/** Does work in one go. */
export function atOnce<Result>(steps: Steps<Result>): Result {
  for (;;) {
    const step = steps.next();
    if (step.done === true) return step.value;
  }
}

/**
 * Does work piece by piece, and lets the event loop turn in between, so that an interrupt is heard.
 *
 * @param steps The work.
 * @param signal Ends it.
 * @returns Its result.
 * @throws {DOMException} AbortError when the signal was raised.
 */
export async function inTurns<Result>(
  steps: Steps<Result>,
  signal?: AbortSignal,
): Promise<Result> {
  for (;;) {
    await new Promise((resolve) => setTimeout(resolve, 0));
    signal?.throwIfAborted();
    const step = steps.next();
    if (step.done === true) return step.value;
  }
}
