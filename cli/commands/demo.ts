import { resolve } from "@std/path";
import {
  binaryOf,
  gather,
  type LineSettings,
  type LineTask,
  type MappedLine,
  mappedLines,
  openSession,
  type OrbitDocument,
  outputFolder,
  readTarget,
  recordStep,
  runCheck,
  runMap,
  runOrbit,
  runPlate,
  runTrail,
  type Session,
  simulateDemo,
  type StepOutput,
  type StepResult,
  type Target,
  trueSpot,
  uniqueWarnings,
  VERSION,
  weighLine,
  workBeside,
} from "../../engine/campaign/mod.ts";
import recipe from "../../examples/demo/recipe.toml" with { type: "text" };
import target from "../../examples/demo/vx-0417.toml" with { type: "text" };
import { utcNow } from "../clock.ts";
import { commandWith } from "../common_options.ts";
import { runCommand } from "../run_command.ts";
import { plainNumber, tableLines, withError } from "../terminal/table.ts";
import { checkLines } from "./check.ts";
import { mapLines } from "./map.ts";
import { orbitLines } from "./orbit.ts";

/** Inversions that fit the data: the first line's spot by each is shown beside the target file's. */
const FITTED = ["entropy", "total-variation"] as const;

/** Runs a step of a target and records it, as the command of its name does. */
type Recorder = <T>(
  command: string,
  run: (session: Session, output: StepOutput) => Promise<StepResult<T>>,
) => Promise<StepResult<T>>;

/** Few resamples show the size of an error: most of it here is that of the zero of phase. */
const SOONER = "map.resamples=4";

/** Name of the weighing among what is done beside. */
const VERDICT = "verdict";

/** The least that gives a verdict: its sentence says from how few trials it comes. */
const QUICK_VERDICT = { sets: [["disc"], ["disc", "spot"]], trials: 20, limit: false } as const;

/**
 * `millrace demo`: an invented night, from raw exposures to the figure.
 *
 * @param finish Takes the exit status.
 * @returns The command.
 */
export const demoCommand = (finish: (status: number) => void) =>
  commandWith("demo", "simulates an invented campaign and runs everything on it, in demo-run/")
    .action(async (options) => {
      finish(
        await runCommand(options, async ({ console, progress, signal }) => {
          const folder = options.out ?? "demo-run";
          console.err(`simulating a night of an invented dwarf nova in ${resolve(folder)}`);
          const campaign = await simulateDemo(folder, {
            recipe,
            target,
            target_name: "vx-0417.toml",
            seed: options.seed,
            set: options.set,
            overwrite: options.overwrite,
            progress,
            signal,
          });
          console.err(
            `${campaign.exposures.length} raw exposures written; from here on they are treated as yours would be`,
          );
          const read = await readTarget(campaign.target_file, { set: options.set });
          const workers = options.workers ?? navigator.hardwareConcurrency;
          const beside = workBeside({ workers, signal });
          const common = { workers: options.workers, progress, signal };
          const session = openSession(read, { ...common, keep: beside.take });
          const output = { folder: outputFolder(read), overwrite: options.overwrite };
          const record: Recorder = (command, run) =>
            recordStep(
              read,
              { command, run: () => run(session, output) },
              { output, now: utcNow, signal },
            );
          const gas = mappedLines(session.lines("map the demo"));
          const line = gas[0]!;
          const others = await Promise.all(FITTED.map((method) => {
            const set = [...(options.set ?? []), `map.method="${method}"`, SOONER];
            return readTarget(campaign.target_file, { set });
          }));
          beside.start(plannedBeside(read, { gas, others }), await gather(session, gas));
          const checking = record("check", runCheck);
          goAhead(session, gas);
          const check = await checking;
          const trail = await record("trail", runTrail);
          const map = await record("map", runMap);
          const orbit = await record("orbit", runOrbit);
          const plate = await record("plate", runPlate);
          const fitted: MappedLine[] = [];
          for (const target of others) {
            const other = openSession(target, { ...common, from: session });
            fitted.push(
              await beside.take(
                mapBeside(target),
                () => other.map(mappedLines(other.lines("map the demo"))[0]!),
              ),
            );
          }
          const { sentence, preferred } = await beside.take(
            VERDICT,
            async () => (await weighLine(session, line, QUICK_VERDICT)).verdict,
          );
          const weighed = line.name;
          const parts = trueParts(campaign.recipe, weighed);
          const truth = binaryOf(campaign.recipe);
          const warnings = uniqueWarnings([
            ...fitted.flatMap(({ warnings }) => warnings),
            ...orbit.warnings,
            ...plate.warnings,
          ]);
          const found = [
            ...map.document.maps,
            ...fitted.map(({ trail, method, features }) => ({
              line: trail.line.name,
              method,
              features,
            })),
          ];
          const spots = found.map(({ line, method, features }) => ({
            line,
            method,
            found: features[0] ?? null,
            truth: trueSpot(campaign.recipe, { line }),
          }));
          return {
            document: {
              schema: "demo/1",
              version: VERSION,
              target_file: campaign.target_file,
              exposures: campaign.exposures.length,
              maps: map.document.maps,
              spots,
              orbit: orbit.document,
              verdict: { line: weighed, preferred, sentence, truth: parts },
              truth: { binary: truth, systemic_kms: campaign.recipe.settings.orbit.systemic_kms },
              warnings,
            },
            lines: [
              ...checkLines(check.document),
              "",
              ...mapLines(map.document),
              "",
              ...orbitLines(orbit.document),
              "",
              "  the bright spot, found and true",
              ...tableLines([
                ["line", "map", "Vx / km/s", "true", "Vy / km/s", "true", "off by"],
                ...spots.map(({ line, method, found, truth }) => [
                  line,
                  method,
                  found === null ? "–" : withError(found.vx_kms, found.vx_error_kms),
                  plainNumber(truth?.vx_kms, 1),
                  found === null ? "–" : withError(found.vy_kms, found.vy_error_kms),
                  plainNumber(truth?.vy_kms, 1),
                  found === null || truth === null ? "–" : `${
                    plainNumber(
                      Math.hypot(found.vx_kms - truth.vx_kms, found.vy_kms - truth.vy_kms),
                      1,
                    )
                  } km/s`,
                ]),
              ], {
                heading: true,
                align: ["left", "left", "right", "right", "right", "right", "right"],
              }),
              "",
              "  the binary, found and true",
              ...tableLines(
                orbitTruth(orbit.document, campaign.recipe),
                { heading: true, align: ["left", "right", "right"] },
              ),
              "",
              `  ${weighed}, weighed: ${sentence}`,
              `  it was made of: ${parts.join(" + ")}`,
              "",
              `  target file ${campaign.target_file}, raw exposures in ${folder}/blue and ${folder}/red`,
            ],
            files: [
              ...new Set([check, trail, map, orbit, plate].flatMap(({ files }) => files)),
            ],
            warnings,
          };
        }),
      );
    });

