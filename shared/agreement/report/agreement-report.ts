import { aboutSection, passesSection } from "#shared/agreement/report/about-section.ts";
import { continuousSection } from "#shared/agreement/report/continuous-section.ts";
import { detectionSection } from "#shared/agreement/report/detection-section.ts";
import { effortSection } from "#shared/agreement/report/effort-section.ts";
import { grrasSection } from "#shared/agreement/report/grras-section.ts";
import { itemsSection } from "#shared/agreement/report/items-section.ts";
import { labelsSection } from "#shared/agreement/report/labels-section.ts";
import { limitsSection } from "#shared/agreement/report/limits-section.ts";
import { methodSection } from "#shared/agreement/report/method-section.ts";
import { methodsSection } from "#shared/agreement/report/methods-section.ts";
import { ownSection } from "#shared/agreement/report/own-section.ts";
import { pairwiseSection } from "#shared/agreement/report/pairwise-section.ts";
import { placesSection } from "#shared/agreement/report/places-section.ts";
import type { AgreementReport, ReportContext } from "#shared/agreement/report/report-data.ts";
import type { ReportInput } from "#shared/agreement/report/report-input.ts";
import { spreadOf } from "#shared/agreement/report/spread.ts";
import { spreadSection } from "#shared/agreement/report/spread-section.ts";
import { tolerancesSection } from "#shared/agreement/report/tolerances-section.ts";
import { totalsSection } from "#shared/agreement/report/totals-section.ts";
import { itemsAt } from "#shared/agreement/study/study.ts";
import { quantitiesOf } from "#shared/agreement/study/study-quantities.ts";

/** What a report knows of a study whose passes are tree files alone. */
export function contextOfFiles(software: ReportContext["software"], madeAt: string | null): ReportContext {
  return {
    title: null,
    software,
    madeAt,
    protocol: null,
    blinding: null,
    sampleSize: null,
    annotators: null,
    effort: null,
    idleSeconds: null,
  };
}

/** The report on a study as sections of text, tables and drawings, totals first; every number with what it rests on. */
export function agreementReport(input: ReportInput): AgreementReport {
  const { study, options, context, found } = input;
  const { annotators, specimens } = study;
  const { tolerance, merge } = options.compare;
  const items = specimens.map((specimen) => itemsAt(specimen, tolerance, merge));
  const spreads = specimens.map((specimen, s) => spreadOf(specimen, items[s]!));
  return {
    title: context.title ?? "How far annotators agree on chordae tendineae",
    subtitle: `${counted(specimens.length, "specimen")}, ${counted(annotators.length, "annotator")}, ${counted(found.passes.length, "pass", "passes")}`,
    sections: [
      aboutSection(input),
      passesSection(input),
      totalsSection(input),
      itemsSection(input),
      detectionSection(input),
      pairwiseSection(input),
      continuousSection(input, quantitiesOf(study, items)),
      placesSection(input),
      labelsSection(input),
      spreadSection(input, spreads),
      ownSection(input),
      effortSection(input),
      methodSection(input),
      tolerancesSection(input),
      limitsSection(input),
      grrasSection(input),
      methodsSection(input),
    ],
    spread: spreads.flatMap(({ strands }) => strands),
  };
}

function counted(count: number, one: string, many = `${one}s`): string {
  return `${count} ${count === 1 ? one : many}`;
}
