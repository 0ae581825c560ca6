/**
 * Lets the event loop turn, so that an interrupt is heard between pieces of synchronous work.
 *
 * @param signal Aborts the work.
 * @throws {DOMException} AbortError when the signal was raised.
 */
export async function pause(signal?: AbortSignal): Promise<void> {
  await new Promise((resolve) => setTimeout(resolve, 0));
  signal?.throwIfAborted();
}
