import type { Equivalence } from "#shared/agreement/equivalence.ts";
import type { ReportBlock, ReportSection } from "#shared/agreement/report/report-data.ts";
import type { ReportInput } from "#shared/agreement/report/report-input.ts";
import { fixed, TableOf, text } from "#shared/agreement/report/report-text.ts";

/** A computed method held against the annotators, with what has to be refused. */
export function methodSection({ found }: ReportInput): ReportSection {
  const title = "A method against the annotators";
  const { method } = found;
  if (!method) {
    const why = found.reasons.method ?? "No pass was named as a method's.";
    return { id: "method", title, blocks: [text(`${why} Nothing is said of any method.`, "refusal")] };
  }
  const { distances, squared, perSpecimen } = method;
  const blocks: ReportBlock[] = [
    text(
      `On each specimen, D is the mean distance of ${method.method} from the annotators minus the mean distance of the annotators from each other (centrelines, first passes, mean of the two directed means). D near 0: the method differs from annotators no more than they differ from each other. No annotator is the truth, and the mean of the annotators does not enter.`,
      "quiet",
    ),
  ];
  const rows = new TableOf("Each specimen (mm)", [
    { name: "specimen", words: true },
    "method \u2212 annotator",
    "annotator \u2212 annotator",
    "D",
  ]);
  for (const { specimen, methodAnnotator, annotatorAnnotator } of perSpecimen)
    rows.row(specimen, fixed(methodAnnotator, 3), fixed(annotatorAnnotator, 3), fixed(methodAnnotator - annotatorAnnotator, 3));
  if (!rows.isEmpty) blocks.push(rows.table);
  const table = new TableOf(`Over ${distances.specimens} specimens`, [
    { name: "on", words: true },
    "method\u2013annotator",
    "annotator\u2013annotator",
    "difference",
    "95 % interval",
    "one-sided 95 % upper bound",
    "ratio",
  ]);
  const row = (name: string, one: Equivalence) => {
    table.row(
      name,
      table.of(one, "methodAnnotator", 3),
      table.of(one, "annotatorAnnotator", 3),
      table.of(one, "difference", 3),
      table.interval(one.interval, 3, one.reasons.interval),
      table.of(one, "upperBound", 3),
      table.of(one, "ratio", 3),
    );
  };
  row("distances (mm): D", distances);
  row("squared distances (mm\u00b2): gamma", squared);
  table.note(
    "Ratio: annotator\u2013annotator over method\u2013annotator; on squared distances it is the coefficient of individual agreement.",
  );
  blocks.push(table.table);
  if (distances.verdict === null) blocks.push(text(distances.reasons.verdict ?? "No verdict can be given.", "refusal"));
  else
    blocks.push(
      text(
        distances.verdict === "equivalent"
          ? `Equivalent within the margin of ${distances.margin} mm that was set beforehand: the upper bound of D lies below it.`
          : `Not shown to be equivalent: the upper bound of D does not lie below the margin of ${distances.margin} mm that was set beforehand. That is not the same as showing a difference.`,
      ),
    );
  blocks.push(...distances.notes.map((note) => text(note, "refusal")));
  return { id: "method", title, blocks };
}
