import type { ReportInput } from "#shared/agreement/report/agreement-report.ts";
import type { ReportSection } from "#shared/agreement/report/report-data.ts";
import { fixed, TableOf, text } from "#shared/agreement/report/report-text.ts";

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
  const words = "Totals do not depend on any matching of strands, and what an annotator missed is missing from them.";
  return {
    id: "totals",
    title: "Totals of each specimen",
    blocks: table.isEmpty ? [text("There is no pass.", "refusal")] : [text(words), table.table],
  };
}
