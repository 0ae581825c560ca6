import { assert, assertEquals, assertStringIncludes, assertThrows } from "@std/assert";
import { join } from "@std/path";
import { InputError } from "@millrace/millrace/errors";
import { formatEcsv, parseEcsv, writtenByMillrace } from "@millrace/millrace/files";
import type { EcsvTable } from "@millrace/millrace/files";
import { inFolder, isAvailable } from "./support.ts";

const astropy = isAvailable("/usr/bin/python3", ["-c", "import astropy.table"]);

const table: EcsvTable = {
  columns: [
    {
      name: "source",
      datatype: "string",
      description: "it's: the {file}",
      values: ["a, b.fits", 'say "hi"', null, "  lead", "#4"],
    },
    {
      name: "velocity",
      datatype: "float64",
      unit: "km / s",
      format: ".2f",
      values: [0.1, -1e-300, null, NaN, -Infinity],
    },
    { name: "single", datatype: "float32", values: Float32Array.from([0.1, 1 / 3, 2, -0, 1e10]) },
    { name: "count", datatype: "int64", values: [1, -2, null, 9007199254740993n, 0] },
    { name: "good", datatype: "bool", values: [true, false, null, true, false] },
    {
      name: "triple x",
      datatype: "string",
      subtype: "float64[2]",
      values: [[1, 2], [0.5, -1], [3, 4], [5, 6], [7, 8]],
    },
  ],
  meta: { schema: "velocities/1", target: "VX-0417", lines: ["H beta", "He II 4686"], step: 1e-5 },
};

for (const delimiter of [",", " "] as const) {
  Deno.test(`formatEcsv() is undone by parseEcsv() when cells are parted by "${delimiter}"`, () => {
    const before = structuredClone(table);
    const back = parseEcsv(formatEcsv(table, { delimiter }));
    assertEquals(table, before);
    assertEquals(back.meta, { creator: "Millrace", ...table.meta });
    back.columns.forEach((column, index) => {
      const expected = table.columns[index]!;
      const values = Array.from(expected.values);
      if (expected.datatype === "float32") {
        assertEquals(
          Array.from(column.values, (value) => Math.fround(value as number)),
          values.map((value) => Math.fround(value as number)),
        );
      } else assertEquals(Array.from(column.values), values);
      assertEquals({ ...column, values: [] }, { ...expected, values: [] });
    });
  });
}

Deno.test({
  name: "formatEcsv() is read by astropy, whatever parts the cells",
  ignore: !astropy,
  fn: () =>
    inFolder(async (folder) => {
      const paths = [",", " "].map((delimiter, k) => {
        const path = join(folder, `${k}.ecsv`);
        Deno.writeTextFileSync(path, formatEcsv(table, { delimiter: delimiter as "," | " " }));
        return path;
      });
      const script = `
import sys
from astropy.table import Table
for path in sys.argv[1:]:
    t = Table.read(path, format="ascii.ecsv")
    print(t["velocity"].unit, t["source"].description, t["velocity"].format, t.meta["lines"][1])
    print(list(t["count"].mask), t["count"].dtype, t["count"][3], t["single"].dtype)
    print(list(t["velocity"].mask), repr(t["velocity"][0]), t["velocity"][1], t["velocity"][3], t["velocity"][4])
    print(t["good"].dtype, t["good"][0], t["good"][1], t["triple x"].shape, t["triple x"][1][0])
    print([str(s) for s in t["source"]])
`;
      const output = await new Deno.Command("/usr/bin/python3", { args: ["-c", script, ...paths] })
        .output();
      const text = new TextDecoder().decode(output.stdout).trim().split("\n");
      const expected = [
        "km / s it's: the {file} .2f He II 4686",
        "[False, False, True, False, False] int64 9007199254740993 float32",
        "[False, False, True, False, False] 0.1 -1e-300 nan -inf",
        "bool True False (5, 2) 0.5",
        // astropy drops blanks around a cell, even a quoted one
        `['a, b.fits', 'say "hi"', '--', 'lead', '#4']`,
      ];
      assertEquals(text, [...expected, ...expected], new TextDecoder().decode(output.stderr));
    }),
});

