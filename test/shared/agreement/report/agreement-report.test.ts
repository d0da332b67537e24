import { describe, expect, it } from "vitest";
import { agreementReport, contextOfFiles } from "#shared/agreement/report/agreement-report.ts";
import { renderReportHtml } from "#shared/agreement/report/render-html.ts";
import type { AgreementReport, ReportContext, ReportTable } from "#shared/agreement/report/report-data.ts";
import { type AgreeOptions, agree } from "#shared/agreement/study/agree.ts";
import { type StudyFile, studyOf } from "#shared/agreement/study/study.ts";
import { blockPhantom } from "#shared/phantom/block-phantom.ts";
import { humanPasses } from "#shared/phantom/human-passes.ts";

const OPTIONS: AgreeOptions = {
  compare: { preset: "geometry", origin: "held", positionScale: 2, merge: 0.3, tolerance: 0.5, minimumDiameter: null },
  method: null,
  margin: null,
  sameEngine: false,
  declinedByAll: 0,
  seed: 1,
};

/** Small specimens with one pass of each of three annotators. */
const passes: StudyFile[] = [8, 9, 10, 11, 12].flatMap((seed) => {
  const specimen = blockPhantom({ name: `HB-${seed}`, seed, size: [96, 96, 96], spacingMm: 0.1, trees: 2, noise: 0.05 });
  return humanPasses(specimen, seed).passes.map(({ annotator, file }) => ({ name: `hb-${seed}-${annotator}`, file }));
});
const by = (specimens: readonly string[], annotators: readonly string[]) =>
  passes.filter(({ file }) => specimens.includes(file.volume!.name!) && annotators.includes(file.annotator!));
const ALL = ["AN-1", "AN-2", "AN-3"];
const changed = (files: readonly StudyFile[], more: Partial<StudyFile["file"]>, suffix = ""): StudyFile[] =>
  files.map(({ name, file }) => ({ name: `${name}${suffix}`, file: { ...file, ...more } }));

function reportOf(files: readonly StudyFile[], more: Partial<AgreeOptions> = {}, context: Partial<ReportContext> = {}) {
  const options = { ...OPTIONS, ...more };
  const found = agree(files, options, () => 20_000);
  const study = studyOf(files, options.compare.merge, options.method);
  const known = contextOfFiles({ name: "Tautline", version: "0.1.0" }, "2026-12-01T00:00:00Z");
  return agreementReport({ study, options, found, context: { ...known, ...context } });
}

const tablesOf = (report: AgreementReport) =>
  report.sections.flatMap(({ blocks }) => blocks.filter((block): block is ReportTable => block.kind === "table"));
const section = (report: AgreementReport, id: string) => JSON.stringify(report.sections.find((one) => one.id === id));
const refusals = (report: AgreementReport, id: string) =>
  report.sections
    .find((one) => one.id === id)!
    .blocks.flatMap((block) => (block.kind === "text" && block.tone === "refusal" ? [block.text] : []))
    .join(" ");

/** What a reader of the page would stumble over. */
function faults(report: AgreementReport): string[] {
  const html = renderReportHtml(report);
  const words = html.replace(/<style>[\s\S]*?<\/style>/g, "").replace(/<[^>]*>/g, " ");
  const inNumbers = html.match(/(?:points|d|x|y|x1|x2|y1|y2|cx|cy|r|width|height)="[^"]*(?:NaN|Infinity|undefined)[^"]*"/g) ?? [];
  const tables = tablesOf(report).flatMap(({ caption, columns, rows }) =>
    rows.flatMap((row) => {
      if (row.length !== columns.length) return [`${caption}: ${row.length} cells for ${columns.length} columns`];
      return row.some((cell) => cell.trim() === "") ? [`${caption}: an empty cell in ${row.join(" | ")}`] : [];
    }),
  );
  const marks = tablesOf(report).flatMap(({ caption, rows, notes }) =>
    rows.flat().flatMap((cell) => {
      const mark = /\u00a0([a-z]{1,2}\))$/.exec(cell)?.[1];
      return mark && !notes.some((note) => note.startsWith(`${mark} `)) ? [`${caption}: ${cell} points to nothing`] : [];
    }),
  );
  return [
    ...(words.match(/.{0,30}\b(?:NaN|undefined|Infinity|null|object Object)\b.{0,30}/g) ?? []),
    ...inNumbers,
    ...tables,
    ...marks,
  ];
}

