import { assertEquals } from "@std/assert";
import { summaryColumns } from "../../engine/campaign/batch/summary_columns.ts";

/** The verdict column of a weighing with these keys. */
function verdict(line: Readonly<Record<string, unknown>>): unknown {
  const run = {
    name: "a",
    title: "A",
    path: "a.toml",
    variant: null,
    folder: "a",
    status: "done",
    error: null,
    steps: [],
    lines: ["H beta"],
    warnings: [],
    files: [],
  } as const;
  const documents = { weigh: { lines: [{ line: "H beta", contest: null, ...line }] } };
  return summaryColumns.find(({ name }) => name === "verdict")!
    .value({ run, line: "H beta", documents });
}

const preferred = ["disc", "spot"];
const hypotheses = [{ parts: preferred, adequate: true }, { parts: ["disc"], adequate: false }];

Deno.test("the summary's verdict names the sets that the data do not tell apart", () => {
  const contest = { leader: preferred, decided: false, rival_true: { exceeding: 3 } };
  const undecided_with = ["disc", "stream"];
  assertEquals(verdict({ preferred, undecided_with, contest }), "disc+spot or disc+stream");
  // The leader by chi-square is the other one.
  const behind = { leader: undecided_with, decided: false, rival_true: { exceeding: 0 } };
  assertEquals(
    verdict({ preferred, undecided_with, contest: behind }),
    "disc+spot or disc+stream",
  );
});

Deno.test("the summary's verdict blames too few trials where none spoke for the rival", () => {
  const contest = { leader: preferred, decided: false, rival_true: { exceeding: 0 } };
  for (const [undecided_with, held] of [[["disc", "stream"], contest], [["disc"], null]]) {
    assertEquals(
      verdict({ preferred, undecided_with, contest: held }),
      "disc+spot, too few trials",
    );
  }
});

Deno.test("the summary's verdict tells what is settled, what no set explains, what was not weighed", () => {
  assertEquals(verdict({ preferred, undecided_with: null }), "disc+spot");
  assertEquals(verdict({ preferred: [], hypotheses }), "undecided");
  assertEquals(verdict({ preferred: [], hypotheses: hypotheses.slice(1) }), "outside");
  assertEquals(verdict({}), null);
});
