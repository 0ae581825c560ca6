import { assertEquals, assertThrows } from "@std/assert";
import { InputError } from "../../engine/errors.ts";
import { needed, overrideSetting, parseTarget } from "../../engine/campaign/mod.ts";

const GOOD = `format = 1
title = "VX-0417"

[orbit]
period_d = 0.0823714
zero_bjd_tdb = 2460311.62107

[[exposures]]
files = ["night1/*.fits"]

[[lines]]
name = "H beta"
`;

// Every wrong target file with its whole message.
const WRONG: readonly (readonly [name: string, text: string, message: string])[] = [
  [
    "an unknown key",
    GOOD.replace("period_d", "perid_d"),
    'Cannot read target file as key "perid_d" is not known in [orbit] (star.toml:5:1, key orbit.perid_d); the nearest known key is "period_d"',
  ],
  [
    "an unknown section",
    GOOD.replace("[orbit]", "[orbits]"),
    'Cannot read target file as key "orbits" is not known in the target file (star.toml:4:1, key orbits); the nearest known key is "orbit"',
  ],
  [
    "an unknown key in a list of tables",
    GOOD.replace('name = "H beta"', 'name = "H beta"\nreach = 2500'),
    'Cannot read target file as key "reach" is not known in [lines[0]] (star.toml:13:1, key lines[0].reach); the nearest known key is "reach_kms"',
  ],
  [
    "a wrong type",
    GOOD.replace("0.0823714", '"0.08"'),
    'Cannot read target file as period_d must be a number: current value is "0.08" (star.toml:5:1, key orbit.period_d)',
  ],
  [
    "a period of zero",
    GOOD.replace("0.0823714", "0"),
    "Cannot read target file as period_d must be greater than 0: current value is 0 d (star.toml:5:1, key orbit.period_d)",
  ],
  [
    "a negative period",
    GOOD.replace("0.0823714", "-0.1"),
    "Cannot read target file as period_d must be greater than 0: current value is -0.1 d (star.toml:5:1, key orbit.period_d)",
  ],
  [
    "an infinite number",
    GOOD.replace("0.0823714", "inf"),
    "Cannot read target file as period_d must be finite: current value is Infinity d (star.toml:5:1, key orbit.period_d)",
  ],
  [
    "an unknown word",
    GOOD + '\n[map]\nmethod = "entrpy"\n',
    'Cannot read target file as method must be one of "back-projection", "entropy", "total-variation": current value is "entrpy" (star.toml:15:1, key map.method); the nearest is "entropy"',
  ],
  [
    "an even number of pixels",
    GOOD + "\n[map]\npixels = 100\n",
    "Cannot read target file as pixels must be odd, so that one pixel is at (0, 0): current value is 100 (star.toml:15:1, key map.pixels)",
  ],
  [
    "two zeros of phase",
    GOOD.replace("zero_bjd_tdb", "zero_hjd_utc = 2460311.5\nzero_bjd_tdb"),
    "Cannot read target file as zero_hjd_utc must not stand beside zero_bjd_tdb: give the zero of phase once: current value is 2460311.5 (star.toml:6:1, key orbit.zero_hjd_utc)",
  ],
  [
    "an empty list of files",
    GOOD.replace('["night1/*.fits"]', "[]"),
    "Cannot read target file as files must have at least 1 item: current value is [] (star.toml:9:1, key exposures[0].files)",
  ],
  [
    "a decreasing range",
    GOOD + "\n[trail]\nskip_phases = [[0.1, -0.1]]\n",
    "Cannot read target file as skip_phases[0] must be two increasing numbers: current value is [0.1,-0.1] (star.toml:15:16, key trail.skip_phases[0])",
  ],
  [
    "a missing format",
    GOOD.replace("format = 1", ""),
    "Cannot read target file as format must be 1 (star.toml, key format)",
  ],
  [
    "a syntax error",
    GOOD.replace("0.0823714", ""),
    "Cannot read target file as it is not valid TOML: unexpected character (star.toml:6:1)",
  ],
  [
    "a duplicate key",
    GOOD.replace("[[exposures]]", "period_d = 0.1\n\n[[exposures]]"),
    "Cannot read target file as it is not valid TOML: defining a key multiple times is invalid (star.toml:8:1)",
  ],
  [
    "a baseline that no fit frees",
    GOOD + "\n[map]\nbaseline = true\n",
    "Cannot read target file as baseline must not be free in a back-projection, which is no fit: set map.method to entropy or total-variation: current value is true (star.toml:15:1, key map.baseline)",
  ],
  [
    "a weight of another inversion",
    GOOD + '\n[map]\nmethod = "entropy"\nweight = "noise"\n',
    'Cannot read target file as weight is for map.method = "total-variation" alone: current value is "noise" (star.toml:16:1, key map.weight)',
  ],
  [
    "a sensitivity of what is not fitted",
    GOOD + "\n[map]\nsensitivity = true\n",
    "Cannot read target file as sensitivity needs a map that is fitted to a χ²: set map.method to entropy or total-variation: current value is true (star.toml:15:1, key map.sensitivity)",
  ],
  [
    "coordinates of another inversion",
    GOOD + '\n[map]\ncoordinates = "inside-out"\n',
    'Cannot read target file as coordinates is for map.method = "entropy" alone: current value is "inside-out" (star.toml:15:1, key map.coordinates)',
  ],
  [
    "a region without a radius",
    GOOD + "\n[map]\nregions = [{ vx_kms = 0, vy_kms = 300 }]\n",
    "Cannot read target file as radius_kms must be given (star.toml:15:12, key map.regions[0].radius_kms)",
  ],
  [
    "a sign that is none",
    GOOD.replace('name = "H beta"', 'name = "H beta"\nsign = "both"'),
    'Cannot read target file as sign must be one of "auto", "emission", "absorption", "mixed": current value is "both" (star.toml:13:1, key lines[0].sign); the nearest is "auto"',
  ],
];