Deno.test({
  name: "parseEcsv() reads what astropy writes",
  ignore: !astropy,
  fn: () => {
    const script = `
import sys, numpy as np
from astropy.table import Table, MaskedColumn, QTable
from astropy.time import Time
import astropy.units as u
t = QTable({"a": [1, 2], "s": ["x y", 'q"d']}, meta={"b": [1, 2]})
t["m"] = MaskedColumn([1.5, np.nan], mask=[True, False], unit="km/s", description="it's: x")
t["k"] = np.array([2**63 - 1, -5])
t["v"] = np.ma.array(np.arange(4.).reshape(2, 2), mask=[[True, False], [False, False]])
t["q"] = [1.5, 2.5] * u.m
t["t"] = Time([2460000.5, 2460001.5], format="jd", scale="tdb")
t.write(sys.stdout, format="ascii.ecsv")
`;
    const { stdout } = new Deno.Command("/usr/bin/python3", { args: ["-c", script] }).outputSync();
    const { columns, meta } = parseEcsv(new TextDecoder().decode(stdout));
    const values = Object.fromEntries(columns.map(({ name, values }) => [name, values]));
    assertEquals(values["a"], [1, 2]);
    assertEquals(values["s"], ["x y", 'q"d']);
    assertEquals(values["m"], [null, NaN]);
    assertEquals(values["k"], [2n ** 63n - 1n, -5]);
    assertEquals(values["v"], [[null, 1], [2, 3]]);
    assertEquals(values["q"], [1.5, 2.5]);
    assertEquals(meta["b"], [1, 2]);
    const m = columns.find(({ name }) => name === "m");
    assertEquals([m?.unit, m?.description, m?.datatype], ["km / s", "it's: x", "float64"]);
  },
});

Deno.test("formatEcsv() keeps the rows of a table with one column of missing values", () => {
  const columns = [{ name: "x", datatype: "float64" as const, values: [null, 1, null] }];
  for (const delimiter of [",", " "] as const) {
    const text = formatEcsv({ columns, meta: {} }, { delimiter });
    assertEquals(parseEcsv(text).columns[0]?.values, [null, 1, null]);
  }
});

Deno.test("formatEcsv() writes what writtenByMillrace() recognises", () => {
  const text = formatEcsv({ columns: [], meta: { creator: "Millrace 0.1.0" } });
  assert(writtenByMillrace(new TextEncoder().encode(text)));
});

Deno.test("formatEcsv() refuses columns of unequal length, double names and wrong values", () => {
  const refused = (columns: EcsvTable["columns"]) =>
    assertThrows(() => formatEcsv({ columns, meta: {} }), InputError);
  const a = { name: "a", datatype: "float64" as const, values: [1, 2] };
  assertStringIncludes(refused([a, { ...a, name: "b", values: [1] }]).message, "as many values");
  assertStringIncludes(refused([a, a]).message, "come twice");
  assertEquals(refused([{ ...a, values: [1, "x"] }]).key, "a");
  assertEquals(refused([{ ...a, datatype: "int32", values: [1.5] }]).value, 1.5);
  assertEquals(refused([{ ...a, datatype: "bool", values: [1] }]).value, 1);
});

Deno.test("parseEcsv() names file, line and column when the text is not right", () => {
  const head = "# %ECSV 1.0\n# ---\n# datatype:\n# - {name: a, datatype: int32}\n";
  const place = (text: string) => {
    const error = assertThrows(() => parseEcsv(text, { file: "t.ecsv" }), InputError);
    return [error.file, error.line, error.key, error.value];
  };
  assertEquals(place("a,b\n1,2\n"), ["t.ecsv", 1, undefined, "a,b"]);
  assertEquals(place(head), ["t.ecsv", 5, undefined, ""]);
  assertEquals(place(`${head}b\n`), ["t.ecsv", 5, undefined, "b"]);
  assertEquals(place(`${head}a\n1\n# x\n\n1.5\n`), ["t.ecsv", 9, "a", "1.5"]);
  assertEquals(place(`${head}a\n1 2\n`), ["t.ecsv", 6, undefined, 2]);
  assertEquals(place("# %ECSV 1.0\n# datatype: [\na\n").slice(0, 2), ["t.ecsv", 1]);
  assertEquals(place("# %ECSV 1.0\n# datatype: 3\na\n").slice(0, 2), ["t.ecsv", 1]);
  const complex = "# %ECSV 1.0\n# datatype:\n# - {name: a, datatype: complex128}\na\n1\n";
  assertEquals(place(complex), ["t.ecsv", 1, "a", "complex128"]);
  const delimiter =
    "# %ECSV 1.0\n# datatype:\n# - {name: a, datatype: int8}\n# delimiter: ';'\na\n";
  assertEquals(place(delimiter), ["t.ecsv", 1, undefined, ";"]);
});
