import {
  assert,
  assertAlmostEquals,
  assertEquals,
  assertStringIncludes,
  assertThrows,
} from "@std/assert";
import { InputError } from "../../../engine/errors.ts";
import {
  type ColourMapName,
  drawPlate,
  type Group,
  type Item,
  type PanelName,
  panelNames,
  type Picture,
  type PlateDescription,
  type PlateSubject,
  runsText,
  svgText,
  type TextItem,
  textWidth,
} from "../../../engine/figures/mod.ts";
import { exampleSecondLine, exampleSubject } from "../example_subject.ts";

const subject = exampleSubject();

function groups(items: readonly Item[]): Group[] {
  return items.flatMap((item) => item.kind === "group" ? [item, ...groups(item.items)] : []);
}

function words(items: readonly Item[]): string[] {
  return items.flatMap((item) => {
    if (item.kind === "group") return words(item.items);
    return item.kind === "text" ? [runsText(item.runs)] : [];
  });
}

/** Every line of text lies on the page. */
function assertInside(picture: Picture): void {
  for (const text of texts(picture.items)) {
    const length = textWidth(text.runs, text.size_pt);
    const before = text.anchor === "end" ? 1 : text.anchor === "middle" ? 0.5 : 0;
    const turned = text.rotate_deg === -90;
    const from = turned ? text.y - (1 - before) * length : text.x - before * length;
    const size = turned ? picture.height : picture.width;
    const name = runsText(text.runs);
    assert(from >= 0 && from + length <= size, `${name}: ${from} to ${from + length} of ${size}`);
  }
}

function texts(items: readonly Item[]): TextItem[] {
  return items.flatMap((item) => {
    return item.kind === "text" ? [item] : item.kind === "group" ? texts(item.items) : [];
  });
}