describe("the report on a study with little in it", () => {
  const one = by(["HB-8"], ["AN-1"]);
  const twin = [...one, ...changed(one, { annotator: "AN-2" }, "-b"), ...changed(one, { annotator: "AN-3" }, "-c")];
  const single = changed(by(["HB-8"], ALL), {}).map(({ name, file }) => {
    const [tree] = file.trees;
    const [strand] = tree!.strands;
    const nodes = tree!.nodes
      .filter(({ id }) => id === strand!.from || id === strand!.to)
      .map((node) => (node.kind === "fork" ? { ...node, kind: "insertion" as const } : node));
    return { name, file: { ...file, trees: [{ ...tree!, nodes, strands: [strand!] }], crossLinks: [] } };
  });
  const methods = changed(by(["HB-8", "HB-9"], ["AN-3"]), { annotator: "follower" });

  it.each<[string, readonly StudyFile[], Partial<AgreeOptions>]>([
    ["one specimen", by(["HB-8"], ALL), {}],
    ["two specimens", by(["HB-8", "HB-9"], ALL), {}],
    ["two annotators", by(["HB-8", "HB-9"], ["AN-1", "AN-2"]), {}],
    ["one annotator", one, {}],
    ["nothing", [], {}],
    ["a specimen that one annotator did not do", [...by(["HB-8"], ALL), ...by(["HB-9"], ["AN-1", "AN-3"])], {}],
    ["specimens that share no annotator", [...by(["HB-8"], ["AN-1"]), ...by(["HB-9"], ["AN-2"])], {}],
    ["empty trees", changed(by(["HB-8"], ALL), { trees: [], crossLinks: [] }), {}],
    [
      "one annotator with empty trees",
      [...by(["HB-8"], ["AN-1"]), ...changed(by(["HB-8"], ["AN-2"]), { trees: [], crossLinks: [] })],
      {},
    ],
    ["three passes that are the same to the last digit", twin, {}],
    ["one strand and nothing else", single, {}],
    [
      "a repeat that does not say when it was made",
      [...one, ...changed(one, { pass: 2, created: undefined as never }, "-2")],
      {},
    ],
    [
      "a method on two specimens without a margin",
      [...by(["HB-8", "HB-9"], ["AN-1", "AN-2"]), ...methods],
      { method: "follower" },
    ],
    [
      "a method that only one annotator can be held against",
      [...one, ...methods],
      { method: "follower", margin: 1, sameEngine: true },
    ],
    ["candidates that everyone declined", by(["HB-8"], ALL), { declinedByAll: 5 }],
    [
      "annotators with signs of markup in their names",
      changed(by(["HB-8"], ["AN-1"]), { annotator: 'A <b>&"1"' }).concat(by(["HB-8"], ["AN-2"])),
      {},
    ],
    [
      "nodes without labels",
      by(["HB-8"], ALL).map(({ name, file }) => ({
        name,
        file: {
          ...file,
          trees: file.trees.map((tree) => ({
            ...tree,
            nodes: tree.nodes.map(({ id, kind, position }) => ({ id, kind, position })),
          })),
        },
      })),
      {},
    ],
    [
      "strands without radii",
      by(["HB-8"], ALL).map(({ name, file }) => ({
        name,
        file: {
          ...file,
          trees: file.trees.map((tree) => ({ ...tree, strands: tree.strands.map(({ radii: _, ...strand }) => strand) })),
          crossLinks: [],
        },
      })),
      {},
    ],
  ])("gives a number or a plain reason everywhere: %s", (_, files, more) => {
    const report = reportOf(files, more);
    expect(faults(report)).toEqual([]);
    expect(report.sections.map(({ id }) => id)).toEqual([
      "about",
      "passes",
      "totals",
      "items",
      "detection",
      "pairwise",
      "continuous",
      "places",
      "labels",
      "where",
      "own",
      "effort",
      "method",
      "tolerances",
      "limits",
      "grras",
      "methods",
    ]);
  });

  it("escapes what files say", () => {
    const html = renderReportHtml(reportOf(changed(one, { annotator: "<script>alert(1)</script>" })));
    expect(html).not.toContain("<script");
    expect(html).toContain("&lt;script&gt;");
  });

  it("refuses in words what cannot be known", () => {
    const two = reportOf([...by(["HB-8", "HB-9"], ["AN-1", "AN-2"]), ...methods], { method: "follower" });
    expect(refusals(two, "detection")).toMatch(/three annotators or more; there are 2/);
    expect(section(two, "limits")).toMatch(/they need 5 specimens, and there are 2/);
    expect(refusals(two, "method")).toMatch(/need at least 5 specimens; there are 2/);
    expect(section(two, "continuous")).toMatch(/An interval needs at least 5 specimens; there are 2/);
    expect(refusals(two, "own")).toMatch(/cannot be said/);
    expect(refusals(two, "effort")).toMatch(/Tree files hold no log/);
    const five = [...by(["HB-8", "HB-9", "HB-10", "HB-11", "HB-12"], ["AN-1", "AN-2"])];
    const more = changed(by(["HB-8", "HB-9", "HB-10", "HB-11", "HB-12"], ["AN-3"]), { annotator: "follower" });
    expect(refusals(reportOf([...five, ...more], { method: "follower" }), "method")).toMatch(/set no margin beforehand/);
    const judged = reportOf([...five, ...more], { method: "follower", margin: 2, sameEngine: true });
    expect(section(judged, "method")).toMatch(/Equivalent within the margin of 2 mm/);
    expect(refusals(judged, "method")).toMatch(/worked with the engine that is tested/);
    const three = reportOf(by(["HB-8"], ALL));
    expect(refusals(three, "detection")).toMatch(/No specificity/);
    expect(section(three, "limits")).toMatch(/there is 1/);
  });
});

