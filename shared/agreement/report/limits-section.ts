import { ENOUGH_SPECIMENS, FEWEST_SPECIMENS } from "#shared/agreement/interval.ts";
import type { ReportSection } from "#shared/agreement/report/report-data.ts";
import type { ReportInput } from "#shared/agreement/report/report-input.ts";
import { text } from "#shared/agreement/report/report-text.ts";

/** What a reader may want to know and these passes cannot say, in one place. */
export function limitsSection({ study, found }: ReportInput): ReportSection {
  const [people, valves] = [study.annotators.length, study.specimens.length];
  const items = [
    "Which annotator is right. No tree is the truth here; two annotators can agree and both be wrong.",
    "How other annotators would do: intervals are for new specimens by these annotators.",
  ];
  if (people < 2) items.push("How far annotators differ from each other: there is only one.");
  if (!found.detection.rates.best)
    items.push(
      `Specificity, that is how seldom an annotator marks what is not there. ${found.detection.rates.reasons.specificity ?? ""}`.trim(),
    );
  if (valves < FEWEST_SPECIMENS)
    items.push(
      `Intervals for new specimens: they need ${FEWEST_SPECIMENS} specimens, and there ${valves === 1 ? "is 1" : `are ${valves}`}. Items of one valve are not independent of each other, so many items do not stand in for specimens.`,
    );
  else if (valves < ENOUGH_SPECIMENS) items.push(`Narrow intervals: ${valves} specimens give weak ones, and each is marked so.`);
  if (found.intra.length === 0)
    items.push("How far an annotator differs from the same annotator again: nobody did a specimen twice.");
  if (found.method && found.method.distances.verdict === null)
    items.push(`Whether the method is as good as an annotator. ${found.method.distances.reasons.verdict ?? ""}`.trim());
  items.push("What nobody drew. Strings that all annotators missed leave no trace in any of these numbers.");
  return {
    id: "limits",
    title: "What these passes cannot say",
    blocks: [text("Not known from these passes, and therefore not given:"), { kind: "list", items }],
  };
}
