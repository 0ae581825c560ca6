// Work on other threads: what it gives, and what is done here when it fails there.
import { assert, assertEquals, assertRejects } from "@std/assert";
import { gather, type LineTask, openSession, workBeside } from "../../engine/campaign/mod.ts";
import { madeExposures } from "../spectra/made_exposures.ts";
import { SECTIONS, writeCampaign } from "./campaign_fixture.ts";

// As sharp as pixels of 50 km/s need, and no sharper: small maps are quick.
const night = await writeCampaign([{ raw: madeExposures({ resolution_angstrom: 2.4 }) }], {
  map: SECTIONS.map!.replace("pixels = 61", "pixels = 41"),
});
const session = await night.open();
const { target } = session;
const gathered = await gather(session, session.lines("test"));
const task = (name: string, line = "H beta"): LineTask => ({ name, target, line, work: "map" });
const here = () => Promise.resolve("made here");

Deno.test("workBeside() gives what another thread made, and makes here what it could not", async () => {
  const beside = workBeside({ workers: 2 });
  beside.start([task("one"), task("two", "H omega")], gathered);
  assertEquals(await beside.take("not started", here), "made here");
  assertEquals(
    await beside.take<unknown>("one", here),
    await session.map(session.lines("test")[0]!),
  );
  await assertRejects(
    () => beside.take("two", () => Promise.reject(new TypeError("no such line"))),
    TypeError,
    "no such line",
  );
});

Deno.test("workBeside() starts nothing for one worker", async () => {
  const beside = workBeside({ workers: 1 });
  beside.start([task("one")], gathered);
  assertEquals(await beside.take("one", here), "made here");
});

Deno.test("openSession() tests several lines at once with two workers, and finds what one finds", async () => {
  const second = '[[lines]]\nname = "shifted"\nair_angstrom = 4862\nreach_kms = 2000\n' +
    "continuum_kms = [[-5000, -2500], [2500, 5000]]\n";
  // Few exposures of little resolution: the tests of a line take a fifth of a second.
  const two = await writeCampaign([{ raw: madeExposures({ resolution_angstrom: 5, count: 12 }) }], {
    lines: `${SECTIONS.lines}${second}`,
  });
  const alone = await two.open();
  const told = new Set<string>();
  const many = openSession(alone.target, {
    workers: 2,
    progress: (_done, _total, what) => told.add(what),
  });
  for (const line of alone.lines("test")) {
    assertEquals(await many.anyMap(line), await alone.anyMap(line));
  }
  assert(told.has("lines tested"));
});
