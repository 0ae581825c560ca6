/**
 * Millrace: from time-resolved spectra of accreting binaries to trails, velocity maps, orbits,
 * weighed models and figures. Here are the nouns and the arrows between them; each room of the
 * engine has an entry of its own with the rest, as in `@millrace/millrace/tomography`.
 *
 * @example From files to a map
 * ```ts
 * import { backProject, ephemerisFrom, makeTrail, readExposures, type VelocityMap } from "@millrace/millrace";
 * import { lineNamed } from "@millrace/millrace/sky";
 *
 * async function mapOf(files: readonly string[]): Promise<VelocityMap> {
 *   const ephemeris = ephemerisFrom({ period_d: 0.0823714, zero_bjd_tdb: 2460311.62107 });
 *   const { spectra } = await readExposures(files, { resolution_angstrom: 1.2 });
 *   const trail = makeTrail(spectra, { line: lineNamed("H beta"), ephemeris });
 *   return backProject(trail, { pixels: 151, half_width_kms: 2000, systemic_kms: 0 });
 * }
 * ```
 *
 * @module
 */
export * from "./engine/errors.ts";
export { type Binary, binaryFrom, type Ephemeris, ephemerisFrom } from "./engine/binary/mod.ts";
export { readExposures, type Spectrum } from "./engine/spectra/mod.ts";
export { makeTrail, type Sampling, type Trail } from "./engine/trail/mod.ts";
export {
  backProject,
  makeProjector,
  maximumEntropy,
  type VelocityMap,
} from "./engine/tomography/mod.ts";
export { type Model, synthesize } from "./engine/synthesis/mod.ts";
export { measureOrbit } from "./engine/orbit/mod.ts";
export { weighTrail } from "./engine/weighing/mod.ts";