for (const panel of panelNames) {
  Deno.test(`drawPlate() draws panel ${panel} in both widths with finite numbers`, () => {
    for (const width of ["one-column", "two-column"] as const) {
      const { picture, caption } = drawPlate({ width, rows: [{ panels: [panel] }] }, [subject]);
      const svg = svgText(picture).replaceAll(/base64,[^"]+/g, "");
      assert(groups(picture.items).some((group) => group.name === panel), panel);
      assert(!/NaN|Infinity|undefined/.test(svg), svg.match(/.{40}(NaN|Infinity|undefined)/)?.[0]);
      assertInside(picture);
      assert(caption.length > 10);
      assert(!/NaN|undefined/.test(caption), caption);
    }
  });
}

const fields: Partial<Record<PanelName, [field: keyof PlateSubject, remedy: string]>> = {
  map: ["map", "millrace map makes it"],
  trail: ["trail", "millrace trail makes it"],
  model: ["model", "millrace map makes it"],
  residual: ["residual", "millrace map makes it"],
  "half-one": ["halves", "millrace map makes it"],
  spread: ["spread", "set map.resamples to 2 or more"],
  significance: ["spread", "set map.resamples to 2 or more"],
  "detection-limit": ["detection_limit", "let [binary] fix K1 and K2"],
  spectrum: ["spectrum", "millrace profile makes it"],
  "velocity-curve": ["velocities", "millrace orbit says why"],
  periodogram: ["periodogram", "millrace orbit says why"],
  "systemic-scan": ["systemic_scan", "exposures must cover the orbit"],
  "mass-plane": ["mass_plane", "K2 must be measured"],
  "disc-in-space": ["binary", "let [binary] fix K1 and K2"],
  coverage: ["coverage", "millrace trail makes it"],
  "closer-fit": ["sensitivity", 'set map.method to "entropy"'],
  sine: ["modulation", "the line must be one alone"],
  "inside-out": ["map", "millrace map makes it"],
  "period-scan": ["period_scan", "exposures must span"],
  blend: ["blend_map", 'give a blend of the line map = "own"'],
  "null-distribution": ["null_distribution", "millrace weigh draws it"],
};

for (const [panel, [field, remedy]] of Object.entries(fields)) {
  Deno.test(`drawPlate() says what panel ${panel} lacks, where, and what makes it`, () => {
    const bare = { ...subject, [field]: undefined };
    const rows = [{ panels: ["stacked-profiles" as const] }, { panels: [panel as PanelName] }];
    const error = assertThrows(
      () => drawPlate({ rows: field === "trail" ? rows.slice(1) : rows }, [bare]),
      InputError,
      `it needs ${field.replaceAll("_", " ")} of H beta (key plate.rows[${
        field === "trail" ? 0 : 1
      }].panels[0]); ${remedy}`,
    );
    assertStringIncludes(error.message, 'Cannot draw panel "');
  });
}

Deno.test("drawPlate() letters panels in reading order, in figure and caption", () => {
  const rows = [{ panels: ["map", "trail"] as const }, { panels: ["coverage"] as const }];
  const { picture, caption } = drawPlate({ letters: true, rows }, [subject]);
  const letters = words(picture.items).filter((word) => /^\([a-z]\)/.test(word));
  assertEquals(letters.map((word) => word.slice(0, 3)), ["(a)", "(b)", "(c)"]);
  assert(
    /\(a\) Velocity map .*\(b\) Trail .*\(c\) Phases observed: night 1, 35 exposures/.test(caption),
  );
});

Deno.test("drawPlate() gives subjects one scale when it is shared, and their own otherwise", () => {
  const other = exampleSecondLine();
  const rows = [{ panels: ["map"] as const }];
  const limits = (share: PlateDescription["share"]) =>
    drawPlate({ rows, each_subject: true, ...(share ? { share } : {}) }, [subject, other])
      .caption.match(/colours from [^ ]+ to [^ ]+/g);
  const own = limits(undefined)!;
  const shared = limits(["map"])!;
  assert(own[0] !== own[1]);
  assertEquals(shared[0], shared[1]);
});

Deno.test("drawPlate() puts one colour bar over trail and model, which share their scale", () => {
  const bars = (panels: readonly PanelName[]) => {
    const { picture } = drawPlate({ rows: [{ panels }] }, [subject]);
    return picture.items.filter((item) => item.kind === "image" && item.rows === 1).length;
  };
  assertEquals(bars(["trail", "model", "residual"]), 2);
  assertEquals(bars(["trail", "residual", "model"]), 3);
});

Deno.test("drawPlate() states stretch and limits that were chosen", () => {
  const { caption } = drawPlate({
    rows: [{ panels: ["map", "trail"] }],
    stretch: "asinh",
    map_limits: [0, 0.001],
    trail_limits: [-0.5, 2],
  }, [subject]);
  assertStringIncludes(caption, "colours from 0 to 0.001, asinh stretch per km/s");
  assertStringIncludes(caption, "colours from −0.5 to 2, asinh stretch of the continuum");
});

Deno.test("drawPlate() lays a row of squares over the whole width", () => {
  const { picture } = drawPlate(
    { width: 174, rows: [{ panels: ["map", "asymmetric", "spread"] }] },
    [subject],
  );
  const images = groups(picture.items).flatMap((group) => group.items)
    .filter((item) => item.kind === "image");
  assertEquals(
    new Set(images.map((item) => item.kind === "image" && item.width.toFixed(6))).size,
    1,
  );
});

const wrong: [string, PlateDescription, string][] = [
  [
    "the panel is not known",
    { rows: [{ panels: ["mapp" as PanelName] }] },
    `a panel must be one of ${panelNames.join(", ")}: current value is "mapp" ` +
    '(key plate.rows[0].panels[0]); the nearest is "map"',
  ],
  [
    "a row is empty",
    { rows: [{ panels: [] }] },
    "Cannot lay out plate as every row must have a panel (key plate.rows[0])",
  ],
  [
    "the subject is not there",
    { rows: [{ panels: [{ panel: "map", subject: 3 }] }] },
    "the subject of a panel must be from 0 to 0: current value is 3",
  ],
  ["the width is nothing", { width: 0 }, "40 to 1200 mm: current value is 0 mm (key plate.width)"],
  [
    "the enlargement is nothing",
    { enlarge: 0 },
    "the enlargement must be from 0.5 to 10: current value is 0",
  ],
  ["the width is no number", { width: NaN }, "40 to 1200 mm"],
  [
    "the colour map is not known",
    { colour_map: "virdis" as ColourMapName },
    'magma: current value is "virdis" (key plate.colour_map); the nearest is "viridis"',
  ],
  [
    "the colour map of signed panels is not known",
    { signed_colour_map: "balanced" as ColourMapName },
    '(key plate.signed_colour_map); the nearest is "balance"',
  ],
];

for (const [when, description, message] of wrong) {
  Deno.test(`drawPlate() names the rule when ${when}`, () => {
    assertThrows(() => drawPlate(description, [subject]), InputError, message);
  });
}

Deno.test("drawPlate() keeps its width and shape of page when it is enlarged for a slide", () => {
  const description = { width: 254, rows: [{ panels: ["map", "trail"] as const }] };
  const plain = drawPlate({ ...description, width: 127 }, [subject]).picture;
  const slide = drawPlate({ ...description, enlarge: 2 }, [subject]).picture;
  assertEquals(slide.width, 2 * plain.width);
  assertEquals(slide.height, 2 * plain.height);
  const sizes = (picture: Picture) => texts(picture.items).map((text) => text.size_pt);
  assertEquals(sizes(slide), sizes(plain).map((size) => 2 * size));
});

Deno.test("drawPlate() asks for a line when there is none", () => {
  assertThrows(() => drawPlate({}, []), InputError, "there must be at least one line to show");
});

Deno.test("drawPlate() tells in the caption the name that a panel is given", () => {
  const rows = [{ panels: [{ panel: "spectrum", name: "group 2" }] }] as const;
  assertEquals(drawPlate({ rows }, [subject]).caption, "group 2: Mean spectrum.");
  assertEquals(
    drawPlate({ rows: [{ panels: ["spectrum"] }] }, [subject]).caption,
    "Mean spectrum.",
  );
});

Deno.test("drawPlate() shares axes of neighbours that show the same velocities, whoever they are", () => {
  const panels = [{ panel: "residual", subject: 0 }, { panel: "residual", subject: 1 }] as const;
  const labels = (other: PlateSubject) => {
    const { picture } = drawPlate({ rows: [{ panels }] }, [subject, other]);
    const found = texts(picture.items).filter(({ runs }) => runsText(runs).startsWith("velocity"));
    const phases = words(picture.items).filter((word) => word === "orbital phase");
    return { phases: phases.length, x: found.map(({ x }) => x), width: picture.width };
  };
  const same = labels({ ...subject, title: "VX-0418" });
  assertEquals(same.phases, 1);
  assertEquals(same.x.length, 1);
  // Between the two frames: 36 pt stand free at the left of them and 8 pt at the right.
  assertAlmostEquals(same.x[0]!, (36 + same.width - 8) / 2, 1e-9);
  const { trail } = subject;
  const grid = { ...trail!.grid, step_kms: 1.5 * trail!.grid.step_kms };
  const apart = labels({ ...subject, trail: { ...trail!, grid } });
  assertEquals([apart.phases, apart.x.length], [2, 2]);
});

Deno.test("drawPlate() draws one bar over residuals of several subjects", () => {
  const panels = [{ panel: "residual", subject: 0 }, { panel: "residual", subject: 1 }] as const;
  const { picture } = drawPlate({ rows: [{ panels }] }, [subject, { ...subject, title: "b" }]);
  assertEquals(words(picture.items).filter((word) => word === "5 σ").length, 1);
});

Deno.test("drawPlate() sets long names smaller, those of a row alike, and none under 6 pt", () => {
  const long = "everything that was left of the data, in words";
  const panels = ["trail", { panel: "residual", name: long }, "model"] as const;
  const { picture } = drawPlate({ width: "one-column", rows: [{ panels }] }, [subject]);
  const sizes = texts(picture.items).filter(({ runs }) =>
    ["observed", long, "from the map"].includes(runsText(runs))
  ).map(({ size_pt }) => size_pt);
  assertEquals(sizes, [6, 6, 6]);
});
