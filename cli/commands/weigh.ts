import { runWeigh, type WeighDocument } from "../../engine/campaign/mod.ts";
import { commandWith } from "../common_options.ts";
import { runInParts } from "../part_options.ts";
import { runCommand } from "../run_command.ts";
import { openTarget, recorded } from "../target_command.ts";
import { plainNumber, tableLines, withError } from "../terminal/table.ts";

/**
 * `millrace weigh`: hypotheses against each other.
 *
 * @param finish Takes the exit status.
 * @returns The command.
 */
export const weighCommand = (finish: (status: number) => void) =>
  commandWith("weigh", "hypotheses against each other, with calibrated false-alarm rates")
    .argument("<target>", "target file")
    .option("--part <i/n>", "make one share of n of the trials, together with other processes")
    .option("--gather", "make the outputs from what the shares have done")
    .action(async (file, options) => {
      finish(
        await runCommand(options, async (context) => {
          const opened = await openTarget(file, { call: options, context });
          return runInParts("weigh", opened, {
            call: options,
            run: () => recorded("weigh", opened, () => runWeigh(opened.session, opened.output)),
            lines: weighLines,
          });
        }),
      );
    });

/**
 * The verdicts as text: a table sorted by support, then one sentence.
 *
 * @param document The weigh document.
 * @returns Lines of text.
 */
export function weighLines(document: WeighDocument): string[] {
  return document.lines.flatMap((line, i) => [
    ...(i === 0 ? [] : [""]),
    `  ${line.line} (${plainNumber(line.rest_air_angstrom, 2)} Å in air)`,
    ...tableLines([
      ["hypothesis", "χ²", "N", "parameters", "ΔAICc", "ΔBIC", "adequate"],
      ...line.hypotheses.map((hypothesis) => [
        hypothesis.parts.join(" + "),
        plainNumber(hypothesis.chi_square, 1),
        String(hypothesis.sample_count),
        plainNumber(hypothesis.effective_parameters, 1),
        hypothesis.aicc === null || line.hypotheses[0]!.aicc === null
          ? "–"
          : plainNumber(hypothesis.aicc - line.hypotheses[0]!.aicc, 1),
        plainNumber(hypothesis.bic - line.hypotheses[0]!.bic, 1),
        hypothesis.adequate ? "yes" : "no",
      ]),
    ], {
      heading: true,
      indent: 4,
      align: ["left", "right", "right", "right", "right", "right", "left"],
    }),
    ...(line.false_alarm === null ? [] : [
      `    false alarm of ${line.false_alarm.against_parts.join(" + ")} over ${
        line.false_alarm.null_parts.join(" + ")
      }: ${
        withError(line.false_alarm.value, line.false_alarm.error)
      } (${line.false_alarm.exceeding} of ${line.false_alarm.trials} trials)`,
    ]),
    `    ${line.verdict}`,
  ]);
}
