import { Command, CommanderError } from "@commander-js/extra-typings";
import settings from "../deno.json" with { type: "json" };
import { InputError, NotConverged, WorkError } from "../engine/errors.ts";
import { INTERRUPTED } from "./interrupt.ts";

// The library would look for colour variables in the environment, which is not open to us.
const COLOURS = {
  getOutHasColors: () => !Deno.noColor && Deno.stdout.isTerminal(),
  getErrHasColors: () => !Deno.noColor && Deno.stderr.isTerminal(),
};
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
    .configureOutput(COLOURS);
  const finish = (result: number) => {
    status = result;
  };
  for (const add of await commandsFor(args[0])) {
    const command = add(finish);
    command.exitOverride().configureOutput(COLOURS);
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

// In the order of the help. A command is loaded when it is called: none pays for another's start.
const COMMANDS: Readonly<Record<string, () => Promise<unknown>>> = {
  new: () => import("./commands/new.ts").then(({ newCommand }) => newCommand),
  demo: () => import("./commands/demo.ts").then(({ demoCommand }) => demoCommand),
  check: () => import("./commands/check.ts").then(({ checkCommand }) => checkCommand),
  profile: () => import("./commands/profile.ts").then(({ profileCommand }) => profileCommand),
  trail: () => import("./commands/trail.ts").then(({ trailCommand }) => trailCommand),
  orbit: () => import("./commands/orbit.ts").then(({ orbitCommand }) => orbitCommand),
  map: () => import("./commands/map.ts").then(({ mapCommand }) => mapCommand),
  synth: () => import("./commands/synth.ts").then(({ synthCommand }) => synthCommand),
  weigh: () => import("./commands/weigh.ts").then(({ weighCommand }) => weighCommand),
  plate: () => import("./commands/plate.ts").then(({ plateCommand }) => plateCommand),
  batch: () => import("./commands/batch.ts").then(({ batchCommand }) => batchCommand),
  redo: () => import("./commands/redo.ts").then(({ redoCommand }) => redoCommand),
  geometry: () => import("./commands/geometry.ts").then(({ geometryCommand }) => geometryCommand),
};

/** The command that is called, or all of them: for the help, or when the name is unknown. */
async function commandsFor(name: string | undefined): Promise<AddCommand[]> {
  const called = name !== undefined && Object.hasOwn(COMMANDS, name)
    ? [COMMANDS[name]!]
    : Object.values(COMMANDS);
  return await Promise.all(called.map((load) => load())) as AddCommand[];
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
