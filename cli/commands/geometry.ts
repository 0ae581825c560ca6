import {
  ballisticStream,
  type Binary,
  binaryFrom,
  describeGeometry,
  type Geometry,
  lobeOutlineVelocity,
  streamVelocities,
} from "../../engine/binary/mod.ts";
import { VERSION } from "../../engine/campaign/mod.ts";
import { commandWith, decimalNumber, refuseOptions } from "../common_options.ts";
import { runCommand } from "../run_command.ts";
import { plainNumber, tableLines } from "../terminal/table.ts";
import { scatterLines } from "../terminal/scatter.ts";

/**
 * `millrace geometry`: lobe, L1, stream and disc velocities of a binary given by a few numbers.
 *
 * @param finish Takes the exit status.
 * @returns The command.
 */
export function geometryCommand(finish: (status: number) => void) {
  return commandWith("geometry", "lobe, stream and disc velocities of a binary given by numbers")
    .option("--mass-ratio <q>", "M2/M1, donor over accretor", decimalNumber)
    .option("--k-donor-kms <n>", "projected orbital speed of the donor", decimalNumber)
    .option("--k-accretor-kms <n>", "projected orbital speed of the accretor", decimalNumber)
    .option("--inclination-deg <n>", "inclination", decimalNumber)
    .option("--period-d <n>", "orbital period", decimalNumber)
    .option("--mass-accretor-msun <n>", "mass of the accretor", decimalNumber)
    .option("--mass-donor-msun <n>", "mass of the donor", decimalNumber)
    .option("--separation-rsun <n>", "separation of the centres", decimalNumber)
    .action(async (options) => {
      finish(
        await runCommand(options, () => {
          refuseOptions(options, {
            action: "describe geometry",
            out: "it writes to the terminal alone",
            set: "the binary is given by options such as --mass-ratio, not by a target file",
            seed: "there is no chance in it",
            workers: "it is done at once on one thread",
          });
          const given = {
            mass_ratio: options.massRatio,
            k_donor_kms: options.kDonorKms,
            k_accretor_kms: options.kAccretorKms,
            inclination_deg: options.inclinationDeg,
            period_d: options.periodD,
            mass_accretor_msun: options.massAccretorMsun,
            mass_donor_msun: options.massDonorMsun,
            separation_rsun: options.separationRsun,
          };
          const count = Object.values(given).filter((value) => value !== undefined).length;
          const shapeOnly = given.mass_ratio !== undefined && count === 1;
          const binary = shapeOnly ? null : binaryFrom(given);
          const geometry = describeGeometry(binary ?? { mass_ratio: given.mass_ratio! });
          return Promise.resolve({
            document: { schema: "geometry/1", version: VERSION, warnings: [], ...geometry },
            lines: [...table(geometry), ...(binary === null ? [] : picture(binary))],
            files: [],
            warnings: [],
          });
        }),
      );
    });
}

function table(geometry: Geometry): string[] {
  const g = geometry;
  const rows: [string, number | null, string][] = [
    ["mass ratio M2/M1", g.mass_ratio, ""],
    ["L1 from the accretor", g.l1_over_a, "a"],
    ["L2 from the accretor (beyond the donor)", g.l2_over_a, "a"],
    ["L3 from the accretor", g.l3_over_a, "a"],
    ["donor's lobe, radius by volume", g.lobe_radius_over_a, "a"],
    ["donor's lobe, Eggleton (1983)", g.lobe_radius_eggleton_over_a, "a"],
    ["accretor's lobe, radius by volume", g.accretor_lobe_radius_over_a, "a"],
    ["stream: closest approach", g.closest_approach_over_a, "a"],
    ["circularisation radius, the stream's own", g.circularisation_radius_over_a, "a"],
    ["circularisation radius from L1", g.circularisation_radius_from_l1_over_a, "a"],
    ["tidal limit of the disc", g.tidal_radius_over_a, "a"],
    ["3:1 resonance", g.resonance_radius_over_a, "a"],
    ["K1 (accretor)", g.k_accretor_kms, "km/s"],
    ["K2 (donor)", g.k_donor_kms, "km/s"],
    ["inclination", g.inclination_deg, "deg"],
    ["period", g.period_d, "d"],
    ["mass of the accretor", g.mass_accretor_msun, "Msun"],
    ["mass of the donor", g.mass_donor_msun, "Msun"],
    ["separation", g.separation_rsun, "Rsun"],
    ["donor's radius", g.donor_radius_rsun, "Rsun"],
    ["donor's mean density", g.donor_density_g_cm3, "g/cm3"],
    ["donor's v sin i", g.donor_v_sin_i_kms, "km/s"],
    ["Keplerian speed at the tidal limit", g.tidal_speed_kms, "km/s"],
    ["Keplerian speed at circularisation", g.circularisation_speed_kms, "km/s"],
    ["stream at the tidal limit, Vx", g.tidal_impact_stream?.vx_kms ?? null, "km/s"],
    ["stream at the tidal limit, Vy", g.tidal_impact_stream?.vy_kms ?? null, "km/s"],
    ["Keplerian at that impact, Vx", g.tidal_impact_keplerian?.vx_kms ?? null, "km/s"],
    ["Keplerian at that impact, Vy", g.tidal_impact_keplerian?.vy_kms ?? null, "km/s"],
  ];
  return tableLines(
    rows.filter(([, value]) => value !== null).map(([name, value, unit]) => [
      name,
      plainNumber(value),
      unit,
    ]),
    { align: ["left", "right"] },
  );
}

function picture(binary: Binary): string[] {
  const lobe = lobeOutlineVelocity(binary, {});
  const path = streamVelocities(ballisticStream(binary.mass_ratio, {}), binary);
  const pairs = (vx: ArrayLike<number>, vy: ArrayLike<number>) =>
    Array.from(vx, (x, i) => [x, vy[i]!] as const);
  const outline = pairs(lobe.vx_kms, lobe.vy_kms);
  const stream = pairs(path.vx_kms, path.vy_kms);
  const all = [...outline, ...stream, [0, -binary.k_accretor_kms] as const];
  const limits = (axis: 0 | 1): [number, number] => [
    Math.min(...all.map((point) => point[axis])) - 30,
    Math.max(...all.map((point) => point[axis])) + 30,
  ];
  return [
    "",
    "  velocity plane: the donor's lobe (D), the stream from it, accretor (A), centre of mass (+)",
    "  Vx to the right, Vy upwards",
    ...scatterLines([
      { points: outline, joined: true },
      { points: stream, joined: true },
      { points: [[0, binary.k_donor_kms]], letter: "D" },
      { points: [[0, -binary.k_accretor_kms]], letter: "A" },
      { points: [[0, 0]], letter: "+" },
    ], { x: limits(0), y: limits(1), width: 42 }).map((line) => `  ${line}`),
  ];
}
