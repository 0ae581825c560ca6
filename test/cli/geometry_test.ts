import { assertAlmostEquals, assertEquals, assertStringIncludes } from "@std/assert";
import { runMillrace } from "./run_millrace.ts";

Deno.test("millrace geometry prints one JSON document", async () => {
  const { code, stdout, stderr } = await runMillrace([
    "geometry",
    "--mass-ratio",
    "0.2",
    "--k-donor-kms",
    "400",
    "--json",
  ]);
  assertEquals(code, 0, stderr);
  assertEquals(stderr, "");
  const geometry = JSON.parse(stdout);
  assertEquals(geometry.schema, "geometry/1");
  assertAlmostEquals(geometry.k_accretor_kms, 80, 1e-9);
  // test/reference/roche.json holds the numbers; the engine's tests compare them.
  assertAlmostEquals(geometry.lobe_radius_eggleton_over_a, 0.2518, 1e-3);
});

Deno.test("millrace geometry draws a picture and refuses what is not enough", async () => {
  const good = await runMillrace(["geometry", "--mass-ratio", "0.2", "--k-donor-kms", "400"]);
  assertEquals(good.code, 0);
  assertStringIncludes(good.stdout, "K1 (accretor)");
  assertStringIncludes(good.stdout, "D");
  const bad = await runMillrace(["geometry", "--k-donor-kms", "300", "--json"]);
  assertEquals([bad.code, bad.stdout], [2, ""]);
  assertStringIncludes(
    bad.stderr,
    "Cannot build binary as mass_ratio, k_accretor_kms do not follow",
  );
});

Deno.test("millrace geometry and new refuse the common options that they have no use for", async () => {
  const cases: [string[], string][] = [
    [
      ["geometry", "--mass-ratio", "0.2", "--set", "binary.mass_ratio=0.5"],
      'millrace: Cannot describe geometry as the binary is given by options such as --mass-ratio, not by a target file, so --set has no meaning: current value is "binary.mass_ratio=0.5"; leave it out\n',
    ],
    [
      ["geometry", "--mass-ratio", "0.2", "--workers", "2"],
      "millrace: Cannot describe geometry as it is done at once on one thread, so --workers has no meaning: current value is 2; leave it out\n",
    ],
    [
      ["new", ".", "--seed", "2"],
      "millrace: Cannot start a target file as there is no chance in it, so --seed has no meaning: current value is 2; leave it out\n",
    ],
    [
      ["new", ".", "--set", "seed=2"],
      'millrace: Cannot start a target file as its settings are filled in by hand, so --set has no meaning: current value is "seed=2"; leave it out\n',
    ],
  ];
  for (const [args, message] of cases) {
    const { code, stdout, stderr } = await runMillrace(args);
    assertEquals([code, stdout, stderr], [2, "", message]);
  }
});

Deno.test("millrace names the nearest command and prints help", async () => {
  const wrong = await runMillrace(["geometri"]);
  assertEquals(wrong.code, 2);
  assertStringIncludes(wrong.stderr, "Did you mean geometry?");
  const help = await runMillrace(["--help"]);
  assertEquals([help.code, help.stderr], [0, ""]);
  const own = await runMillrace(["geometry", "--help"]);
  assertEquals([own.code, own.stderr], [0, ""]);
  assertStringIncludes(own.stdout, "--mass-ratio");
  const none = await runMillrace([]);
  assertEquals(none.code, 2);
});
