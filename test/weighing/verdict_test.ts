import {
  type Calibration,
  type Contest,
  type Hypothesis,
  type Judgement,
  type WeighedHypothesis,
} from "@millrace/millrace/weighing";
import { assertEquals, assertMatch, assertNotMatch, assertStringIncludes } from "@std/assert";
import { verdictOf } from "../../engine/weighing/verdict.ts";

const DISC: Hypothesis = ["disc"];
const SPOT: Hypothesis = ["disc", "spot"];
const STREAM: Hypothesis = ["disc", "stream"];

function best(parts: Hypothesis, adequate = true): WeighedHypothesis {
  const test = (probability: number) => ({ statistic: 0, dof: null, probability });
  return {
    parts,
    adequate,
    misfit_fraction: adequate ? 0 : 0.123,
    residual_tests: {
      chi_square: test(0.5),
      profile: test(adequate ? 0.5 : 1e-9),
      phase: test(0.5),
      velocity_correlation: test(0.5),
      phase_correlation: test(0.5),
    },
  } as WeighedHypothesis;
}

function rate(
  exceeding: number,
  null_parts: Hypothesis,
  against_parts: Hypothesis,
  trials = 200,
): Calibration {
  const value = (exceeding + 1) / (trials + 1);
  return {
    null_parts,
    against_parts,
    observed: 30,
    value,
    error: Math.sqrt(value * (1 - value) / (trials + 1)),
    trials,
    exceeding,
    stopping_points: [trials],
    table: { key: "", first: 0, statistics: new Float64Array(0) },
  };
}

function judgement(parts: Partial<Judgement> & Pick<Judgement, "best">): Judgement {
  return { part_tests: [], contest: null, ...parts };
}

const needed = {
  part: "spot",
  needed: true,
  unsettled: false,
  calibration: rate(0, DISC, SPOT),
};

Deno.test("verdictOf() says at most what the number of trials allows when a part is needed", () => {
  const { sentence, preferred, false_alarm } = verdictOf(
    judgement({ best: best(SPOT), part_tests: [needed] }),
  );
  assertEquals(preferred, SPOT);
  assertEquals(false_alarm?.value, 1 / 201);
  assertStringIncludes(sentence, "at most 0.5 % of cases (none of 200 trials)");
  assertNotMatch(sentence, /σ|sigma|certain|proves|certainly/);
});

Deno.test("verdictOf() leaves a part open when no trial gained as much but they are too few", () => {
  const calibration = rate(0, DISC, SPOT, 20);
  const { sentence, preferred, undecided_with, false_alarm } = verdictOf(
    judgement({
      best: best(SPOT),
      part_tests: [{ part: "spot", needed: false, unsettled: true, calibration }],
    }),
  );
  assertEquals([preferred, undecided_with], [SPOT, DISC]);
  assertEquals(false_alarm?.value, 1 / 21);
  assertStringIncludes(sentence, "too few to call the spot needed");
  assertStringIncludes(sentence, "at most 4.8 % of cases (none of 20 trials); 99 trials could");
  assertNotMatch(sentence, /ask for/);
});

Deno.test("verdictOf() prefers no set when none explains the data", () => {
  const { sentence, preferred } = verdictOf(
    judgement({ best: best(SPOT, false), part_tests: [needed] }),
  );
  assertEquals(preferred, []);
  assertStringIncludes(sentence, "outside these hypotheses");
  assertStringIncludes(sentence, "magnetic accretion and winds");
  assertStringIncludes(sentence, "the mean profile");
  assertStringIncludes(sentence, "no proof of its parts");
});

Deno.test("verdictOf() leaves spot and stream open when either would do", () => {
  const contest: Contest = {
    leader: SPOT,
    rival: STREAM,
    rival_true: rate(30, STREAM, SPOT),
    leader_true: rate(90, SPOT, STREAM),
    decided: false,
  };
  const { sentence, preferred, undecided_with } = verdictOf(
    judgement({ best: best(SPOT), part_tests: [needed], contest }),
  );
  assertEquals([preferred, undecided_with], [SPOT, STREAM]);
  assertMatch(sentence, /do not tell a disc and a spot from a disc and a stream/);
  assertStringIncludes(sentence, "15 ± 2.5 % of cases (30 of 200 trials)");
});

Deno.test("verdictOf() takes neither when both fail their own trials", () => {
  const contest: Contest = {
    leader: SPOT,
    rival: STREAM,
    rival_true: rate(0, STREAM, SPOT),
    leader_true: rate(0, SPOT, STREAM),
    decided: false,
  };
  const { sentence, preferred } = verdictOf(judgement({ best: best(SPOT), contest }));
  assertEquals(preferred, []);
  assertMatch(sentence, /^Neither/);
});

Deno.test("verdictOf() turns seeing nothing into a number when there is a limit", () => {
  const doubtful = {
    part: "spot",
    needed: false,
    unsettled: false,
    calibration: rate(85, DISC, SPOT),
  };
  const limit = {
    cells: 1,
    half_width_kms: 975,
    sigma_kms: 60,
    false_alarm: 0.01,
    threshold: 4,
    threshold_error: 0.1,
    trials: 200,
    fraction_50: [0.002],
    fraction_95: [0.00312],
    fraction_95_error: [0.0001],
  };
  const { sentence, preferred, false_alarm } = verdictOf(
    judgement({ best: best(DISC), part_tests: [doubtful] }),
    { limit },
  );
  assertEquals(preferred, DISC);
  assertEquals(false_alarm?.exceeding, 85);
  assertStringIncludes(sentence, "nothing beyond a disc");
  assertStringIncludes(sentence, "43 ± 3.5 % of cases");
  assertStringIncludes(sentence, "0.31 % of the light or more, anywhere within 975 km/s");
});

Deno.test("verdictOf() says which part is not established by itself", () => {
  const donor = {
    part: "donor",
    needed: false,
    unsettled: false,
    calibration: rate(9, SPOT, ["disc", "spot", "donor"]),
  };
  const spot = {
    part: "spot",
    needed: true,
    unsettled: false,
    calibration: rate(0, ["disc", "donor"], ["disc", "spot", "donor"]),
  };
  const { sentence } = verdictOf(
    judgement({ best: best(["disc", "spot", "donor"]), part_tests: [spot, donor] }),
  );
  assertStringIncludes(sentence, "Not established by itself: the donor");
});
