import { InputError } from "../errors.ts";
import type { OneDecision } from "./decision.ts";
import { type Facts, firstFact } from "./facts.ts";
import type { WavelengthFrame, WavelengthMedium } from "./read_options.ts";

const FRAMES: Readonly<Record<string, WavelengthFrame>> = {
  TOPOCENT: "topocentric",
  GEOCENTR: "topocentric",
  HELIOCEN: "heliocentric",
  BARYCENT: "barycentric",
};

/**
 * Decides in which frame wavelengths are: SPECSYS, then keys that say that a correction was applied.
 * When nothing is said they are taken as the telescope wrote them.
 *
 * @param facts The facts of an exposure.
 * @param asked The frame, where it is known better; else "auto".
 * @returns The frame and what was decided.
 * @throws {InputError} When SPECSYS names a frame that is not read (local standard of rest, source).
 *
 * @example
 * ```ts
 * import { findFrame, namedFacts } from "@millrace/millrace/spectra";
 * import { assertEquals } from "@std/assert";
 *
 * assertEquals(findFrame(namedFacts([["SPECSYS", "BARYCENT"]]), "auto").frame, "barycentric");
 * ```
 */
export function findFrame(
  facts: Facts,
  asked: "auto" | WavelengthFrame,
): { readonly frame: WavelengthFrame; readonly decision: OneDecision } {
  const what = "wavelength frame";
  const say = (frame: WavelengthFrame, from: string, assumed = false) => ({
    frame,
    decision: { what, value: frame, from, assumed },
  });
  if (asked !== "auto") return say(asked, "wavelength_frame");
  const system = facts.find("SPECSYS");
  if (system !== undefined) {
    const name = system.text.toUpperCase();
    const frame = FRAMES[name];
    if (frame === undefined) {
      throw new InputError({
        action: "read wavelength frame",
        rule: "SPECSYS must be TOPOCENT, GEOCENTR, HELIOCEN or BARYCENT",
        value: system.text,
        key: "SPECSYS",
        remedy: "transform the wavelengths, or state wavelength_frame",
      });
    }
    const rough = name === "GEOCENTR" ? ", taken as topocentric: up to 0.46 km/s off" : "";
    return say(frame, `SPECSYS = '${system.text}'${rough}`, rough !== "");
  }
  const applied = firstFact(facts, [
    "BARYCORR",
    "HELCORR",
    "DOPCOR",
    "VHELIO_A",
    "BARYDONE",
    "HELIODON",
  ]);
  if (applied !== undefined && /^(T|TRUE|YES|DONE|COMPLETE|APPLIED|PERFORM)/i.test(applied.text)) {
    return say(
      /BARY/i.test(applied.key) ? "barycentric" : "heliocentric",
      `${applied.key} = ${applied.text}`,
    );
  }
  return say("topocentric", "no SPECSYS: as the telescope recorded them", true);
}

/**
 * Decides whether wavelengths are in air or in vacuum: what the axis says, then the keys in use.
 * When nothing is said, air: common practice in the optical above 2000 Å, no source.
 *
 * @param facts The facts of an exposure.
 * @param options What is known better; what the axis says; a typical wavelength, Å.
 * @returns The medium and what was decided.
 *
 * @example
 * ```ts
 * import { findMedium, namedFacts } from "@millrace/millrace/spectra";
 * import { assertEquals } from "@std/assert";
 *
 * const options = { asked: "auto", axis: null, wavelength_angstrom: 5000 } as const;
 * assertEquals(findMedium(namedFacts([["AIRORVAC", "vac"]]), options).medium, "vacuum");
 * assertEquals(findMedium(namedFacts([]), options).medium, "air");
 * ```
 */
export function findMedium(
  facts: Facts,
  options: {
    readonly asked: "auto" | WavelengthMedium;
    readonly axis: WavelengthMedium | null;
    readonly wavelength_angstrom: number;
  },
): { readonly medium: WavelengthMedium; readonly decision: OneDecision } {
  const { asked, axis, wavelength_angstrom } = options;
  const say = (medium: WavelengthMedium, from: string, assumed = false) => ({
    medium,
    decision: { what: "wavelength medium", value: medium, from, assumed },
  });
  if (asked !== "auto") return say(asked, "wavelength_medium");
  if (axis !== null) return say(axis, "type of the wavelength axis");
  const stated = firstFact(facts, ["AIRORVAC", "WAVEMED", "VACUUM", "WAVETYPE"]);
  if (stated !== undefined) {
    const from = `${stated.key} = ${stated.text}`;
    if (stated.key === "VACUUM") {
      return say(/^(T|1|Y)/i.test(stated.text) ? "vacuum" : "air", from);
    }
    if (/^vac/i.test(stated.text)) return say("vacuum", from);
    if (/^air/i.test(stated.text)) return say("air", from);
  }
  const said = stated === undefined
    ? "nothing said"
    : `${stated.key} = '${stated.text}' is neither air nor vacuum`;
  return wavelength_angstrom < 2000
    ? say("vacuum", `${said}: vacuum below 2000 angstrom by custom`, true)
    : say("air", `${said}: air in the optical by custom`, true);
}