for (const [name, text, message] of WRONG) {
  Deno.test(`parseTarget() names place and rule of ${name}`, () => {
    const error = assertThrows(() => parseTarget(text, { file: "star.toml" }), InputError);
    assertEquals(error.message, message);
  });
}

Deno.test("parseTarget() fills defaults and keeps the digest whatever the order of keys", () => {
  const target = parseTarget(GOOD, { file: "folder/star.toml" });
  assertEquals(target.name, "star");
  assertEquals(target.settings.orbit.zero_marks, "donor-conjunction");
  assertEquals(target.settings.lines[0]!.reach_kms, 2500);
  const swapped = GOOD.replace(
    "period_d = 0.0823714\nzero_bjd_tdb = 2460311.62107",
    "zero_bjd_tdb = 2460311.62107\nperiod_d = 0.0823714 # same",
  );
  assertEquals(parseTarget(swapped).settings_digest, target.settings_digest);
  const other = parseTarget(GOOD, { set: ["map.pixels=99"] });
  assertEquals(other.settings_digest === target.settings_digest, false);
});

Deno.test("parseTarget() applies --set by the same schema", () => {
  const target = parseTarget(GOOD, {
    set: ["map.pixels=99", "map.method=entropy", "lines[0].reach_kms=1500", 'title="B"'],
    seed: 7,
  });
  assertEquals(target.settings.map.pixels, 99);
  assertEquals(target.settings.map.method, "entropy");
  assertEquals(target.settings.lines[0]!.reach_kms, 1500);
  assertEquals(target.settings.title, "B");
  assertEquals(target.settings.seed, 7);
  const error = assertThrows(() => parseTarget(GOOD, { set: ["map.pixels=two"] }), InputError);
  assertEquals(
    error.message,
    'Cannot read target file as pixels must be a number: current value is "two" (--set, key map.pixels)',
  );
});

Deno.test("overrideSetting() refuses what is not an assignment and leaves its input alone", () => {
  const document = Object.freeze({ map: Object.freeze({ pixels: 3 }) });
  assertEquals(overrideSetting(document, "map.pixels=5").value, { map: { pixels: 5 } });
  assertEquals(document.map.pixels, 3);
  assertThrows(
    () => overrideSetting(document, "map.pixels"),
    InputError,
    "Cannot apply --set as it must read section.key=value",
  );
  assertThrows(
    () => overrideSetting(document, "lines[2].name=x"),
    InputError,
    "the target file has no lines",
  );
});

Deno.test("needed() names the missing key and the file", () => {
  const target = parseTarget("format = 1\n", { file: "star.toml" });
  const error = assertThrows(
    () =>
      needed(target, {
        value: target.settings.orbit.period_d,
        key: "orbit.period_d",
        action: "fold the spectra",
      }),
    InputError,
  );
  assertEquals(
    error.message,
    "Cannot fold the spectra as the target file must give orbit.period_d (star.toml); add it to the file, or give it with --set",
  );
});
