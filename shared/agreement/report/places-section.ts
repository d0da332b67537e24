import type { ReportSection } from "#shared/agreement/report/report-data.ts";
import type { ReportInput } from "#shared/agreement/report/report-input.ts";
import { fixed, TableOf, text } from "#shared/agreement/report/report-text.ts";

/** How far apart annotators place the same nodes. */
export function placesSection({ found }: ReportInput): ReportSection {
  const table = new TableOf("Places of nodes that two annotators or more marked, first passes (mm)", [
    { name: "node", words: true },
    "items",
    "RMS distance of two annotators",
    "SD along x",
    "SD along y",
    "SD along z",
  ]);
  for (const { type, items, rmsDistance, sdPerAxis, reasons } of found.nodePlaces)
    table.row(
      type,
      String(items),
      table.number(rmsDistance, 3, reasons.rmsDistance),
      ...[0, 1, 2].map((axis) => (sdPerAxis ? fixed(sdPerAxis[axis]!, 3) : table.number(null, 3, reasons.sdPerAxis))),
    );
  return {
    id: "places",
    title: "Places of origins, forks and ends",
    blocks: [
      text(
        "A place has no intraclass correlation. The SD is about the mean place of the item, along the axes of the scan's frame; systematic differences between annotators enter it. Given that two annotators or more marked it; nodes farther apart than the tolerance are not the same item, so greater distances do not enter.",
      ),
      table.table,
    ],
  };
}
