import { InputError } from "@millrace/millrace/errors";
import {
  defaultSets,
  hypothesesOf,
  hypothesisName,
  hypothesisOf,
} from "@millrace/millrace/weighing";
import { assertEquals, assertThrows } from "@std/assert";

Deno.test("hypothesisOf() names what is wrong when a set is not one", () => {
  assertThrows(() => hypothesisOf([]), InputError, "at least one part");
  assertThrows(() => hypothesisOf(["disc", "blob"]), InputError, 'current value is "blob"');
  assertThrows(() => hypothesisOf(["disc", "disc"]), InputError, "only once");
  assertThrows(() => hypothesesOf([]), InputError, "at least one set");
});

Deno.test("defaultSets has a disc alone, with spot, stream and both, and each with the donor", () => {
  assertEquals(defaultSets.map(hypothesisName), [
    "disc",
    "disc + spot",
    "disc + stream",
    "disc + spot + stream",
    "disc + donor",
    "disc + spot + donor",
    "disc + stream + donor",
    "disc + spot + stream + donor",
  ]);
});