/** Name of a fitted map among what is done beside. */
const mapBeside = (target: Target) => `map by ${target.settings.map.method}`;

/** What other threads do: first what is wanted first, then what takes longest. */
function plannedBeside(
  target: Target,
  options: { gas: readonly LineSettings[]; others: readonly Target[] },
): LineTask[] {
  const { gas, others } = options;
  const line = gas[0]!.name;
  return [
    ...gas.map(({ name }): LineTask => ({
      name: `tests of ${name}`,
      target,
      line: name,
      work: "tests",
    })),
    { name: VERDICT, target, line, work: { weigh: QUICK_VERDICT } },
    ...others.map((other): LineTask => ({
      name: mapBeside(other),
      target: other,
      line,
      work: "map",
    })),
  ];
}

/** Makes what later steps ask for while other threads test; what goes wrong is told by those steps. */
async function goAhead(session: Session, gas: readonly LineSettings[]): Promise<void> {
  for (const line of gas) await session.map(line).catch(() => {});
  await session.orbit().catch(() => {});
}

function trueParts({ settings }: Target, line: string): readonly string[] {
  const own = settings.lines.find(({ name }) => name === line)?.model;
  return (own ?? settings.model)!.parts;
}

function orbitTruth(found: OrbitDocument, recipe: Target): string[][] {
  const truth = binaryOf(recipe)!;
  const { systemic_kms } = recipe.settings.orbit;
  const { accretor, donor, masses } = found;
  const measured = (value: number | null | undefined, error: number | null | undefined) =>
    value === null || value === undefined ? "not measured" : withError(value, error ?? null);
  const half = (low: number | null, high: number | null) => ((low ?? 0) + (high ?? 0)) / 2;
  return [
    ["", "found", "true"],
    [
      "K1 / km/s",
      measured(accretor?.k_kms, accretor?.k_error_kms),
      plainNumber(truth.k_accretor_kms, 1),
    ],
    [
      "K2 / km/s",
      measured(donor?.k_centre_kms, donor?.k_centre_error_kms),
      plainNumber(truth.k_donor_kms, 1),
    ],
    [
      "γ / km/s",
      measured(donor?.systemic_kms, donor?.systemic_error_kms),
      plainNumber(Number(systemic_kms), 1),
    ],
    ["M2/M1", measured(found.mass_ratio, found.mass_ratio_error), plainNumber(truth.mass_ratio, 3)],
    [
      "M1 / Msun",
      measured(
        masses.accretor_msun,
        half(masses.accretor_error_low_msun, masses.accretor_error_high_msun),
      ),
      plainNumber(truth.mass_accretor_msun, 3),
    ],
    [
      "M2 / Msun",
      measured(masses.donor_msun, half(masses.donor_error_low_msun, masses.donor_error_high_msun)),
      plainNumber(truth.mass_donor_msun, 3),
    ],
  ];
}
