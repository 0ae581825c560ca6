import { Command, CommanderError } from "@commander-js/extra-typings";
import settings from "../deno.json" with { type: "json" };
import { InputError, NotConverged, WorkError } from "../engine/errors.ts";
import { INTERRUPTED } from "./interrupt.ts";

const FAILED = 1;
const WRONG_CALL = 2;

/**
 * Runs the command line.
 *
 * @param args The words after the program's name.
 * @returns The exit status: 0 done, 1 the work failed, 2 the input or the call is wrong, 130
 * interrupted.
 */
export async function main(args: readonly string[]): Promise<number> {
  let status = 0;
  const program = new Command("millrace")
    .description(
      "Trails, velocity maps, orbits and figures from time-resolved spectra of accreting binaries.",
    )
    .version(settings.version)
    .exitOverride()
    .showHelpAfterError("(millrace --help lists the commands)")
    .configureOutput({
      getOutHasColors: () => !Deno.noColor && Deno.stdout.isTerminal(),
      getErrHasColors: () => !Deno.noColor && Deno.stderr.isTerminal(),
    });
  const finish = (result: number) => {
    status = result;
  };
  for (const add of await commands()) {
    const command = add(finish);
    command.exitOverride();
    program.addCommand(command as Command);
  }
  try {
    await program.parseAsync([...args], { from: "user" });
  } catch (error) {
    return report(error);
  }
  return status;
}

type AddCommand = (finish: (status: number) => void) => Command;

async function commands(): Promise<AddCommand[]> {
  const modules = await Promise.all([
    import("./commands/new.ts").then(({ newCommand }) => newCommand),
    import("./commands/demo.ts").then(({ demoCommand }) => demoCommand),
    import("./commands/check.ts").then(({ checkCommand }) => checkCommand),
    import("./commands/profile.ts").then(({ profileCommand }) => profileCommand),
    import("./commands/trail.ts").then(({ trailCommand }) => trailCommand),
    import("./commands/orbit.ts").then(({ orbitCommand }) => orbitCommand),
    import("./commands/map.ts").then(({ mapCommand }) => mapCommand),
    import("./commands/synth.ts").then(({ synthCommand }) => synthCommand),
    import("./commands/weigh.ts").then(({ weighCommand }) => weighCommand),
    import("./commands/plate.ts").then(({ plateCommand }) => plateCommand),
    import("./commands/batch.ts").then(({ batchCommand }) => batchCommand),
    import("./commands/redo.ts").then(({ redoCommand }) => redoCommand),
    import("./commands/geometry.ts").then(({ geometryCommand }) => geometryCommand),
  ]);
  return modules as unknown as AddCommand[];
}

function report(error: unknown): number {
  const say = (text: string) => console.error(`millrace: ${text}`);
  if (error instanceof CommanderError) return error.exitCode === 0 ? 0 : WRONG_CALL;
  if (error instanceof InputError) {
    say(error.message);
    return WRONG_CALL;
  }
  if (error instanceof WorkError || error instanceof NotConverged) {
    say(error.message);
    return FAILED;
  }
  if (error instanceof DOMException && error.name === "AbortError") return INTERRUPTED;
  const text = error instanceof Error ? `${error.name}: ${error.message}` : String(error);
  say(`this is a fault of Millrace, not of your input: ${text}`);
  say("please report it with the command and the target file");
  return FAILED;
}

if (import.meta.main) Deno.exit(await main(Deno.args));
