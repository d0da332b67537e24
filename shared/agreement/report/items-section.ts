import type { ReportBlock, ReportSection } from "#shared/agreement/report/report-data.ts";
import type { ReportInput } from "#shared/agreement/report/report-input.ts";
import { percent, TableOf, text } from "#shared/agreement/report/report-text.ts";
import { nodeTolerance } from "#shared/agreement/study/study.ts";

/** Which items the later numbers rest on: matched of all, and how much hangs on the tolerance. */
export function itemsSection({ found, options }: ReportInput): ReportSection {
  const { items } = found;
  const { tolerance } = options.compare;
  const table = (what: string, rows: typeof items.strands, gate: number) => {
    const out = new TableOf(`${what}, matched within ${gate} mm`, [
      { name: "specimen", words: true },
      "matched",
      { name: "that is, by", words: true },
      "items in all",
      "share matched",
      "within 10 % of the gate",
      "held by a third pass",
    ]);
    for (const { specimen, title, matched, union, share, nearGateShare, indirectPairs, note, exact, reasons } of rows) {
      out.row(
        specimen,
        String(matched),
        title.replace("given that ", "").replace(" marked it", ""),
        String(union),
        out.share(share, reasons.share),
        out.share(nearGateShare, reasons.nearGateShare),
        String(indirectPairs),
      );
      if (!exact) out.note(`${specimen}: ${note}`);
    }
    if (rows.every(({ exact }) => exact)) out.note("Every matching is proven to have the greatest total nearness.");
    return out.table;
  };
  const blocks: ReportBlock[] = [
    text(
      "Which strand of one annotator is which of another's is settled for all passes over a specimen at once. The share within 10 % of the gate are pairs whose matching would change with a slightly narrower or wider tolerance; pairs held by a third pass would not match by themselves.",
    ),
  ];
  if (items.union === 0) blocks.push(text("Nobody marked anything: there is no item.", "refusal"));
  else
    blocks.push(
      text(
        `Of ${items.union} strands in all, ${items.matched} were marked by everyone who did the specimen${items.share === null ? "" : ` (${percent(items.share)})`}.`,
      ),
      table("Strands", items.strands, tolerance),
      table("Nodes (origins, forks, ends)", items.nodes, nodeTolerance(tolerance)),
    );
  return { id: "items", title: "Items and how they were matched", blocks };
}
