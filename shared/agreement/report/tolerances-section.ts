import type { ReportSection } from "#shared/agreement/report/report-data.ts";
import type { ReportInput } from "#shared/agreement/report/report-input.ts";
import { TableOf, text } from "#shared/agreement/report/report-text.ts";

/** The main results at half, once and twice the matching tolerance. */
export function tolerancesSection({ found }: ReportInput): ReportSection {
  const results = found.items.atTolerances;
  const columns = results.map(({ toleranceMm, nodeToleranceMm }) => `${toleranceMm} mm (nodes ${nodeToleranceMm} mm)`);
  const table = new TableOf("Results at three matching tolerances", [{ name: "result", words: true }, ...columns]);
  const sum = (rows: readonly { matched: number; union: number }[]) =>
    `${rows.reduce((s, { matched }) => s + matched, 0)} of ${rows.reduce((s, { union }) => s + union, 0)}`;
  table.row("strands matched by all", ...results.map(({ strands }) => sum(strands)));
  table.row("nodes matched by all", ...results.map(({ nodes }) => sum(nodes)));
  table.row(
    "positive agreement on strands",
    ...results.map(({ positiveAgreement, reasons }) => table.number(positiveAgreement, 3, reasons.positiveAgreement)),
  );
  for (const { quantity } of results[0]?.quantities ?? []) {
    const at = results.map(({ quantities }) => quantities.find((one) => one.quantity === quantity)!);
    table.row(
      `${quantity}: ICC(A,1) (complete rows)`,
      ...at.map(({ iccA1, completeRows, reasons }) => `${table.number(iccA1, 3, reasons.iccA1)} (${completeRows})`),
    );
  }
  return {
    id: "tolerances",
    title: "The same at three tolerances",
    blocks: [
      text(
        "The tolerance settles what counts as the same item. Where a result changes much with it, the result is about the tolerance as much as about the annotators. A wider tolerance also lets worse matches into the numbers on matched items.",
      ),
      table.table,
    ],
  };
}
