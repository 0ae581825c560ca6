/** Where text goes: results to standard output, everything else to standard error. */
export interface Console {
  /** One line of result to standard output. */
  out(line: string): void;
  /** One line of news (warnings, paths while working) to standard error; nothing when quiet. */
  err(line: string): void;
  /** Shows how far a computation has come, on a terminal only; an empty text clears it. */
  status(line: string): void;
  /** Whether news goes to a terminal, where one line can change. */
  readonly onTerminal: boolean;
  /** Whether standard output may be coloured. */
  readonly coloured: boolean;
  /** Width of the terminal in characters, 100 when there is none. */
  readonly width: number;
}

/**
 * A console on the process's own streams. A closed pipe ends the output quietly: the files are
 * written whether or not anybody reads the table.
 *
 * @param options How to speak.
 * @param options.quiet Whether news is left out. @default false
 * @returns The console.
 */
export function openConsole(options: { quiet?: boolean } = {}): Console {
  const { quiet = false } = options;
  const encoder = new TextEncoder();
  const onTerminal = Deno.stderr.isTerminal();
  let shown = false;
  const write = (stream: { writeSync(bytes: Uint8Array): number }, text: string) => {
    const bytes = encoder.encode(text);
    try {
      for (let at = 0; at < bytes.length;) at += stream.writeSync(bytes.subarray(at));
    } catch (error) {
      if (!(error instanceof Deno.errors.BrokenPipe)) throw error;
    }
  };
  const clear = () => {
    if (shown) write(Deno.stderr, "\r\x1b[2K");
    shown = false;
  };
  return {
    out(line) {
      clear();
      write(Deno.stdout, `${line}\n`);
    },
    err(line) {
      clear();
      if (!quiet) write(Deno.stderr, `${line}\n`);
    },
    status(line) {
      if (!onTerminal || quiet) return;
      clear();
      if (line === "") return;
      write(Deno.stderr, line);
      shown = true;
    },
    onTerminal,
    coloured: Deno.stdout.isTerminal() && !Deno.noColor,
    width: terminalWidth(),
  };
}

function terminalWidth(): number {
  try {
    return Deno.consoleSize().columns;
  } catch {
    return 100;
  }
}
