import type { ReportBlock, ReportSection } from "#shared/agreement/report/report-data.ts";
import type { ReportInput } from "#shared/agreement/report/report-input.ts";
import { fixed, TableOf, text } from "#shared/agreement/report/report-text.ts";
import { MARK_NAMES } from "#shared/report/plot-marks.ts";
import { rowPlot } from "#shared/report/row-plot.ts";

/** What each pass has in total: first, since everything that somebody missed enters it. */
export function totalsSection({ found }: ReportInput): ReportSection {
  const table = new TableOf("Totals of each pass", [
    { name: "specimen", words: true },
    { name: "annotator", words: true },
    "pass",
    "origins",
    "insertions",
    "total length (mm)",
  ]);
  for (const { specimen, passes } of found.totals)
    for (const { annotator, pass, origins, insertions, length } of passes)
      table.row(specimen, annotator, String(pass), String(origins), String(insertions), fixed(length, 1));
  if (table.isEmpty) return { id: "totals", title: "Totals of each specimen", blocks: [text("There is no pass.", "refusal")] };
  const words = "Totals do not depend on any matching of strands, and what an annotator missed is missing from them.";
  return { id: "totals", title: "Totals of each specimen", blocks: [text(words), ...figures(found), table.table] };
}

function figures({ annotators, totals, passes }: ReportInput["found"]): ReportBlock[] {
  if (annotators.length > MARK_NAMES.length) return [];
  const isRepeat = new Set(
    passes.filter(({ role }) => role === "repeat").map(({ specimen, annotator, pass }) => `${specimen} ${annotator} ${pass}`),
  );
  const rows = (value: (one: (typeof totals)[number]["passes"][number]) => number) =>
    totals.map(({ specimen, passes: own }) => ({
      name: specimen,
      marks: own.map((one) => ({
        value: value(one),
        shape: annotators.indexOf(one.annotator),
        isFilled: !isRepeat.has(`${specimen} ${one.annotator} ${one.pass}`),
      })),
    }));
  return [
    {
      kind: "figure",
      svgs: [
        rowPlot(
          "Total length of each pass",
          rows(({ length }) => length),
          "total length (mm)",
          annotators,
        ),
        rowPlot(
          "Insertions of each pass",
          rows(({ insertions }) => insertions),
          "insertions",
          annotators,
        ),
      ],
      caption:
        "Total length and insertions of each pass. One shape of mark for each annotator; filled: first pass, hollow: a repeat.",
    },
  ];
}
