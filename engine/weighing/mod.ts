/**
 * Weighing hypotheses against each other in data space, with error rates that are measured by
 * simulation: fit, compare, calibrate, and say what follows.
 *
 * @module
 */
export * from "./block_bootstrap.ts";
export { calibrate, type CalibrateOptions, type Calibration, runNullTable } from "./calibrate.ts";
export {
  compareHypotheses,
  type Comparison,
  type WeighedHypothesis,
} from "./compare_hypotheses.ts";
export type { SearchCell, SearchGrid } from "./compact_search.ts";
export * from "./compact_source.ts";
export * from "./compact_trail.ts";
export {
  type DetectionLimit,
  detectionLimit,
  type DetectionLimitOptions,
  type DetectionSearch,
} from "./detection_limit.ts";
export type { FitErrors } from "./fit_errors.ts";
export { fitHypothesis, type FitOptions, type HypothesisFit } from "./fit_hypothesis.ts";
export * from "./fit_setup.ts";
export type { FittedValues } from "./fitted_values.ts";
export * from "./free_parameters.ts";
export * from "./hypothesis.ts";
export type { Contest, Judgement, PartTest } from "./judge.ts";
export { lineOf, partLines } from "./line_of.ts";
export type { LineScale } from "./line_scale.ts";
export { type NoiseBank, noiseBank } from "./noise_bank.ts";
export * from "./null_table.ts";
export type { ParameterState } from "./parameter_state.ts";
export { fitPair, type PairFit, type TrialJob, trialJob } from "./pair_trials.ts";
export { type PreparedProblem, type PrepareOptions, prepareProblem } from "./prepare_problem.ts";
export {
  type Evaluation,
  makeProblem,
  type Problem,
  type ProblemOptions,
  type ScanCandidate,
  type ScanPlace,
} from "./problem.ts";
export type { Ring, RingTable } from "./ring_table.ts";
export * from "./profile_likelihood.ts";
export {
  isAdequate,
  type ResidualTest,
  type ResidualTests,
  residualTests,
} from "./residual_tests.ts";
export * from "./sets_to_weigh.ts";
export * from "./simulate_trail.ts";
export * from "./structure_bands.ts";
export { placeErrors, type StructureErrors, type UncertainPlace } from "./structure_errors.ts";
export * from "./structure_probabilities.ts";
export type { PartTemplates, TemplateStore } from "./templates.ts";
export type { Verdict } from "./verdict.ts";
export * from "./weigh_plate.ts";
export * from "./weigh_record.ts";
export * from "./weigh_trail.ts";
export * from "./weighing_data.ts";
export * from "./whitening.ts";
