/**
 * The target file, the steps of the commands, and how a run is recorded.
 *
 * @module
 */
export * from "./new_target.ts";
export * from "./output_head.ts";
export * from "./override.ts";
export * from "./target.ts";
export * from "./toml_document.ts";
export * from "./version.ts";
export type { BinarySettings } from "./schema/binary_section.ts";
export type { ExposuresSettings } from "./schema/exposures_section.ts";
export type { BlendSettings, LineSettings, TogetherSettings } from "./schema/lines_section.ts";
export type { MapSettings, RegionSettings } from "./schema/map_section.ts";
export type { ArmSettings, ObservationSettings } from "./schema/observation_section.ts";
export type { OrbitSettings } from "./schema/orbit_section.ts";
export type {
  PlatePanelSettings,
  PlateRowSettings,
  PlateSettings,
} from "./schema/plate_section.ts";
export type { SkySettings } from "./schema/sky_section.ts";
export type { TargetSettings } from "./schema/target_schema.ts";
export type { TrailSettings } from "./schema/trail_section.ts";
export type { WeighSettings } from "./schema/weigh_section.ts";
export * from "./beside.ts";
export * from "./demo.ts";
export * from "./ephemeris_of.ts";
export * from "./binary_of.ts";
export type { JoinedLine } from "./join_trails.ts";
export * from "./line_of.ts";
export type { LineTask, LineVerdict } from "./line_worker.ts";
export * from "./map_line.ts";
export * from "./read_target_exposures.ts";
export * from "./session.ts";
export * from "./simulate.ts";
export type { CheckedContent } from "./steps/check_contents.ts";
export type { LineCheck } from "./steps/line_check.ts";
export type { EphemerisCheck } from "./steps/check_ephemeris.ts";
export type { ZeroCheck } from "./steps/check_zeros.ts";
export * from "./steps/run_check.ts";
export * from "./steps/run_map.ts";
export * from "./steps/run_orbit.ts";
export * from "./steps/run_plate.ts";
export * from "./steps/run_profile.ts";
export * from "./steps/run_synth.ts";
export * from "./steps/run_trail.ts";
export * from "./steps/run_weigh.ts";
export * from "./steps/step.ts";
export type { LineBlend } from "./blends_of.ts";
export type { Baselines } from "./inversion/baselines.ts";
export type { OwnMap } from "./inversion/by_separate_maps.ts";
export type { MappedBlend } from "./inversion/fit_ratios.ts";
export type { InvertedLine } from "./inversion/invert_line.ts";
export type { Inverted, LineSign } from "./inversion/inverted.ts";
export type { Modulation, RegionStudy } from "./studies/modulation_study.ts";
export type { CycleSlip } from "./studies/cycle_slips.ts";
export type { ScanStudy } from "./studies/scan_study.ts";
export type { FeatureThere, Sensitivity, SensitivityPart } from "./studies/sensitivity_study.ts";
export type { FeatureStudy, Structures } from "./studies/structures_study.ts";
export * from "./systemic_of.ts";
export type { LineTests, LineTestsSummary } from "./test_line.ts";
export * from "./batch/batch_jobs.ts";
export * from "./batch/gather_batch.ts";
export * from "./batch/gather_job.ts";
export type { GatheredRows } from "./batch/gather_rows.ts";
export type { SummaryRow } from "./batch/summary_tables.ts";
export * from "./batch/manifest.ts";
export * from "./batch/run_batch.ts";
export * from "./batch/run_job.ts";
export * from "./batch/share_jobs.ts";
export * from "./canonical.ts";
export * from "./hold_folder.ts";
export * from "./input_digests.ts";
export * from "./provenance.ts";
export * from "./record_step.ts";
export * from "./step_table.ts";
export type { GroupZero } from "./wavelength_zeros.ts";
export type {
  ManifestChange,
  ManifestSettings,
  ManifestVariant,
  SamplePanel,
  SamplePlateSettings,
} from "./schema/manifest_schema.ts";
export * from "./redo_run.ts";
export * from "./batch/share_step.ts";