describe("the report on a study", () => {
  const effort = [{ specimen: "HB-8", annotator: "AN-1", pass: 1, secondsAtWork: 3600, edits: 40, undos: 3, trees: 2 }];
  const protocol: ReportContext["protocol"] = {
    id: "p1",
    version: 2,
    sha256: "ab".repeat(32),
    frozen: "2026-10-01T00:00:00Z",
    primaryQuantity: "path length",
    minimumDiameterMm: 0.2,
    washoutDays: 28,
    pointRules: ["The origin is the last cross-section whose outline is separate from muscle."],
  };
  const again = changed(by(["HB-8"], ["AN-1"]), { pass: 2, created: "2026-12-11T09:00:00Z" }, "-2");
  const report = reportOf(
    [...by(["HB-8", "HB-9"], ALL), ...again],
    {},
    { protocol, effort, idleSeconds: 120, blinding: ["Codes in place of names."] },
  );

  it("tells the protocol, names the primary quantity first, and warns of a repeat that came too early", () => {
    expect(section(report, "passes")).toContain("Protocol p1, version 2, frozen 2026-10-01");
    const headings = report.sections
      .find(({ id }) => id === "continuous")!
      .blocks.flatMap((block) => (block.kind === "heading" ? [block.text] : []));
    expect(headings[0]).toBe("path length (mm)");
    expect(refusals(report, "own")).toMatch(/before the 28 days/);
    expect(section(report, "grras")).toContain("Codes in place of names.");
    expect(faults(report)).toEqual([]);
  });

  it("gives effort a tree from the log, with the pause that does not count", () => {
    const [table] = tablesOf({ ...report, sections: report.sections.filter(({ id }) => id === "effort") });
    expect(table!.rows).toEqual([["HB-8", "AN-1", "1", "60.0", "40", "3", "20.0", "30.0"]]);
    expect(table!.notes.join(" ")).toContain("120 seconds");
  });

  it("prints model, type and definition with every intraclass correlation, and what its interval is conditional on", () => {
    const table = tablesOf(report).find(({ caption }) => caption.startsWith("Intraclass correlations of path length"))!;
    expect(table.caption).toContain("given that all 3 marked it");
    expect(table.rows.map(([form]) => form)).toEqual(["ICC(1)", "ICC(A,1)", "ICC(C,1)", "ICC(1,k)", "ICC(A,k)", "ICC(C,k)"]);
    expect(table.rows[1]).toEqual(expect.arrayContaining(["ICC(2,1)", "single rater", "absolute agreement"]));
    expect(table.notes.join(" ")).toContain("conditional on these valves");
  });

  it("says of each of the guideline's fifteen items whether it is filled", () => {
    const [table] = tablesOf({ ...report, sections: report.sections.filter(({ id }) => id === "grras") });
    expect(table!.rows).toHaveLength(15);
    for (const [, , state] of table!.rows) expect(["filled", "in part", "for the authors"]).toContain(state);
  });

  it("draws strands where annotators differ, with one value a point", () => {
    expect(report.spread.length).toBeGreaterThan(0);
    for (const { line, spreadMm, markedBy, of } of report.spread) {
      expect(spreadMm.length === line.length || (spreadMm.length === 0 && markedBy === 1)).toBe(true);
      expect(markedBy).toBeLessThanOrEqual(of);
    }
  });

  it("is plain data: it survives being sent as JSON", () => {
    expect(JSON.parse(JSON.stringify(report))).toEqual(report);
  });
});
