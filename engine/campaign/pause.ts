import { setImmediate } from "node:timers";

/**
 * Lets the event loop turn, so that an interrupt is heard between pieces of synchronous work. A turn
 * costs a thirtieth of a millisecond; a timer would wait for a whole one at least.
 *
 * @param signal Aborts the work.
 * @throws {DOMException} AbortError when the signal was raised.
 */
export async function pause(signal?: AbortSignal): Promise<void> {
  await new Promise<void>((resolve) => setImmediate(resolve));
  signal?.throwIfAborted();
}
