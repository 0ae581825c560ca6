/** Exit status after an interrupt, as shells report it. */
export const INTERRUPTED = 130;

/**
 * Listens for an interrupt while a command runs: the first one asks the work to stop, the second
 * ends the process at once.
 *
 * @param onInterrupt Called on the first interrupt.
 * @returns The signal for the work, and a function that stops listening.
 */
export function listenForInterrupt(
  onInterrupt: () => void,
): { signal: AbortSignal; stop: () => void } {
  const controller = new AbortController();
  const handle = () => {
    if (controller.signal.aborted) Deno.exit(INTERRUPTED);
    onInterrupt();
    controller.abort();
  };
  const signals: readonly Deno.Signal[] = Deno.build.os === "windows"
    ? ["SIGINT"]
    : ["SIGINT", "SIGTERM"];
  for (const name of signals) Deno.addSignalListener(name, handle);
  return {
    signal: controller.signal,
    stop: () => {
      for (const name of signals) Deno.removeSignalListener(name, handle);
    },
  };
}
