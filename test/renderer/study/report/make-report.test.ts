import { describe, expect, it } from "vitest";
import { makeReport } from "#renderer/study/report/make-report.ts";
import type { ReportOrder } from "#renderer/study/report/report-messages.ts";
import { contextOfFiles } from "#shared/agreement/report/agreement-report.ts";
import { agree } from "#shared/agreement/study/agree.ts";
import type { StudyFile } from "#shared/agreement/study/study.ts";
import type { ChordaeFile } from "#shared/formats/chordae/chordae-file.ts";

const options: ReportOrder["options"] = {
  compare: { preset: "geometry", origin: "held", positionScale: 2, merge: 0.3, tolerance: 0.5, minimumDiameter: null },
  method: null,
  margin: null,
  sameEngine: false,
  declinedByAll: 0,
  seed: 1,
};

/** One straight tree with a fork; `length` of its right branch tells passes apart. */
function file(specimen: string, annotator: string, length: number): StudyFile {
  const strand = (id: string, from: string, to: string, points: number[][]) => ({
    id,
    from,
    to,
    points,
    radii: points.map(() => 0.2),
  });
  const trees = [
    {
      id: "t1",
      root: "n1",
      nodes: [
        { id: "n1", kind: "origin", position: [0, 0, 0] },
        { id: "n2", kind: "fork", position: [0, 0, 4] },
        { id: "n3", kind: "insertion", position: [-2, 0, 8] },
        { id: "n4", kind: "insertion", position: [2, 0, 4 + length] },
      ],
      strands: [
        strand("s1", "n1", "n2", [
          [0, 0, 0],
          [0, 0, 4],
        ]),
        strand("s2", "n2", "n3", [
          [0, 0, 4],
          [-2, 0, 8],
        ]),
        strand("s3", "n2", "n4", [
          [0, 0, 4],
          [2, 0, 4 + length],
        ]),
      ],
    },
  ];
  const head = { format: "chordae-trees", version: 1, unit: "mm", frame: "scan", annotator, pass: 1 };
  return {
    name: `${specimen}-${annotator}.chordae.json`,
    file: { ...head, volume: { name: specimen }, trees } as unknown as ChordaeFile,
  };
}

const files = ["HB-07", "HB-08"].flatMap((specimen, s) => [file(specimen, "AN-1", 4 + s), file(specimen, "AN-2", 4.2 + s)]);
const order: ReportOrder = {
  files,
  options,
  context: contextOfFiles({ name: "Tautline", version: "0.0.0" }, null),
  notes: ["One pass was set aside."],
  budgetMs: 60_000,
};

describe("the report on the page", () => {
  it("has the numbers of the agreement itself, the study's own notes, and the same sections in its file", () => {
    const steps: string[] = [];
    const { report, html, itemsCsv } = makeReport(
      order,
      () => 60_000,
      (step, done) => steps.push(`${step} ${done}`),
    );
    expect(steps).toEqual(["sorting 0", "pairs 0", "pairs 1", "statistics 0", "report 0"]);
    // The agreement as the command line computes it, in one go.
    const found = agree(files, options, () => 60_000);
    const distances = report.sections
      .find(({ id }) => id === "pairwise")!
      .blocks.flatMap((block) => (block.kind === "table" ? [block] : []))[0]!;
    const edit = distances.columns.findIndex(({ name }) => name === "edit distance");
    expect(distances.rows.map((row) => row[edit])).toEqual(found.pairwise.map(({ upper }) => upper.toFixed(2)));
    expect(html).toContain("One pass was set aside.");
    for (const { title } of report.sections) expect(html).toContain(title);
    // Two specimens of three strands and four nodes, two passes each, and the header; by hand.
    expect(itemsCsv.trim().split("\n")).toHaveLength(1 + 2 * 7 * 2);
  });

  it("refuses files that claim to be the same pass", () => {
    expect(() =>
      makeReport(
        { ...order, files: [files[0]!, { ...files[0]!, name: "again" }] },
        () => 1000,
        () => {},
      ),
    ).toThrow(/both claim to be pass 1 of AN-1/);
  });
});
